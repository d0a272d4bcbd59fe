import { transposed } from '../core/boxes.js';
import type { Conductors } from './conductors.js';
import { SectionLibrary, type Solved, type Stack, type Stretch } from './section-library.js';
import { eachSlice, type Seen } from './slices.js';
import type { Tally } from './tally.js';

/** Of what a section gives: two dimensions instead of three, and the grid. */
export const SECTION_ERROR = 0.15;
/** Of what a unit at the edge has more or less than one within. */
export const UNIT_ERROR = 0.4;

interface Window {
  readonly x0: number;
  readonly x1: number;
  readonly members: number[];
}

/** The middles of the units along x and along y, ascending, and what the units cover. */
export interface Lattice {
  readonly x: readonly number[];
  readonly y: readonly number[];
  readonly x0: number;
  readonly y0: number;
  readonly x1: number;
  readonly y1: number;
}

export function latticeOf({ box, cell, cells }: Conductors): Lattice {
  const low = { x: new Int32Array(cells).fill(0x7fffffff), y: new Int32Array(cells).fill(0x7fffffff) };
  const high = { x: new Int32Array(cells).fill(-0x80000000), y: new Int32Array(cells).fill(-0x80000000) };
  for (let i = 0; i < cell.length; i++) {
    const c = cell[i];
    if (c < 0) continue;
    low.x[c] = Math.min(low.x[c], box.x0[i]);
    low.y[c] = Math.min(low.y[c], box.y0[i]);
    high.x[c] = Math.max(high.x[c], box.x1[i]);
    high.y[c] = Math.max(high.y[c], box.y1[i]);
  }
  const middles = (axis: 'x' | 'y') =>
    [...new Set(low[axis].map((value, c) => Math.floor((value + high[axis][c]) / 2)))].sort((a, b) => a - b);
  return {
    x: middles('x'),
    y: middles('y'),
    x0: leastOf(low.x),
    y0: leastOf(low.y),
    x1: mostOf(high.x),
    y1: mostOf(high.y),
  };
}

const leastOf = (values: Int32Array): number => values.reduce((a, b) => Math.min(a, b), 0x7fffffff);
const mostOf = (values: Int32Array): number => values.reduce((a, b) => Math.max(a, b), -0x80000000);

/** The least distance between two neighbours. */
const pitchOf = (middles: readonly number[]): number =>
  middles.slice(1).reduce((least, middle, i) => Math.min(least, middle - middles[i]), Infinity);

/**
 * Adds what the sections across the columns give: cuts at all heights that units cover, from middle to middle of two neighbouring columns,
 * where the field reflects, and from the outermost to the edge of all that is drawn. They see everything that runs upwards or stands beside
 * it: trunks, shields, the sides of plates; stubs as what they cover.
 */
export function countAcrossColumns(tally: Tally, lattice: Lattice, stack: Stack): number {
  const { conductors } = tally;
  const { box } = conductors;
  const seen: Seen = { ...conductors, pitch: pitchOf(lattice.y) };
  const windows = windowsOf(seen, [leastOf(box.x0), ...lattice.x, mostOf(box.x1)], () => true);
  const vss = conductors.nets.length - 2;
  return overWindows(seen, windows, [rowsOf(lattice)], stack, (parts, netOf, length, solved) => {
    parts.forEach((owner, part) => {
      for (let e = 0; e < solved.electrodes; e++) {
        const aF = length * solved.capacitance[part * solved.electrodes + e];
        if (aF !== 0) tally.add(owner, e === 0 ? vss : netOf[e], aF, SECTION_ERROR);
      }
    });
  });
}

/**
 * Adds what only sections along the columns see: what passes through the gaps between rows. Cuts at all places x where a unit has a top
 * plate on `TOP`, from middle to middle of two neighbouring rows. They count what units and the wires below them have to `TOP`, and units
 * to the next row's; all else runs upwards and is counted across the columns.
 */
export function countAlongColumns(tally: Tally, lattice: Lattice, stack: Stack, topLevel: number): number {
  const { conductors } = tally;
  const { box, net, nets, cell, level } = conductors;
  const [vss, top] = [nets.length - 2, nets.length - 1];
  const spans = unionOf(
    [...net.keys()]
      .filter((i) => net[i] === top && level[i] === topLevel && cell[i] >= 0)
      .map((i) => [box.x0[i], box.x1[i]] as const),
  );
  if (spans.length === 0) return 0;
  const seen: Seen = { ...conductors, box: transposed(box), pitch: pitchOf(lattice.x) };
  const inSpans = (i: number) => spans.some(([from, to]) => box.x0[i] < to && box.x1[i] > from);
  const edges = [Math.max(leastOf(box.y0), lattice.y0 - REACH), Math.min(mostOf(box.y1), lattice.y1 + REACH)];
  const windows = windowsOf(seen, [edges[0], ...lattice.y, edges[1]], inSpans);
  return overWindows(seen, windows, spans, stack, (parts, netOf, length, solved) => {
    parts.forEach((owner, part) => {
      if (owner < 0 || net[owner] === top) return;
      for (let e = 1; e < solved.electrodes; e++) {
        const aF = length * solved.capacitance[part * solved.electrodes + e];
        if (netOf[e] === top ? cell[owner] >= 0 || net[owner] < vss : false) tally.add(owner, top, aF, SECTION_ERROR);
      }
    });
  });
}

