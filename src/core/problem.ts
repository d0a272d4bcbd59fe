/** Something wrong with an input. `found` and `wanted` complete the sentences "found ..." and "wanted ...". */
export interface Problem {
  /** JSON pointer into the file, "" for the file as a whole. */
  readonly pointer: string;
  readonly found: string;
  readonly wanted: string;
  readonly file?: string;
  /** 1-based. */
  readonly line?: number;
  /** 1-based, in UTF-16 units as editors count. */
  readonly column?: number;
}

export type Result<T> =
  { readonly ok: true; readonly value: T } | { readonly ok: false; readonly issues: readonly Problem[] };

/** Bad input or usage: every problem at once (exit code 2). */
export class InputError extends Error {
  constructor(readonly problems: readonly Problem[]) {
    super(problems.map((p) => `${p.pointer}: found ${p.found}, wanted ${p.wanted}`).join('\n'));
    this.name = 'InputError';
  }
}

/** Impossible as asked (exit code 3): which rule stands against it, and what would make it possible. */
export class Infeasible extends Error {
  constructor(
    readonly because: string,
    readonly remedy: string,
  ) {
    super(`${because} ${remedy}`);
    this.name = 'Infeasible';
  }
}
