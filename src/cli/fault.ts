import type { Problem } from '../index.js';

/** What the process ends with. */
export const exit = {
  done: 0,
  failedCheck: 1,
  badInput: 2,
  infeasible: 3,
  file: 4,
  defect: 5,
  interrupted: 130,
} as const;

/** The command line itself is wrong (exit code 2). */
export class UsageError extends Error {
  constructor(readonly lines: readonly string[]) {
    super(lines.join('\n'));
    this.name = 'UsageError';
  }
}

/** A file could not be read or written (exit code 4). */
export class FileError extends Error {
  /** Why, in words. */
  readonly reason: string;

  constructor(
    readonly path: string,
    readonly deed: 'read' | 'written',
    cause: unknown,
  ) {
    const why = reason(cause);
    super(`${path} could not be ${deed}: ${why}`, { cause });
    this.reason = why;
    this.name = 'FileError';
  }
}

const reasons: Readonly<Record<string, string>> = {
  ENOENT: 'no such file or folder',
  EACCES: 'permission denied',
  EPERM: 'permission denied',
  EISDIR: 'it is a folder',
  ENOTDIR: 'a part of its path is no folder',
  EEXIST: 'a part of its path is no folder',
  ENOSPC: 'no space left',
  EFBIG: 'it is larger than a file may be here',
  EDQUOT: 'the quota is used up',
  EROFS: 'the file system is read-only',
  ENAMETOOLONG: 'its name is too long',
  ELOOP: 'its links run in a circle',
  EMFILE: 'too many files are open',
  EIO: 'the device failed',
};

function reason(cause: unknown): string {
  if (!(cause instanceof Error)) return String(cause);
  const code = 'code' in cause && typeof cause.code === 'string' ? cause.code : undefined;
  if (code === undefined) return cause.message;
  const words = reasons[code];
  return words === undefined ? code : `${words} (${code})`;
}

/** Said where the memory does not suffice, and what would. */
export const outOfMemory = [
  'steelyard: impossible as asked: the memory that Node may take does not suffice',
  '  Give it more, as in: NODE_OPTIONS=--max-old-space-size=16000 steelyard ...',
] as const;

/** What the engine throws for something larger than it can hold. */
export const isOutOfMemory = (error: unknown): boolean =>
  error instanceof RangeError &&
  /^(Array buffer allocation failed|Invalid string length|(Map|Set) maximum size exceeded)/.test(error.message);

// Control characters, and the marks that turn the direction of text or break a line, would let a file's content write on the terminal.
const hostile = /[\p{Cc}\p{Cf}\p{Zl}\p{Zp}\p{Cs}]/gu;

/** Text of a stranger on one line: whatever does not print stands there as its code. */
export const shown = (text: string): string =>
  text.replace(hostile, (character) => `\\u{${(character.codePointAt(0) ?? 0).toString(16)}}`);

/** `FILE:LINE:COLUMN /pointer: found X; wanted Y`, the parts that are known. */
export function problemLine(problem: Problem): string {
  const place = [problem.file, problem.line, problem.column].filter((part) => part !== undefined).join(':');
  const where = [place, problem.pointer].filter((part) => part !== '').join(' ');
  return shown(`${where === '' ? 'input' : where}: found ${problem.found}; wanted ${problem.wanted}`);
}