/** What lies farther out than this from the outermost row, nm, does not matter to it. */
const REACH = 4000;

/** From the lowest row to the highest, half the gap between rows beyond them. */
export function rowsOf({ y, y0, y1 }: Lattice): readonly [number, number] {
  const pitch = pitchOf(y);
  return pitch === Infinity ? [y0, y1] : [y[0] - Math.floor(pitch / 2), y[y.length - 1] + Math.floor(pitch / 2)];
}

/** Stretches that overlap or touch made one, ascending. */
function unionOf(stretches: readonly (readonly [number, number])[]): (readonly [number, number])[] {
  const union: [number, number][] = [];
  for (const [from, to] of [...stretches].sort((a, b) => a[0] - b[0] || a[1] - b[1])) {
    const last = union.at(-1);
    if (last === undefined || from > last[1]) union.push([from, to]);
    else last[1] = Math.max(last[1], to);
  }
  return union;
}

function windowsOf({ box }: Seen, edges: readonly number[], isSeen: (i: number) => boolean): Window[] {
  const windows = edges
    .slice(1)
    .map((x1, i): Window => ({ x0: edges[i], x1, members: [] }))
    .filter(({ x0, x1 }) => x1 > x0);
  for (let i = 0; i < box.x0.length; i++) {
    if (!isSeen(i)) continue;
    let low = 0;
    let high = windows.length;
    while (low < high) {
      const middle = (low + high) >> 1;
      if (windows[middle].x1 <= box.x0[i]) low = middle + 1;
      else high = middle;
    }
    for (let w = low; w < windows.length && windows[w].x0 < box.x1[i]; w++) windows[w].members.push(i);
  }
  return windows;
}

/** What a part of the section is of (-1: the substrate), the net of each electrode, the length in um, and the section. */
type Count = (parts: readonly number[], netOf: readonly number[], length: number, solved: Solved) => void;

/** Windows of one width have one library: their lines are those of all of them. */
function overWindows(
  seen: Seen,
  windows: readonly Window[],
  spans: readonly (readonly [number, number])[],
  stack: Stack,
  count: Count,
): number {
  const { box } = seen;
  const linesOf = new Map<number, Set<number>>();
  for (const { x0, x1, members } of windows) {
    const lines = linesOf.get(x1 - x0) ?? new Set([0, x1 - x0]);
    linesOf.set(x1 - x0, lines);
    for (const i of members) {
      if (box.x0[i] > x0) lines.add(box.x0[i] - x0);
      if (box.x1[i] < x1) lines.add(box.x1[i] - x0);
    }
  }
  const libraries = new Map(
    [...linesOf].map(([width, lines]) => {
      const sorted = [...lines].sort((a, b) => a - b);
      return [width, { lines: sorted, library: new SectionLibrary(stack, sorted) }];
    }),
  );
  const vss = seen.nets.length - 2;
  for (const { x0, x1, members } of windows) {
    const { lines, library } = libraries.get(x1 - x0)!;
    const here = lines.map((line) => line + x0);
    let next = 0;
    eachSlice(seen, members, here, [spans[0][0], spans[spans.length - 1][1]], ({ y0, y1, owner }) => {
      while (spans[next][1] <= y0) next++;
      let length = 0;
      for (let s = next; s < spans.length && spans[s][0] < y1; s++)
        length += Math.min(y1, spans[s][1]) - Math.max(y0, spans[s][0]);
      if (length <= 0) return;
      const { stretches, owners } = stretchesOf(seen, owner, here.length - 1);
      if (owners.every((i) => seen.net[i] === vss)) return;
      const solved = library.section(stretches);
      const netOf: number[] = [vss];
      owners.forEach((i, s) => (netOf[solved.electrodeOf[s + 1]] = seen.net[i]));
      count([-1, ...owners], netOf, length / 1000, solved);
    });
  }
  return [...libraries.values()].reduce((sum, { library }) => sum + library.size, 0);
}

/** Places side by side that are counted together make one stretch: of one conductor, of one unit and net, or on `VSS` or `TOP`. */
function stretchesOf(
  { net, nets, cell, levels }: Seen,
  owner: Int32Array,
  places: number,
): { stretches: Stretch[]; owners: number[] } {
  const vss = nets.length - 2;
  const together = (a: number, b: number) =>
    a === b || (net[a] === net[b] && cell[a] === cell[b] && (cell[a] >= 0 || net[a] >= vss));
  const stretches: Stretch[] = [];
  const owners: number[] = [];
  for (let level = 0; level < levels.length; level++)
    for (let first = 0; first < places;) {
      const own = owner[level * places + first];
      let end = first + 1;
      while (end < places && own >= 0 && owner[level * places + end] >= 0 && together(own, owner[level * places + end]))
        end++;
      if (own >= 0) {
        stretches.push({ level, first, end });
        owners.push(own);
      }
      first = end;
    }
  return { stretches, owners };
}
