import type { Conductors } from './conductors.js';
import { extension } from './shade.js';

/** A stretch of the drawing, seen along y, in which all that is cut is the same from end to end. */
export interface Slice {
  readonly y0: number;
  readonly y1: number;
  /** Which conductor (or -1) fills each place, [level * places + place]; valid until the next slice. */
  readonly owner: Int32Array;
}

/** Conductors that are seen along y: as they are, or with x and y exchanged. */
export interface Seen extends Conductors {
  /** What units repeat after. Narrower gaps between two of them than half of it are closed. */
  readonly pitch: number;
}

type Kind = 0 | 1 | 2;
const DRAWN: Kind = 0;
const CLOSED: Kind = 1;
const SHADED: Kind = 2;

/** One place of a level from the lowest up: what fills it from where to where, and why. */
interface Run {
  readonly y0: number;
  readonly y1: number;
  readonly owner: number;
  readonly kind: Kind;
}

/** Ends of shades are rounded to this, nm: slices that differ by less are not worth a field of their own. */
const ROUNDING = 10;

/**
 * Cuts a window of a drawing across, at all heights y from `from` to `to`, and gives the slices in which the cut does not change.
 *
 * Gaps along y are closed or narrowed as `extension` says, those between the plates of two rows always: what passes there is counted by
 * the sections along the columns. What is filled so never touches another net, and shades keep the level's spacing from others.
 *
 * @param lines ascending places' edges; each conductor of the window has its sides on them, or beyond the first and last.
 * @param members the conductors that reach into the window.
 */
export function eachSlice(
  seen: Seen,
  members: readonly number[],
  lines: readonly number[],
  [from, to]: readonly [number, number],
  visit: (slice: Slice) => void,
): void {
  const { levels } = seen;
  const { columns, columnOf } = columnsOf(seen, members, lines);
  const heights = new Set([from, to]);
  for (const { runs } of columns)
    for (const { y0, y1 } of runs) {
      if (y0 > from && y0 < to) heights.add(y0);
      if (y1 > from && y1 < to) heights.add(y1);
    }
  const ys = Int32Array.from(heights).sort();
  const owner = new Int32Array(columnOf.length).fill(-1);
  const kind = new Uint8Array(columnOf.length);
  const shown = new Int32Array(columnOf.length).fill(-1);
  const now = new Int32Array(columnOf.length);
  let since = from;
  for (let s = 0; s + 1 < ys.length; s++) {
    const y = ys[s];
    let changed = s === 0;
    for (const column of columns) {
      const { runs } = column;
      while (column.next < runs.length && runs[column.next].y1 <= y) column.next++;
      const run = runs[column.next] as Run | undefined;
      const here = run !== undefined && run.y0 <= y ? run : undefined;
      if (here === column.run) continue;
      column.run = here;
      changed = true;
    }
    if (!changed) continue;
    let filled = false;
    for (let c = 0; c < columnOf.length; c++) {
      const { run } = columns[columnOf[c]];
      owner[c] = run === undefined ? -1 : run.owner;
      kind[c] = run === undefined ? DRAWN : run.kind;
      filled ||= kind[c] !== DRAWN;
    }
    now.set(owner);
    if (filled) for (let l = 0; l < levels.length; l++) keepApart(seen, lines, l, owner, kind, now);
    if (y > since) {
      if (now.every((value, c) => value === shown[c])) continue;
      visit({ y0: since, y1: y, owner: shown });
    }
    shown.set(now);
    since = y;
  }
  if (to > since) visit({ y0: since, y1: to, owner: shown });
}

/** What fills a place of a level along y, and how far a sweep has come. Places with the same conductors share one. */
interface Column {
  readonly runs: readonly Run[];
  next: number;
  run: Run | undefined;
}

