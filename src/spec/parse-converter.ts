import type { Result } from '../core/problem.js';
import type { Converter } from './converter.js';
import { integer, record } from './loose.js';
import { checkLimits } from './parse-array.js';
import { read } from './read.js';
import type { Report } from './report.js';

function check(value: unknown, report: Report): void {
  const { samples: given, limits } = record(value);
  const samples = integer(given);
  if (samples !== undefined && samples > 0 && (samples & (samples - 1)) !== 0)
    report.add('/samples', String(samples), 'a power of two: the spectrum of a record needs it');
  checkLimits(limits, report, '/limits');
}

/** Reads a converter file (`steelyard/converter`). */
export function parseConverter(text: string, file: string): Result<Converter> {
  return read('converter', { text, file }, { refusals: () => [], check });
}
