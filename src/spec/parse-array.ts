import type { Result } from '../core/problem.js';
import { nm } from '../core/units.js';
import type { ArraySpec } from './array-spec.js';
import { integer, items, real, record } from './loose.js';
import { mostCells, mostWeight, options } from './options.js';
import { read } from './read.js';
import type { Refusal } from './read.js';
import type { Report } from './report.js';
import { quoted, shown } from './words.js';

/** Coordinates are whole nanometres, and so is what they are made of. */
export function checkPitch(core: unknown, report: Report, at: string): void {
  items(record(core).pitch_um).forEach((pitch, axis) => {
    const length_um = real(pitch);
    if (length_um === undefined) return;
    try {
      nm(length_um);
    } catch {
      report.add(`${at}/pitch_um/${axis}`, `${length_um} um`, 'a whole number of nanometres: three decimals at most');
    }
  });
}

/** A list of switches has one for each bit. @param at where the drive stands. */
export function checkDrive(drive: unknown, bits: number, report: Report, at: string): void {
  const { switch_ohm } = record(drive);
  if (!Array.isArray(switch_ohm) || switch_ohm.length === bits) return;
  report.add(
    `${at}/switch_ohm`,
    `a list of ${switch_ohm.length}`,
    `one for each of the ${bits} bits, or one number for all`,
  );
}

/** What the shape of limits, of an array as of a converter, does not say. @param at where they stand. */
export function checkLimits(limits: unknown, report: Report, at: string): void {
  const { inl_lsb, dnl_lsb, yield: share } = record(limits);
  if (share === 1) report.add(`${at}/yield`, '1', 'less than 1: no share of what is made is all of it');
  if (share !== undefined && inl_lsb === undefined && dnl_lsb === undefined)
    report.add(`${at}`, '"yield" alone', '"inl_lsb", "dnl_lsb" or both beside it: what is counted');
}

/** What the shape of an array file, or of the array in a floorplan, does not say. */
export function checkArray(value: unknown, report: Report, at: string): void {
  const array = record(value);
  const given = ['bits', 'weights'].filter((key) => array[key] !== undefined);
  if (given.length === 2) report.add(`${at}/weights`, '"weights" beside "bits"', 'one of the two', 'key');
  if (given.length === 0) report.add(at, 'neither "bits" nor "weights"', 'one of the two');
  const total = items(array.weights).reduce<number>((sum, weight) => sum + (integer(weight) ?? 0), 0);
  if (total > mostWeight) report.add(`${at}/weights`, `weights of ${total} in all`, `${mostWeight} in all at most`);
  const core = record(array.core);
  checkPitch(core, report, `${at}/core`);
  checkLimits(array.limits, report, `${at}/limits`);
  const cells = (integer(core.rows) ?? 0) * (integer(core.columns) ?? 0);
  if (cells > mostCells) report.add(`${at}/core`, `a core of ${cells} cells`, `${mostCells} cells at most`);
}

/** What an array file asks for and this version has not. */
function refusals(value: unknown): Refusal[] {
  const array = record(value);
  return options.flatMap(({ key, available, works }): Refusal[] => {
    const given = array[key];
    if (given === undefined) return [];
    const pointer = `/${key}`;
    if (!available) {
      const wanted = `it left out: ${quoted(key)} is not available yet`;
      return [{ pointer, found: `key ${quoted(key)}`, wanted, place: 'key' }];
    }
    if (works === undefined || works.accepts(given)) return [];
    return [{ pointer, found: shown(given), wanted: works.wanted, place: 'value' }];
  });
}

/** Reads an array file (`steelyard/array`). Keys and values that a later version may bring are refused by name. */
export function parseArray(text: string, file: string): Result<ArraySpec> {
  return read('array', { text, file }, { refusals, check: (value, report) => checkArray(value, report, '') });
}