/** The columns of a window, and which one each place [level * places + place] has. */
function columnsOf(
  seen: Seen,
  members: readonly number[],
  lines: readonly number[],
): { readonly columns: Column[]; readonly columnOf: Int32Array } {
  const { box, level, levels } = seen;
  const places = lines.length - 1;
  const drawn: number[][] = Array.from({ length: levels.length * places }, () => []);
  const at = new Map(lines.map((x, i) => [x, i]));
  for (const i of members) {
    const first = box.x0[i] <= lines[0] ? 0 : at.get(box.x0[i])!;
    const last = box.x1[i] >= lines[places] ? places : at.get(box.x1[i])!;
    for (let place = first; place < last; place++) drawn[level[i] * places + place].push(i);
  }
  const columns: Column[] = [];
  const columnOf = new Int32Array(drawn.length);
  drawn.forEach((own, c) => {
    const before = c % places === 0 ? undefined : drawn[c - 1];
    if (!(before?.length === own.length && own.every((i, k) => i === before[k])))
      columns.push({ runs: withShades(seen, own, Math.floor(c / places)), next: 0, run: undefined });
    columnOf[c] = columns.length - 1;
  });
  return { columns, columnOf };
}

/** The runs of one place in order, without overlaps, gaps filled from either side. */
function withShades({ box, cell, levels, pitch }: Seen, drawn: readonly number[], level: number): Run[] {
  const { z0, z1 } = levels[level];
  const sorted = [...drawn].sort((a, b) => box.y0[a] - box.y0[b] || box.y1[b] - box.y1[a] || a - b);
  const runs: Run[] = [];
  for (const owner of sorted) {
    const run: Run = { y0: box.y0[owner], y1: box.y1[owner], owner, kind: DRAWN };
    const before = runs.at(-1);
    if (before === undefined || run.y0 > before.y1) {
      if (before !== undefined) {
        const gap = run.y0 - before.y1;
        const units = cell[before.owner] >= 0 && cell[run.owner] >= 0;
        const by = units && 2 * gap < pitch ? gap / 2 : extension(gap, z1 - z0);
        const kind = 2 * by === gap ? CLOSED : SHADED;
        const reach = kind === CLOSED ? by : Math.round(by / ROUNDING) * ROUNDING;
        if (reach > 0) {
          runs.push({ y0: before.y1, y1: before.y1 + reach, owner: before.owner, kind });
          runs.push({ y0: run.y0 - reach, y1: run.y0, owner: run.owner, kind });
        }
      }
      runs.push(run);
    } else if (run.y1 > before.y1) runs.push({ ...run, y0: before.y1 });
  }
  // The outermost units reach as far as those within.
  const beyond = (run: Run | undefined): number => {
    const gap = run && cell[run.owner] >= 0 ? pitch - (run.y1 - run.y0) : Infinity;
    return 2 * gap < pitch ? Math.floor(gap / 2) : 0;
  };
  const [low, high] = [runs.at(0), runs.at(-1)];
  const [below, above] = [beyond(low), beyond(high)];
  if (low && below > 0) runs.unshift({ y0: low.y0 - below, y1: low.y0, owner: low.owner, kind: CLOSED });
  if (high && above > 0) runs.push({ y0: high.y1, y1: high.y1 + above, owner: high.owner, kind: CLOSED });
  return runs;
}

/** Takes out of `now` what is filled beside another net, shades within the spacing of another net too. */
function keepApart(
  { net, levels }: Seen,
  lines: readonly number[],
  level: number,
  owner: Int32Array,
  kind: Uint8Array,
  now: Int32Array,
): void {
  const places = lines.length - 1;
  const base = level * places;
  const isForeign = (c: number, other: number) => owner[other] >= 0 && net[owner[other]] !== net[owner[c]];
  for (let place = 0; place < places; place++) {
    const c = base + place;
    if (owner[c] < 0 || kind[c] === DRAWN) continue;
    const room = kind[c] === SHADED ? levels[level].minSpacing : 1;
    const firm = (other: number) => kind[other] <= kind[c];
    for (let p = place - 1; p >= 0 && lines[place] - lines[p + 1] < room; p--)
      if (isForeign(c, base + p) && firm(base + p)) now[c] = -1;
    for (let p = place + 1; p < places && lines[p] - lines[place + 1] < room; p++)
      if (isForeign(c, base + p) && firm(base + p)) now[c] = -1;
  }
}
