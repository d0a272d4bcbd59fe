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

export interface Io {
  /** At most `limit` bytes from the start of a file. Rejects with the system's error. */
  readFile(path: string, limit: number): Promise<Uint8Array>;
  /** Names of the files in a folder, in no particular order. */
  listFolder(path: string): Promise<readonly string[]>;
  /** Whether both paths lead to one existing file, whatever they are called. */
  isSameFile(a: string, b: string): boolean;
  /** Writes every file whole, or changes none and throws a FileError. */
  writeFiles(files: readonly OutputFile[]): void;
  /** A reader that closed the pipe is no error; anything else rejects. */
  stdout(text: string): Promise<void>;
  stderr(text: string): Promise<void>;
  readonly stdoutIsTerminal: boolean;
  readonly stderrIsTerminal: boolean;
  readonly columns: number;
  readonly colour: boolean;
  /** A bar on standard error; asked for only where that is a terminal. */
  progressBar(label: string): Promise<Bar>;
  /** Calls `handler` at the first Ctrl-C; the second one ends the process. Returns what takes the handler away again. */
  onInterrupt(handler: () => void): () => void;
  /** Lets pending signals in. */
  breath(): Promise<void>;
  /** Milliseconds from some start. */
  now(): number;
  /** The package's own folder, where package.json and templates/ lie. */
  readonly root: string;
}
