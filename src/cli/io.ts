import type { Kept, StartJob, StartResult, Technology } from '../index.js';

/** All that the command line may touch of the machine. Injected, so that a test needs no process and no disk. */

export interface OutputFile {
  readonly path: string;
  readonly content: string | Uint8Array;
}

export interface Bar {
  /** Shows a share of 0 to 1. */
  update(share: number): void;
  stop(): void;
}

/** What Ctrl-C leaves of a run: its best placement so far, and how that was to be delivered. Plain data. */
export interface Rescue {
  readonly kept: Kept;
  /** Where several floorplans were asked for: those there are, `kept` the first of them. */
  readonly candidates?: { readonly name: string; readonly asked: number; readonly kept: readonly Kept[] };
  readonly technology: Technology;
  /** Default: a folder of the array's name. */
  readonly folder?: string;
  readonly json: boolean;
  /** Files that the run has read, and that nothing may be written over. */
  readonly inputs: readonly string[];
}

/** To a thread that runs starts of a search: the job takes the place of the one before it, without one the thread rests. */
export interface ToSearch {
  readonly number: number;
  readonly job?: StartJob;
}

/** From it: what the job of that number has come to so far, or at its end. */
export interface FromSearch {
  readonly number: number;
  readonly result: StartResult;
  readonly done: boolean;
  /** 0 to 1. */
  readonly progress: number;
}

export interface Thread {
  give(message: ToSearch): void;
  end(): void;
}

export interface ThreadListener {
  readonly heard: (message: FromSearch) => void;
  /** It has ended without being told to. */
  readonly died: (reason: string) => void;
}

export interface Io {
  /** At most `limit` bytes from the start of a file. Rejects with the system's error. */
  readFile(path: string, limit: number): Promise<Uint8Array>;
  /** Names of the files in a folder, in no particular order. */
  listFolder(path: string): Promise<readonly string[]>;
  /** Whether both paths lead to one existing file, whatever they are called. */
  isSameFile(a: string, b: string): boolean;
  /**
   * Writes every file whole, then removes those of `stale` that exist; or changes nothing and throws a FileError.
   * @returns the files removed
   */
  writeFiles(files: readonly OutputFile[], stale?: readonly string[]): readonly string[];
  /** Puts by what is to be saved if Ctrl-C comes from now on; it takes the place of what was put by before. */
  keep(rescue: Rescue): void;
  /** A reader that closed the pipe is no error; anything else rejects. */
  stdout(text: string): Promise<void>;
  stderr(text: string): Promise<void>;
  readonly stdoutIsTerminal: boolean;
  readonly stderrIsTerminal: boolean;
  readonly columns: number;
  readonly colour: boolean;
  /** A bar on standard error; asked for only where that is a terminal. */
  progressBar(label: string): Promise<Bar>;
  /** A pause between two pieces of long work. */
  breath(): Promise<void>;
  /** Threads that the machine runs side by side. */
  readonly cores: number;
  /** Starts a thread that runs starts of a search. */
  startThread(listener: ThreadListener): Thread;
  /** Milliseconds from some start. */
  now(): number;
  /** The package's own folder, where package.json and templates/ lie. */
  readonly root: string;
}
