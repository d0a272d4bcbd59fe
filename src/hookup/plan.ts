import { Infeasible } from '../core/problem.js';
import type { Capacitor, RingUnit } from '../spec/floorplan.js';
import { assignSides, type Sides } from './side-assignment.js';
import { type ChannelNet, crossoversBetween, orderTracks, placeOnTracks } from './track-order.js';

export type Side = 'L' | 'R';

/** What a hookup joins: the cells from the top row down ("-" a fill dummy), and the units in the rings. */
export interface Placed {
  readonly cells: readonly (readonly string[])[];
  readonly capacitors: readonly Capacitor[];
  readonly ringUnits: readonly RingUnit[];
  readonly rings: number;
}

/** Which channel each unit hooks to, and what each track of each channel carries. */
export interface Plan {
  /** Of every cell; it says nothing for a fill dummy whose bottom plate finds `VSS` on the other side only. */
  readonly sides: readonly (readonly Side[])[];
  /** Columns + 1 lists of nets from left to right, all of one length; "VSS" is a free track. */
  readonly channels: readonly (readonly string[])[];
}

/** A unit in the ring that has no way straight down: a termination with more rings below it takes a free track beside it. */
export const needsTrack = (unit: RingUnit, placed: Placed): boolean =>
  unit.row === placed.cells.length && placed.rings > 1;

/** The stubs of every net in every channel, in the heights of track-order. Fill dummies are on `VSS` and do not count. */
export function channelStubs(placed: Placed, plan: Plan): Map<string, ChannelNet>[] {
  const channels = plan.channels.map(() => new Map<string, { net: string; fromLeft: number[]; fromRight: number[] }>());
  const add = (net: string, row: number, column: number, side: Side) => {
    const nets = channels[side === 'R' ? column + 1 : column];
    const entry = nets.get(net) ?? { net, fromLeft: [], fromRight: [] };
    nets.set(net, entry);
    if (side === 'R') entry.fromLeft.push(2 * row + 1);
    else entry.fromRight.push(2 * row);
  };
  placed.cells.forEach((names, row) =>
    names.forEach((net, column) => net !== '-' && add(net, row, column, plan.sides[row][column])),
  );
  for (const unit of placed.ringUnits)
    if (needsTrack(unit, placed))
      add(unit.capacitor, unit.row, unit.column, plan.channels[unit.column].includes(unit.capacitor) ? 'L' : 'R');
  return channels;
}

/** The height at which a net's trunk begins; above it the track is `VSS`. */
export const trunkTop = (entry: ChannelNet): number =>
  Math.min(entry.fromLeft[0] ?? Infinity, entry.fromRight[0] ?? Infinity);

/** The track nearest to a unit that is `VSS` at the height of its stub to that side, or -1. */
export function nearestVss(
  plan: Plan,
  stubs: readonly ReadonlyMap<string, ChannelNet>[],
  row: number,
  column: number,
  side: Side,
): number {
  const channel = side === 'R' ? column + 1 : column;
  const height = side === 'R' ? 2 * row + 1 : 2 * row;
  const isVss = (net: string): boolean => {
    const entry = stubs[channel].get(net);
    return net === 'VSS' || (entry !== undefined && height < trunkTop(entry));
  };
  const list = plan.channels[channel];
  return side === 'R' ? list.findIndex(isVss) : list.findLastIndex(isVss);
}

/**
 * Plans the hookup of a placement in the channel style: sides, track order and places, with the fewest tracks, then trunks, then
 * crossovers. `tracks` is honoured where given. `proved` is true where no hookup is better in that order.
 * @throws Infeasible where the tracks asked for do not suffice.
 */
