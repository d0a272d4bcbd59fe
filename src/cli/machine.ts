import { statSync } from 'node:fs';
import { open, readdir } from 'node:fs/promises';
import { availableParallelism } from 'node:os';
import { fileURLToPath } from 'node:url';
import { Worker } from 'node:worker_threads';
import { FileError } from './fault.js';
import type { Bar, Io, Thread, ThreadListener } from './io.js';
import { writeSet } from './write-set.js';

async function readFile(path: string, limit: number): Promise<Uint8Array> {
  const file = await open(path, 'r');
  try {
    const pieces: Uint8Array[] = [];
    let size = 0;
    while (size < limit) {
      const piece = new Uint8Array(Math.min(limit - size, 1 << 20));
      const { bytesRead } = await file.read(piece, 0, piece.length);
      if (bytesRead === 0) break;
      pieces.push(piece.subarray(0, bytesRead));
      size += bytesRead;
    }
    return Buffer.concat(pieces, size);
  } finally {
    await file.close();
  }
}

function identity(path: string): string | undefined {
  try {
    const { dev, ino } = statSync(path, { bigint: true });
    return `${dev}:${ino}`;
  } catch {
    return undefined;
  }
}

function isSameFile(a: string, b: string): boolean {
  const first = identity(a);
  return first !== undefined && first === identity(b);
}

/** Resolves when the text is out, or when nobody reads any more. */
function put(stream: NodeJS.WriteStream, name: string, text: string): Promise<void> {
  return new Promise((resolve, reject) => {
    stream.write(text, (error) => {
      if (!(error instanceof Error) || ('code' in error && error.code === 'EPIPE')) resolve();
      else reject(new FileError(name, 'written', error));
    });
  });
}

async function progressBar(label: string): Promise<Bar> {
  const { SingleBar } = (await import('cli-progress')).default;
  const bar = new SingleBar({
    format: `${label} [{bar}] {percentage} %`,
    stream: process.stderr,
    hideCursor: true,
    clearOnComplete: true,
    // Ctrl-C is ours to answer.
    gracefulExit: false,
  });
  bar.start(100, 0);
  return { update: (share) => bar.update(Math.floor(100 * share)), stop: () => bar.stop() };
}

/** Calls `handler` at the first Ctrl-C; to the next one the system's own answer stands: the end. */
export function onInterrupt(handler: () => void): void {
  process.once('SIGINT', handler);
}

const deadly = ['SIGINT', 'SIGTERM', 'SIGHUP'] as const;
const nothing = () => undefined;

/** Whoever asks us to end meanwhile waits for the few milliseconds of the renaming. */
function undisturbed<T>(action: () => T): T {
  for (const signal of deadly) process.on(signal, nothing);
  try {
    return action();
  } finally {
    for (const signal of deadly) process.removeListener(signal, nothing);
  }
}

function startThread({ heard, died }: ThreadListener): Thread {
  const worker = new Worker(new URL('./search-thread.js', import.meta.url));
  let over = false;
  const fail = (reason: string) => {
    if (!over) died(reason);
    over = true;
  };
  worker.on('message', heard);
  worker.on('error', (error: unknown) => fail(error instanceof Error ? error.message : String(error)));
  worker.on('exit', (code) => fail(`exit code ${code}`));
  return {
    give: (message) => worker.postMessage(message),
    end: () => {
      over = true;
      void worker.terminate();
    },
  };
}

/** What of the machine is the same in every thread. */
export const onDisk = {
  readFile,
  listFolder: (path: string) => readdir(path),
  isSameFile,
  breath: (): Promise<void> => new Promise((resolve) => setImmediate(resolve)),
  now: () => performance.now(),
  cores: availableParallelism(),
  startThread,
  root: fileURLToPath(new URL('../../', import.meta.url)),
};

/** The process that we are, as its main thread has it. */
export function machine(): Io {
  const { env, stdout, stderr } = process;
  // A failed write reaches its own callback; without a listener the stream would end the process besides.
  for (const stream of [stdout, stderr]) stream.on('error', () => undefined);
  return {
    ...onDisk,
    writeFiles: (files, stale) => undisturbed(() => writeSet(files, stale)),
    keep: nothing,
    stdout: (text) => put(stdout, 'standard output', text),
    stderr: (text) => put(stderr, 'standard error', text),
    stdoutIsTerminal: stdout.isTTY,
    stderrIsTerminal: stderr.isTTY,
    columns: stdout.isTTY && stdout.columns > 0 ? stdout.columns : 80,
    // isTTY is there only where it is true.
    colour: (env.NO_COLOR ?? '') === '' && env.TERM !== 'dumb' && ((env.FORCE_COLOR ?? '') !== '' || 'isTTY' in stdout),
    progressBar,
  };
}
