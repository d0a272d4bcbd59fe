import { statSync } from 'node:fs';
import { open, readdir } from 'node:fs/promises';
import { fileURLToPath } from 'node:url';
import { FileError } from './fault.js';
import type { Bar, Io } from './io.js';
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

/** While a handler listens Ctrl-C is its own; before and after that the system's answer stands: the end. */
function onInterrupt(handler: () => void): () => void {
  const release = () => {
    process.removeListener('SIGINT', once);
  };
  const once = () => {
    release();
    handler();
  };
  process.on('SIGINT', once);
  return release;
}

/** The process that we are. */
export function machine(): Io {
  const { env, stdout, stderr } = process;
  // A failed write reaches its own callback; without a listener the stream would end the process besides.
  for (const stream of [stdout, stderr]) stream.on('error', () => undefined);
  return {
    readFile,
    listFolder: (path) => readdir(path),
    isSameFile,
    writeFiles: (files) => {
      // A Ctrl-C that comes now waits for the few milliseconds of the renaming.
      const release = onInterrupt(() => undefined);
      try {
        writeSet(files);
      } finally {
        release();
      }
    },
    stdout: (text) => put(stdout, 'standard output', text),
    stderr: (text) => put(stderr, 'standard error', text),
    stdoutIsTerminal: stdout.isTTY,
    stderrIsTerminal: stderr.isTTY,
    columns: stdout.isTTY && stdout.columns > 0 ? stdout.columns : 80,
    colour: (env.NO_COLOR ?? '') === '' && env.TERM !== 'dumb' && ((env.FORCE_COLOR ?? '') !== '' || stdout.isTTY),
    progressBar,
    onInterrupt,
    breath: () => new Promise((resolve) => setImmediate(resolve)),
    now: () => performance.now(),
    root: fileURLToPath(new URL('../../', import.meta.url)),
  };
}
