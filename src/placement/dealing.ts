import type { ColumnLimit } from '../array/column-limit.js';
import type { Deal } from '../array/cost-term.js';
import { oddDeal } from '../array/core-grid.js';
import { mirroredTriples } from '../array/mirrored-triples.js';
import type { Random } from '../core/random.js';
import { offset2 } from '../linearity/moments.js';
import { columnQuotas, type Dispersion } from './column-quotas.js';
import { leastSinglesOrder } from './singles.js';

/** A capacitor as the search sees it. Without weight (0: a termination inside the core) its cells are dealt as fill. */
export interface DealtNet {
  readonly name: string;
  readonly weight: number;
  /** Units inside the core. */
  readonly units: number;
}

/** A core's cells dealt to the nets in blocks. Net order: the capacitors as given, then the fill. */
export type Dealing = {
  readonly deal: Deal;
  /** group[block]: only blocks of one group (always of one size) are exchanged; `exactZero` holds whatever is exchanged within groups. */
  readonly group: Int32Array;
  /** Nets without weight: no figure of linearity knows them from fill, so they are searched as fill and named at the end. */
  readonly unweighted: readonly { readonly net: number; readonly units: number }[];
} & (
  | { /** Every capacitor's centroid is where its weight wants it: first order exactly 0. */ readonly exactZero: true }
  | { readonly exactZero: false; /** A sentence. */ readonly because: string }
);

/**
 * "scattered": pairs anywhere, exchanged with any other. `columns`: each column gets few nets (planned first, see `columnQuotas`) and pairs
 * are exchanged within their columns only, so that what the search does leaves the (column, net) pairs as few as they are. Its
 * `momentPrice` says how many such pairs a second moment across the columns is worth that is off by as much as the LSB's is anyhow: 1
 * wants few, 4 costs next to nothing of the second order. `limit`: on the nets of a column.
 */
export type Arrangement =
  | 'scattered'
  | {
      readonly columns: {
        readonly momentPrice: number;
        readonly dispersion?: Dispersion;
        readonly limit?: ColumnLimit;
      };
    };

export interface DealRequest {
  readonly rows: number;
  readonly columns: number;
  readonly nets: readonly DealtNet[];
  readonly random: Random;
  /** "scattered" if not given. */
  readonly arrangement?: Arrangement;
}

/** A net with all its cells to be dealt; the fill, with every net without weight in it, is the last. */
interface Share {
  readonly net: number;
  readonly weight: number;
  readonly name: string;
  left: number;
}

/** The part of the core that is dealt point-symmetrically; what it leaves on one side is fill. */
interface Frame {
  readonly rows: number;
  readonly columns: number;
}

// Cores of up to so many cells are dealt cell by cell where first order 0 is out of reach: the search then has all placements to choose from.
const ALL_SINGLES = 36;
const FILL = 'the fill';

/**
 * Deals the cells of a core so that every capacitor's first moment is what its weight asks for, exactly, where that is possible:
 * point-reflected pairs; the odd unit of one odd capacitor at the centre of an odd x odd core; further odd ones two by two, with a
 * triple of cells of zero sum for one and its mirror image for the other.
 *
 * Where units are in proportion to weights a common shift of all of them is pure gain: a core with an even side and enough fill is dealt
 * about the centre of an odd x odd part of itself.
 *
 * Otherwise the odd units are dealt singly, on cells about the centre, by the least first order found; small cores are dealt
 * wholly in single cells. The first order then changes with what is exchanged: it belongs among the terms of the search.
 *
 * @throws RangeError if the nets have more cells than the core, or there are more than 254 of them.
 */
export function dealBlocks(request: DealRequest): Dealing {
  const { rows, columns, nets, random } = request;
  const total = nets.reduce((sum, net) => sum + net.units, 0);
  if (total > rows * columns) throw new RangeError(`${total} units in ${rows} x ${columns} cells`);
  if (nets.length > 254) throw new RangeError(`${nets.length} nets`);
  const whole = { rows, columns };

  for (const frame of frames(whole, nets)) {
    const shares = sharesOf(frame, nets);
    const blocks = dealExactly(frame, shares, random, request.arrangement ?? 'scattered');
    if (blocks) return { ...assemble(whole, frame, nets, blocks), exactZero: true };
  }
  const shares = sharesOf(whole, nets);
  const because = reason(whole, shares);
  const blocks = dealNearly(whole, shares, random, request.arrangement ?? 'scattered');
  return { ...assemble(whole, whole, nets, blocks), exactZero: false, because };
}

