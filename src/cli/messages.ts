import type { OutputFile, Rescue } from './io.js';

/** What the two threads of the tool say to each other: the one that works, and the one that holds signals, terminal and files. */

/** What the working thread has to know of the machine from its beginning. */
export interface Surroundings {
  readonly stdoutIsTerminal: boolean;
  readonly stderrIsTerminal: boolean;
  readonly columns: number;
  readonly colour: boolean;
}

/** A failure of a file or a stream, as plain data. */
export interface FileFault {
  readonly path: string;
  readonly deed: 'read' | 'written';
  readonly reason: string;
}

export type FromWork =
  | { readonly kind: 'text'; readonly id: number; readonly to: 'stdout' | 'stderr'; readonly text: string }
  | { readonly kind: 'bar'; readonly id: number; readonly label: string }
  | { readonly kind: 'share'; readonly share: number }
  | { readonly kind: 'bar-stop' }
  | { readonly kind: 'keep'; readonly rescue: Rescue }
  /** `gate` opens when the answer lies at the port of answers: the working thread stands still until then. */
  | {
      readonly kind: 'write';
      readonly files: readonly OutputFile[];
      readonly stale: readonly string[];
      readonly gate: Int32Array;
    }
  | { readonly kind: 'end'; readonly code: number };

/** The answer to a text or a bar, by its number. */
export interface Answer {
  readonly id: number;
  readonly fault?: FileFault;
}

/** The answer to a set of files. */
export interface Written {
  readonly removed: readonly string[];
  readonly fault?: FileFault;
}
