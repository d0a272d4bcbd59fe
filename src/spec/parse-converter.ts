import type { Result } from '../core/problem.js';
import type { Converter } from './converter.js';
import { integer, record } from './loose.js';
import { read } from './read.js';
import type { Report } from './report.js';

function check(value: unknown, report: Report): void {
  const { samples: given, limits } = record(value);
  const samples = integer(given);
  if (samples !== undefined && samples > 0 && (samples & (samples - 1)) !== 0)
    report.add('/samples', String(samples), 'a power of two: the spectrum of a record needs it');
  if (record(limits).yield === 1)
    report.add('/limits/yield', '1', 'less than 1: no share of what is made is all of it');
}

/** Reads a converter file (`steelyard/converter`). */
export function parseConverter(text: string, file: string): Result<Converter> {
  return read('converter', { text, file }, { refusals: () => [], check });
}