/** The whole core first; then, if a shift is pure gain, parts of it that leave rows at the top or columns at the right to the fill. */
function frames(whole: Frame, nets: readonly DealtNet[]): Frame[] {
  const weighted = nets.filter((net) => net.weight > 0);
  const first = weighted[0];
  const total = weighted.reduce((sum, net) => sum + net.units, 0);
  if (!first || !weighted.every((net) => net.units * first.weight === first.units * net.weight)) return [whole];
  return [
    whole,
    { rows: whole.rows, columns: whole.columns - 1 },
    { rows: whole.rows - 1, columns: whole.columns },
    { rows: whole.rows - 1, columns: whole.columns - 1 },
  ].filter((frame) => frame.rows * frame.columns >= total && frame.rows * frame.columns > 0);
}

function sharesOf(frame: Frame, nets: readonly DealtNet[]): Share[] {
  const shares = nets.map(({ name, weight, units }, net) => ({ net, name, weight, left: weight > 0 ? units : 0 }));
  const dealt = shares.reduce((sum, share) => sum + share.left, 0);
  shares.push({ net: nets.length, name: FILL, weight: 0, left: frame.rows * frame.columns - dealt });
  return shares;
}

/** Blocks inside a frame; cells are the frame's own (row * frame.columns + column). */
interface Blocks {
  readonly cells: number[][];
  readonly net: number[];
  readonly group: number[];
}

const PAIRS = 0;
const SINGLES = 1;
const TRIPLES = 2;
const CENTRE = 3;
const BORDER = 4;
/** Pairs of a class of columns are a group of their own where nets keep to their columns. */
const FIRST_CLASS = 5;

function add(blocks: Blocks, cells: number[], net: number, group: number): void {
  blocks.cells.push(cells);
  blocks.net.push(net);
  blocks.group.push(group);
}

function dealExactly(frame: Frame, shares: Share[], random: Random, arrangement: Arrangement): Blocks | undefined {
  const cells = frame.rows * frame.columns;
  const last = cells - 1;
  const blocks: Blocks = { cells: [], net: [], group: [] };
  const taken = new Uint8Array(cells);
  if (cells % 2 === 0) {
    // An odd capacitor's cells add up to an odd number of half-pitches along the even side.
    if (shares.some((share) => share.left % 2 === 1)) return undefined;
  } else {
    const deal = oddDeal(shares.map((share) => share.left));
    if (!deal) return undefined;
    const triples = mirroredTriples(frame.rows, frame.columns, deal.triples, random);
    if (!triples) return undefined;
    const centred = shares[deal.atCentre];
    const others = shares.filter((share) => share !== centred && share.left % 2 === 1);
    shuffle(others, random);
    others.forEach((share, i) => {
      const at = 3 * Math.floor(i / 2);
      const triple = Array.from(triples.subarray(at, at + 3), (cell) => (i % 2 === 0 ? cell : last - cell));
      for (const cell of triple) taken[cell] = 1;
      add(blocks, triple, share.net, TRIPLES);
      share.left -= 3;
    });
    if (centred) {
      taken[last / 2] = 1;
      add(blocks, [last / 2], centred.net, CENTRE);
      centred.left -= 1;
    }
  }
  dealPairs(frame, shares, taken, blocks, random, arrangement);
  return blocks;
}

function shuffle<T>(list: T[], random: Random): void {
  for (let i = list.length - 1; i > 0; i--) {
    const j = random.below(i + 1);
    [list[i], list[j]] = [list[j], list[i]];
  }
}

