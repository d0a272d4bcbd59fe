import { InputError } from '../index.js';
import { FileError } from './fault.js';
import type { Io } from './io.js';

const limitMiB = 128;
const limit = limitMiB * 2 ** 20;

const refuse = (file: string, found: string, wanted: string, line?: number): never => {
  throw new InputError([{ file, pointer: '', found, wanted, ...(line === undefined ? {} : { line }) }]);
};

const decoder = new TextDecoder('utf-8', { fatal: true });

function isUtf8(bytes: Uint8Array): boolean {
  try {
    decoder.decode(bytes);
    return true;
  } catch {
    return false;
  }
}

// A line feed is no part of a longer UTF-8 sequence, so each line can be judged alone.
function firstBadLine(bytes: Uint8Array): number {
  let start = 0;
  for (let line = 1; ; line++) {
    const end = bytes.indexOf(10, start);
    if (end < 0 || !isUtf8(bytes.subarray(start, end))) return line;
    start = end + 1;
  }
}

/**
 * A file's text.
 * @throws FileError if it cannot be read, InputError if it is too large or no UTF-8 (a byte order mark may stand before it).
 */
export async function readText(io: Io, path: string): Promise<string> {
  let bytes: Uint8Array;
  try {
    bytes = await io.readFile(path, limit + 1);
  } catch (cause) {
    throw new FileError(path, 'read', cause);
  }
  if (bytes.length > limit) refuse(path, `more than ${limitMiB} MiB`, `a file of ${limitMiB} MiB at most`);
  const mark = ((bytes[0] ?? 0) << 8) | (bytes[1] ?? 0);
  if (mark === 0xfffe || mark === 0xfeff) refuse(path, 'text in UTF-16', 'JSON text in UTF-8');
  if (!isUtf8(bytes)) refuse(path, 'bytes that are no UTF-8', 'JSON text in UTF-8', firstBadLine(bytes));
  return decoder.decode(bytes);
}

/** Runs what knows no files on the content of one: problems that it reports are the file's. */
export function inFile<T>(file: string, action: () => T): T {
  try {
    return action();
  } catch (error) {
    if (!(error instanceof InputError) || file === '') throw error;
    throw new InputError(error.problems.map((problem) => ({ file, ...problem })));
  }
}

// What is longer is not worth parsing a second time to learn its kind.
const longestParsed = 2 ** 23;

function parsedFormat(text: string): unknown {
  const value: unknown = JSON.parse(text);
  return typeof value === 'object' && value !== null && 'format' in value ? value.format : undefined;
}

const firstFormat = (text: string): string | undefined => /"format"\s*:\s*"([^"]*)"/.exec(text)?.[1];

/**
 * What a file says it is: the part of its top-level `format` after "steelyard/". Text that does not parse, or is very long, is judged by
 * the first format in it.
 */
export function formatOf(text: string): string | undefined {
  let format: unknown;
  try {
    format = text.length > longestParsed ? firstFormat(text) : parsedFormat(text);
  } catch {
    format = firstFormat(text);
  }
  return typeof format === 'string' && format.startsWith('steelyard/') ? format.slice('steelyard/'.length) : undefined;
}