export function planHookup(placed: Placed, tracks?: number): Plan & { readonly proved: boolean } {
  const { cells, capacitors } = placed;
  const columns = cells[0].length;
  const inCore = capacitors.filter((capacitor) => cells.some((row) => row.includes(capacitor.name)));
  const index = new Map(inCore.map((capacitor, i) => [capacitor.name, i]));
  const rowsOf = Array.from({ length: columns }, () => inCore.map((): number[] => []));
  cells.forEach((row, r) => row.forEach((name, c) => name !== '-' && rowsOf[c][index.get(name)!].push(r)));
  const masks = rowsOf.map((nets) => nets.reduce((mask, rows, n) => (rows.length > 0 ? mask | (1 << n) : mask), 0));

  const problem = { columns, nets: inCore.length, masks, crossovers: crossoverBound(rowsOf, inCore.length) };
  const least = assignSides(problem)!;
  const lay = (sides: Sides | null, width: number) => (sides === null ? null : layTracks(placed, sides, index, width));
  if (tracks !== undefined) {
    const asked =
      tracks <= least.tracks
        ? lay(tracks < least.tracks ? null : least, tracks)
        : lay(assignSides(problem, tracks), tracks);
    if (asked !== null) return asked;
  }
  // One track more than the nets need is always enough for fill dummies and a termination, if the nets do not take it.
  const wider = least.tracks + 1;
  const found = lay(least, least.tracks) ?? lay(assignSides(problem, wider), wider) ?? lay(least, wider)!;
  if (tracks !== undefined)
    throw new Infeasible(
      `This placement needs more than the ${tracks} track${tracks === 1 ? '' : 's'} per channel asked for.`,
      `Allow ${found.channels[0].length}, or leave tracksPerChannel out.`,
    );
  return found;
}

/** The sum over pairs of nets of the cheaper of their two orders, for one channel: no order of its tracks has fewer crossovers. */
function crossoverBound(rowsOf: readonly (readonly number[][])[], nets: number) {
  const columns = rowsOf.length;
  const both = 1 << nets;
  const known = new Map<number, number>();
  return (channel: number, right: number, left: number): number => {
    const key = (channel * both + right) * both + left;
    const before = known.get(key);
    if (before !== undefined) return before;
    const entries: ChannelNet[] = [];
    for (let n = 0; n < nets; n++) {
      const bit = 1 << n;
      if (((right | left) & bit) === 0) continue;
      const fromLeft = right & bit && channel > 0 ? rowsOf[channel - 1][n].map((row) => 2 * row + 1) : [];
      const fromRight = left & bit && channel < columns ? rowsOf[channel][n].map((row) => 2 * row) : [];
      entries.push({ net: '', fromLeft, fromRight });
    }
    let sum = 0;
    for (let m = 0; m < entries.length; m++)
      for (let n = 0; n < m; n++)
        sum += Math.min(crossoversBetween(entries[m], entries[n]), crossoversBetween(entries[n], entries[m]));
    known.set(key, sum);
    return sum;
  };
}

/** Orders the tracks of every channel for given sides. Null where a fill dummy or a termination finds no `VSS` line or free track. */
function layTracks(
  placed: Placed,
  assigned: Sides,
  index: ReadonlyMap<string, number>,
  tracks: number,
): (Plan & { readonly proved: boolean }) | null {
  const { cells, ringUnits } = placed;
  const sides = cells.map((row) =>
    row.map((name, c): Side => (name !== '-' && (assigned.right[c] >> index.get(name)!) & 1 ? 'R' : 'L')),
  );
  const channels = Array.from({ length: cells[0].length + 1 }, () => new Array<string>(tracks).fill('VSS'));
  let proved = assigned.proved;
  const inCore = { ...placed, ringUnits: [] };
  channelStubs(inCore, { sides, channels }).forEach((entries, channel) => {
    const listed = [...entries.values()];
    const { order, crossovers } = orderTracks(listed);
    let bound = 0;
    for (let m = 0; m < listed.length; m++)
      for (let n = 0; n < m; n++)
        bound += Math.min(crossoversBetween(listed[m], listed[n]), crossoversBetween(listed[n], listed[m]));
    proved &&= crossovers === bound;
    placeOnTracks(order, tracks).forEach((track, i) => (channels[channel][track] = order[i].net));
  });
  for (const unit of ringUnits) {
    if (!needsTrack(unit, placed)) continue;
    const channel = [unit.column, unit.column + 1].find((j) => channels[j].includes('VSS'));
    if (channel === undefined) return null;
    const list = channels[channel];
    list[channel === unit.column ? list.lastIndexOf('VSS') : list.indexOf('VSS')] = unit.capacitor;
  }
  const plan = { sides, channels };
  const stubs = channelStubs(placed, plan);
  for (let row = 0; row < cells.length; row++)
    for (let column = 0; column < cells[row].length; column++) {
      if (cells[row][column] !== '-') continue;
      const side = (['L', 'R'] as const).find((s) => nearestVss(plan, stubs, row, column, s) !== -1);
      if (side === undefined) return null;
      sides[row][column] = side;
    }
  return { sides, channels, proved };
}