/** Deals the free cells, which are point-symmetric, in reflected pairs; every share's rest is even. */
function dealPairs(
  frame: Frame,
  shares: readonly Share[],
  taken: Uint8Array,
  blocks: Blocks,
  random: Random,
  arrangement: Arrangement,
): void {
  const last = frame.rows * frame.columns - 1;
  const pairs: number[] = [];
  for (let cell = 0; 2 * cell < last; cell++) if (!taken[cell]) pairs.push(cell);
  shuffle(pairs, random);
  if (arrangement === 'scattered') {
    const nets = shares.flatMap((share) => Array<number>(share.left / 2).fill(share.net));
    pairs.forEach((cell, i) => add(blocks, [cell, last - cell], nets[i], PAIRS));
    return;
  }
  // A pair stands in a column and its mirror image: column c and columns - 1 - c are class c.
  const classOf = (cell: number): number => {
    const column = cell % frame.columns;
    return Math.min(column, frame.columns - 1 - column);
  };
  const classes = Math.ceil(frame.columns / 2);
  const inClass = Array.from({ length: classes }, (_, c) => pairs.filter((cell) => classOf(cell) === c));
  const square = inClass.map((_, c) => offset2(c, frame.columns) * offset2(c, frame.columns));
  const present = new Uint8Array(shares.length * classes);
  const moment = shares.map(() => 0);
  const dealt = new Set<number>();
  blocks.cells.forEach((cells, block) => {
    const net = blocks.net[block];
    for (const cell of cells) {
      const column = cell % frame.columns;
      moment[net] += square[classOf(cell)];
      if (!dealt.has(net * frame.columns + column)) present[net * classes + classOf(cell)]++;
      dealt.add(net * frame.columns + column);
    }
  });
  const quota = columnQuotas({
    capacity: inClass.map(({ length }) => length),
    width: inClass.map((_, c) => (2 * c === frame.columns - 1 ? 1 : 2)),
    square,
    pairs: shares.map((share) => share.left / 2),
    weight: shares.map((share) => share.weight),
    present,
    moment,
    price: arrangement.columns.momentPrice,
    ...(arrangement.columns.dispersion && { dispersion: arrangement.columns.dispersion }),
    ...(arrangement.columns.limit && { limit: arrangement.columns.limit }),
    random,
  });
  inClass.forEach((cells, c) => {
    const inRows = [...cells].sort((a, b) => a - b);
    const counts = shares.map((_, i) => quota[i * classes + c]);
    evenly(counts, random).forEach((i, row) =>
      add(blocks, [inRows[row], last - inRows[row]], shares[i].net, FIRST_CLASS + c),
    );
  });
}

/**
 * Who stands where in a row of places, so that each is spread evenly: `counts[i]` places for i. Every place goes to the one that lags
 * most behind its share, beginning with lags of chance.
 */
function evenly(counts: readonly number[], random: Random): number[] {
  const places = counts.reduce((sum, count) => sum + count, 0);
  const left = [...counts];
  const lag = counts.map(() => random.below(1024) / 1024);
  return Array.from({ length: places }, () => {
    let next = -1;
    counts.forEach((count, i) => {
      lag[i] += count / places;
      if (left[i] > 0 && (next < 0 || lag[i] > lag[next])) next = i;
    });
    lag[next] -= 1;
    left[next] -= 1;
    return next;
  });
}

/** Pairs for the even part; the odd units singly (three of a capacitor that has them, so that they can balance each other). */
function dealNearly(frame: Frame, shares: Share[], random: Random, arrangement: Arrangement): Blocks {
  const cells = frame.rows * frame.columns;
  const last = cells - 1;
  const blocks: Blocks = { cells: [], net: [], group: [] };
  const taken = new Uint8Array(cells);
  const odd = shares.filter((share) => share.left % 2 === 1);
  // One odd capacitor stands half a pitch from the centre and what is odd beside it, the fill, opposite. Where several compete, more cells
  // may trade places. In small cores a shift of the large capacitors can do better still.
  const several = odd.filter((share) => share.weight > 0).length > 1;
  const single = shares.map((share) => {
    if (cells <= ALL_SINGLES) return share.left;
    return share.left % 2 === 0 ? 0 : several ? Math.min(share.left, 3) : 1;
  });
  const count = single.reduce((sum, n) => sum + n, 0);
  // The cells nearest to the centre, in reflected pairs; the centre itself, in an odd x odd frame, where the count is odd.
  const central = Array.from({ length: cells }, (_, cell) => cell)
    .filter((cell) => 2 * cell <= last)
    .map((cell) => ({ cell, distance: distance4(frame, cell) }))
    .sort((a, b) => a.distance - b.distance || b.cell - a.cell)
    .slice(0, Math.ceil(count / 2))
    .flatMap(({ cell }) => (2 * cell === last ? [cell] : [cell, last - cell]));
  if (central.length !== count) throw new Error('singles are as many as their cells');
  const nets = single.flatMap((n, i) => Array.from({ length: n }, () => i));
  const chosen = leastSinglesOrder(
    central.map((cell) => offsets2(frame, cell)),
    nets,
    shares.map((share) => share.weight),
    random,
  );
  central.forEach((cell, i) => {
    const share = shares[chosen[i]];
    if (!share) throw new Error('a single belongs to a net');
    taken[cell] = 1;
    share.left -= 1;
    add(blocks, [cell], share.net, SINGLES);
  });
  dealPairs(frame, shares, taken, blocks, random, arrangement);
  return blocks;
}

