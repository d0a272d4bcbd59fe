import type { Result } from '../core/problem.js';
import { placeKey } from './gradient-map.js';
import type { GradientMap, MapPoint } from './gradient-map.js';
import { Report } from './report.js';
import { quoted } from './words.js';

const header = ['x_um', 'y_um', 'ppm'];
const mostPoints = 100_000;
/** Coordinates of a block stay within it. */
const farthest_um = 33554;
const mostPpm = 999_999;

const isDecimal = (text: string): boolean => /^[+-]?(\d+\.?\d*|\.\d+)(e[+-]?\d{1,3})?$/i.test(text);

/** Cells of a line, each with its offset in the text; blanks around them are passed over. */
function cellsOf(line: string, start: number): { readonly text: string; readonly at: number }[] {
  let at = start;
  return line.split(',').map((raw) => {
    const cell = { text: raw.trim(), at: at + raw.length - raw.trimStart().length };
    at += raw.length + 1;
    return cell;
  });
}

/**
 * Reads a measured gradient map: CSV with the header `x_um,y_um,ppm` and a point a line, in any order; empty lines are passed over. Every
 * problem at once, with line and column; never throws for any text.
 */
export function parseGradientMap(csv: string, file: string): Result<GradientMap> {
  const text = csv.startsWith('\ufeff') ? csv.slice(1) : csv;
  const report = new Report({ text, file });
  const add = (at: number, found: string, wanted: string): void => report.add('', found, wanted, at);
  const points: MapPoint[] = [];
  const lineOf = new Map<string, number>();
  let headed = false;
  let start = 0;
  let number = 0;
  for (const line of text.split(/\r\n|\n|\r/)) {
    const from = start;
    number++;
    start += line.length + (text.startsWith('\r\n', start + line.length) ? 2 : 1);
    if (line.trim() === '') continue;
    const cells = cellsOf(line, from);
    if (!headed) {
      headed = true;
      if (cells.map((cell) => cell.text).join() !== header.join()) {
        add(from, quoted(line), `the header ${header.join()}`);
        break;
      }
      continue;
    }
    if (cells.length !== header.length) {
      add(from, `${cells.length} ${cells.length === 1 ? 'value' : 'values'}`, `three: ${header.join()}`);
      continue;
    }
    const [x_um, y_um, ppm] = cells.map(({ text: value, at }, i) => {
      const most = i < 2 ? farthest_um : mostPpm;
      const read = isDecimal(value) ? Number(value) : NaN;
      if (Math.abs(read) <= most) return read;
      add(at, value === '' ? 'nothing' : quoted(value), `${header[i]}: a number from -${most} to ${most}`);
      return NaN;
    });
    if (Number.isNaN(x_um + y_um + ppm)) continue;
    const place = placeKey(x_um, y_um);
    const before = lineOf.get(place);
    if (before !== undefined)
      add(from, `a point at ${x_um}, ${y_um} once more`, `each place once; it stands in line ${before}`);
    else lineOf.set(place, number);
    points.push({ x_um, y_um, ppm });
  }
  if (report.count === 0 && points.length === 0) add(0, 'no point', `the header ${header.join()} and a point a line`);
  if (points.length > mostPoints) add(0, `${points.length} points`, `${mostPoints} at most`);
  const issues = report.problems();
  return issues.length > 0 ? { ok: false, issues } : { ok: true, value: points };
}
