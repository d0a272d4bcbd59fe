import { readFile, readdir } from 'node:fs/promises';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { FileError } from '../../src/cli/fault.js';
import type { Bar, Io, OutputFile } from '../../src/cli/io.js';
import { run } from '../../src/cli/run.js';

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
  #handler: (() => void) | undefined;

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

  readonly writeFiles = (files: readonly OutputFile[]): void => {
    for (const { path } of files) {
      const code = this.broken.get(path);
      if (code !== undefined) throw new FileError(path, 'written', Object.assign(new Error(code), { code }));
    }
    this.written.push(files);
    for (const { path, content } of files) this.put(path, content);
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

  readonly onInterrupt = (handler: () => void): (() => void) => {
    this.#handler = handler;
    return () => {
      this.#handler = undefined;
    };
  };

  breath = (): Promise<void> => {
    if (++this.#breaths === this.interruptAtBreath) this.#handler?.();
    return Promise.resolve();
  };

  readonly now = (): number => (this.#time += this.tick);

  /** Runs a command line given as one text, words parted by blanks. */
  run(line: string): Promise<number> {
    return run(
      line.split(' ').filter((word) => word !== ''),
      this,
    );
  }
}