/** A cell's offset from the frame's centre in half-pitches; x to the right, y upwards. */
function offsets2(frame: Frame, cell: number): readonly [x: number, y: number] {
  const row = Math.floor(cell / frame.columns);
  return [offset2(cell - row * frame.columns, frame.columns), -offset2(row, frame.rows)];
}

function distance4(frame: Frame, cell: number): number {
  const [x, y] = offsets2(frame, cell);
  return x * x + y * y;
}

/** Why no deal has first order 0, in the whole core. */
function reason(frame: Frame, shares: readonly Share[]): string {
  const bits = shares.filter((share) => share.weight > 0);
  const single = bits.filter((share) => share.left === 1).map((share) => share.name);
  if (single.length > 1)
    return `${single.slice(0, -1).join(', ')} and ${single.at(-1)} have one unit each, and only one unit can stand at the centre.`;
  const size = `${frame.rows} x ${frame.columns}`;
  if ((frame.rows * frame.columns) % 2 === 0) {
    const odd = bits.find((share) => share.left % 2 === 1);
    return odd
      ? `The core of ${size} has an even side, along which the odd number of units of ${odd.name} cannot be centred; an odd x odd core can do it.`
      : `The core of ${size} has an even side, along which the odd number of cells of ${FILL} cannot be centred; an odd x odd core can do it.`;
  }
  if (single.length === 1 && shares.at(-1)?.left === 1)
    return `${single[0]} and ${FILL} have one cell each, and only one can stand at the centre; a core with more fill can do it.`;
  return `The core of ${size} has no room to balance its odd capacitors two by two about the centre; a core with more fill may do it.`;
}

function assemble(
  whole: Frame,
  frame: Frame,
  nets: readonly DealtNet[],
  blocks: Blocks,
): Pick<Dealing, 'deal' | 'group' | 'unweighted'> {
  // The frame stands at the bottom left: rows above it and columns right of it are one block of fill, in a group of its own.
  const above = whole.rows - frame.rows;
  const inWhole = (cell: number): number =>
    (above + Math.floor(cell / frame.columns)) * whole.columns + (cell % frame.columns);
  const border: number[] = [];
  for (let row = 0; row < whole.rows; row++) {
    for (let column = 0; column < whole.columns; column++) {
      if (row < above || column >= frame.columns) border.push(row * whole.columns + column);
    }
  }
  const all = blocks.cells.map((cells) => cells.map(inWhole));
  const net = [...blocks.net];
  const group = [...blocks.group];
  if (border.length > 0) {
    all.push(border);
    net.push(nets.length);
    group.push(BORDER);
  }
  const start = new Int32Array(all.length + 1);
  all.forEach((cells, block) => (start[block + 1] = start[block] + cells.length));
  return {
    deal: {
      rows: whole.rows,
      columns: whole.columns,
      nets: nets.length + 1,
      weight: Float64Array.from([...nets.map(({ weight }) => weight), 0]),
      start,
      cells: Int32Array.from(all.flat()),
      netOfBlock: Uint8Array.from(net),
    },
    group: Int32Array.from(group),
    unweighted: nets.flatMap(({ weight, units }, i) => (weight === 0 && units > 0 ? [{ net: i, units }] : [])),
  };
}

/**
 * The net of every cell, a row after the other from the top. Nets without weight get the cells of fill nearest to the core's edge, of
 * these the lowest, then the left-most: the way out to their pin is short.
 */
export function netsOfCells(dealing: Dealing, netOfBlock: Uint8Array): Uint8Array {
  const { rows, columns, nets, start, cells } = dealing.deal;
  const result = new Uint8Array(rows * columns);
  netOfBlock.forEach((net, block) => {
    for (const cell of cells.subarray(start[block], start[block + 1])) result[cell] = net;
  });
  const fill = nets - 1;
  const fromEdge = (cell: number): number => {
    const row = Math.floor(cell / columns);
    const column = cell % columns;
    return Math.min(row, rows - 1 - row, column, columns - 1 - column);
  };
  if (dealing.unweighted.length > 0) {
    const free = Array.from(result.keys()).filter((cell) => result[cell] === fill);
    free.sort((a, b) => fromEdge(a) - fromEdge(b) || Math.floor(b / columns) - Math.floor(a / columns) || a - b);
    for (const { net, units } of dealing.unweighted) for (const cell of free.splice(0, units)) result[cell] = net;
  }
  return result;
}
