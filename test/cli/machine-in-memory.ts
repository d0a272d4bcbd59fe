import { readFile, readdir } from 'node:fs/promises';
import { setImmediate } from 'node:timers/promises';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { FileError } from '../../src/cli/fault.js';
import type { Bar, Io, OutputFile, Rescue, Thread, ThreadListener, ToSearch } from '../../src/cli/io.js';
import { interrupted } from '../../src/cli/interrupted.js';
import { reporting, run } from '../../src/cli/run.js';
import { beginStart } from '../../src/index.js';

const root = fileURLToPath(new URL('../../', import.meta.url));
const missing = (path: string) => Object.assign(new Error(`no ${path}`), { code: 'ENOENT' });

/** A machine whose disk is a map; only the package's own files come from the real one. */
export class MachineInMemory implements Io {
  readonly files = new Map<string, Uint8Array>();
  /** Each set of files as it was written. */
  readonly written: (readonly OutputFile[])[] = [];
  /** Paths that cannot be read or written, and the system's code for it. */
  readonly broken = new Map<string, string>();
  out = '';
  err = '';
  stdoutIsTerminal = false;
  stderrIsTerminal = false;
  columns = 80;
  cores = 1;
  colour = false;
  /** What the next look at the signals brings; counted in breaths. */
  interruptAtBreath = Infinity;
  /** Milliseconds that pass between two looks at the clock. */
  tick = 5;
  readonly shares: number[] = [];
  barStopped = false;
  readonly root = root;
  #breaths = 0;
  #time = 0;
  #interrupt: (() => void) | undefined;
  #rescue: Rescue | undefined;

  put(path: string, content: string | Uint8Array | object): this {
    const text = typeof content === 'string' || content instanceof Uint8Array ? content : JSON.stringify(content);
    this.files.set(join(path), typeof text === 'string' ? new TextEncoder().encode(text) : text);
    return this;
  }

  text(path: string): string {
    const bytes = this.files.get(path);
    if (bytes === undefined) throw new Error(`${path} is not there; there are ${[...this.files.keys()].join(', ')}`);
    return new TextDecoder().decode(bytes);
  }

  // eslint-disable-next-line @typescript-eslint/no-explicit-any
  json(path: string): any {
    return JSON.parse(this.text(path));
  }

  readonly readFile = async (path: string, limit: number): Promise<Uint8Array> => {
    if (path.startsWith(root)) return readFile(path);
    const code = this.broken.get(path);
    if (code !== undefined) throw Object.assign(new Error(code), { code });
    const bytes = this.files.get(join(path));
    if (bytes === undefined) throw missing(path);
    return bytes.subarray(0, limit);
  };

  readonly listFolder = (path: string): Promise<readonly string[]> => readdir(path);

  readonly isSameFile = (a: string, b: string): boolean => join(a) === join(b) && this.files.has(join(a));

  readonly writeFiles = (files: readonly OutputFile[], stale: readonly string[] = []): readonly string[] => {
    const removed = stale.filter((path) => this.files.has(join(path)));
    for (const path of [...files.map((file) => file.path), ...removed]) {
      const code = this.broken.get(path);
      if (code !== undefined) throw new FileError(path, 'written', Object.assign(new Error(code), { code }));
    }
    this.written.push(files);
    for (const { path, content } of files) this.put(path, content);
    for (const path of removed) this.files.delete(join(path));
    return removed;
  };

  readonly keep = (rescue: Rescue): void => {
    // It goes from thread to thread.
    this.#rescue = structuredClone(rescue);
  };

  readonly stdout = (text: string): Promise<void> => {
    this.out += text;
    return Promise.resolve();
  };

  readonly stderr = (text: string): Promise<void> => {
    this.err += text;
    return Promise.resolve();
  };

  readonly progressBar = (): Promise<Bar> =>
    Promise.resolve({
      update: (share) => this.shares.push(share),
      stop: () => {
        this.barStopped = true;
      },
    });

  // After Ctrl-C the work goes no further.
  breath = (): Promise<void> => {
    if (++this.#breaths !== this.interruptAtBreath) return Promise.resolve();
    this.#interrupt?.();
    return new Promise(() => undefined);
  };

  /** How many were started, and how many were ended again. */
  readonly threads = { started: 0, ended: 0 };
  /** A thread dies of this at its first message. */
  deadly: string | undefined;

  readonly startThread = ({ heard, died }: ThreadListener): Thread => {
    this.threads.started++;
    let last = 0;
    const run = async ({ number, job }: ToSearch): Promise<void> => {
      if (job === undefined) return;
      const start = beginStart(job);
      for (let done = start.done; number === last; done = start.done) {
        heard({ number, result: structuredClone(start.result()), done, progress: start.progress });
        if (done) return;
        start.step(50_000);
        await setImmediate();
      }
    };
    return {
      give: (message) => {
        last = message.number;
        void setImmediate().then(() => (this.deadly === undefined ? run(message) : died(this.deadly)));
      },
      end: () => {
        last = Infinity;
        this.threads.ended++;
      },
    };
  };

  readonly now = (): number => (this.#time += this.tick);

  runWords(argv: readonly string[]): Promise<number> {
    this.#rescue = undefined;
    const stopped = new Promise<void>((resolve) => {
      this.#interrupt = resolve;
    }).then(() => {
      this.barStopped = true;
      return reporting(this, false, () => interrupted(this, this.#rescue));
    });
    return Promise.race([run(argv, this), stopped]);
  }

  /** Runs a command line given as one text, words parted by blanks. */
  run(line: string): Promise<number> {
    return this.runWords(line.split(' ').filter((word) => word !== ''));
  }
}
