import type { Result } from '../core/problem.js';
import type { Floorplan } from './floorplan.js';
import { integer, items, record, word } from './loose.js';
import { mostCells, mostRings, mostWeights } from './options.js';
import { checkArray, checkDrive, checkPitch } from './parse-array.js';
import { checkTechnology } from './parse-technology.js';
import { checkPinOrder } from './pins.js';
import { read } from './read.js';
import type { Report } from './report.js';
import { all, counted, meant, quoted } from './words.js';

const reserved = ['TOP', 'VSS'];

/** Checks a list of capacitors. @returns the names that cells may use */
export function checkCapacitors(value: unknown, report: Report, at: string): string[] {
  const holder = new Map<string, string>();
  let bits = 0;
  items(value).forEach((capacitor, i) => {
    const { name: given, role } = record(capacitor);
    if (role === 'bit') bits++;
    const name = word(given);
    if (name === undefined) return;
    const here = `${at}/${i}/name`;
    // Netlists take no notice of letter case.
    const folded = name.toUpperCase();
    const other = holder.get(folded);
    if (reserved.includes(folded)) report.add(here, quoted(name), `another name: ${folded} is a net of its own`);
    else if (other === name) report.add(here, `${quoted(name)} once more`, 'each capacitor once');
    else if (other !== undefined)
      report.add(here, quoted(name), `a name that differs from ${quoted(other)} in more than case`);
    else holder.set(folded, name);
  });
  if (bits === 0 && items(value).length > 0) report.add(at, 'no bit', 'one capacitor or more with "role": "bit"');
  if (bits > mostWeights) report.add(at, counted(bits, 'bit'), `${mostWeights} bits at most`);
  return [...holder.values()];
}

/** Counts the cells of each name; adds unknown names and rows that do not fit the core. */
function checkCells(
  floorplan: Readonly<Record<string, unknown>>,
  names: readonly string[],
  report: Report,
): Map<string, number> {
  const known = new Set(names);
  const count = new Map<string, number>();
  const core = record(floorplan.core);
  const rows = integer(core.rows);
  const columns = integer(core.columns);
  const lines = items(floorplan.cells);
  if (rows !== undefined && Array.isArray(floorplan.cells) && lines.length !== rows) {
    report.add('/cells', counted(lines.length, 'row'), `${rows}, as core.rows says`);
  }
  lines.forEach((line, r) => {
    if (columns !== undefined && Array.isArray(line) && line.length !== columns) {
      report.add(`/cells/${r}`, `a row of ${counted(line.length, 'cell')}`, `${columns}, as core.columns says`);
    }
    items(line).forEach((cell, c) => {
      const name = word(cell);
      if (name === undefined || name === '-') return;
      if (known.has(name)) count.set(name, (count.get(name) ?? 0) + 1);
      else report.add(`/cells/${r}/${c}`, quoted(name), () => meant(name, [...names, '-'], 'cell'));
    });
  });
  return count;
}

function checkRingUnits(
  floorplan: Readonly<Record<string, unknown>>,
  names: readonly string[],
  count: Map<string, number>,
  report: Report,
): void {
  const core = record(floorplan.core);
  const rows = integer(core.rows);
  const columns = integer(core.columns);
  const rings = integer(record(floorplan.array).rings) ?? mostRings;
  const taken = new Set<string>();
  items(floorplan.ringUnits).forEach((unit, i) => {
    const at = `/ringUnits/${i}`;
    const { capacitor, row: givenRow, column: givenColumn } = record(unit);
    const name = word(capacitor);
    if (name !== undefined && !names.includes(name))
      report.add(`${at}/capacitor`, quoted(name), () => meant(name, names, 'capacitor'));
    else if (name !== undefined) count.set(name, (count.get(name) ?? 0) + 1);
    const row = integer(givenRow);
    const column = integer(givenColumn);
    if (row === undefined || column === undefined || rows === undefined || columns === undefined) return;
    const found = `row ${row}, column ${column}`;
    const inCore = row >= 0 && row < rows && column >= 0 && column < columns;
    const beyond = row < -rings || row >= rows + rings || column < -rings || column >= columns + rings;
    if (inCore || beyond) {
      const sides = `row -1 is above, row ${rows} below, column -1 left, column ${columns} right of the core`;
      report.add(at, found, `a place in the ${rings === 1 ? 'ring' : `${rings} rings`}: ${sides}`);
    }
    if (taken.has(found)) report.add(at, `${found} once more`, 'one unit in each place');
    taken.add(found);
  });
}

/** Channels have sides and lists of tracks; under plates each column has its list of nets. */
function checkHookupPlan(value: unknown, report: Report): void {
  const plan = record(value);
  const given = ['sides', 'channels', 'columns'].filter((key) => plan[key] !== undefined);
  const under = given.includes('columns');
  if (under && given.length === 1) return;
  if (!under && given.length === 2) return;
  const found = given.length === 0 ? 'neither "columns" nor "sides" and "channels"' : all(given);
  report.add('/hookup', found, '"sides" and "channels", or "columns" alone for trunks under the plates');
}

function check(value: unknown, report: Report): void {
  const floorplan = record(value);
  const names = checkCapacitors(floorplan.capacitors, report, '/capacitors');
  const core = record(floorplan.core);
  checkPitch(core, report, '/core');
  const cells = (integer(core.rows) ?? 0) * (integer(core.columns) ?? 0);
  if (cells > mostCells) report.add('/core', `a core of ${cells} cells`, `${mostCells} cells at most`);
  const count = checkCells(floorplan, names, report);
  checkRingUnits(floorplan, names, count, report);
  items(floorplan.capacitors).forEach((capacitor, i) => {
    const { name: given, units } = record(capacitor);
    const name = word(given);
    if (name === undefined || integer(units) === undefined) return;
    const placed = count.get(name) ?? 0;
    if (placed === units || !names.includes(name)) return;
    report.add(
      `/capacitors/${i}/units`,
      `${units as number} for ${quoted(name)}`,
      `${placed}, as many as are placed, or other cells`,
    );
  });
  if (floorplan.hookup !== undefined) checkHookupPlan(floorplan.hookup, report);
  if (floorplan.array !== undefined) {
    checkArray(floorplan.array, report, '/array');
    const capacitors = items(floorplan.capacitors).map((capacitor) => {
      const { name, role } = record(capacitor);
      return { name: word(name) ?? '', role: word(role) ?? '' };
    });
    const bits = capacitors.filter(({ role }) => role === 'bit').length;
    checkDrive(record(floorplan.array).drive, bits, report, '/array/drive');
    checkPinOrder(record(floorplan.array).pins, capacitors, report, '/array/pins');
  }
  if (floorplan.technology !== undefined) checkTechnology(floorplan.technology, report, '/technology');
}

/**
 * Reads a floorplan (`steelyard/floorplan`), also one written by hand: of its contents only core, capacitors and cells are required.
 * A hookup that no longer fits the cells is no problem of the file.
 */
export function parseFloorplan(text: string, file: string): Result<Floorplan> {
  return read('floorplan', { text, file }, { refusals: () => [], check });
}
