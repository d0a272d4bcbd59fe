import { Infeasible } from '../core/problem.js';
import type { Capacitor, RingUnit } from '../spec/floorplan.js';
import { route, type RouteBound } from './route.js';
import type { Column, RoutingProblem, State } from './routing-problem.js';
import type { Lengths } from './track-order.js';

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

/** The stubs of a net in one channel, by their heights: those from the left-hand and from the right-hand column, ascending. */
export interface ChannelNet {
  readonly net: string;
  readonly fromLeft: readonly number[];
  readonly fromRight: readonly number[];
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

/** What is known of the best plan for a placement on as many tracks. */
export interface Judged {
  /** None is better: has fewer trunks, then fewer crossovers, then less wire in the core and along the buses. */
  readonly proved: boolean;
  /** None has less, each figure as long as those before it are met; of the tracks, none at all. Bits alone count. */
  readonly bound: RouteBound;
}

/**
 * Plans the hookup of a placement in the channel style: the side of every unit, the order of the tracks and their places, with the fewest
 * tracks, or as many as asked for; then the fewest trunks, crossovers, and the least wire in the core and along the buses.
 * @throws Infeasible where the tracks asked for do not suffice.
 */
export function planHookup(placed: Placed, lengths: Lengths, tracks?: number): Plan & Judged {
  const { names, problem } = routingProblem(placed, lengths);
  const found = route(problem, tracks);
  if (found.tracks === null) {
    const needed = planHookup(placed, lengths).channels[0].length;
    throw new Infeasible(
      found.surely
        ? `This placement needs more than the ${tracks} track${tracks === 1 ? '' : 's'} per channel asked for.`
        : `No hookup of this placement was found on the ${tracks} tracks per channel asked for.`,
      `Allow ${needed}, or leave tracksPerChannel out.`,
    );
  }
  const { bound, proved } = found;
  const channels = found.channels.map((list) => list.map((net) => (net === -1 ? 'VSS' : names[net])));
  const sides = sidesOf(placed, problem, found.states, names);
  const stubs = channelStubs(placed, { sides, channels });
  placed.cells.forEach((row, r) => {
    row.forEach((name, c) => {
      if (name !== '-') return;
      sides[r][c] = nearestVss({ sides, channels }, stubs, r, c, 'L') !== -1 ? 'L' : 'R';
    });
  });
  const others = problem.counted.filter((counted) => !counted).length;
  return { sides, channels, proved, bound: { ...bound, trunks: bound.trunks - others } };
}

/** Whatever needs a track: the capacitors of the core, and what the ring has no other way for. A unit there counts as one of the row below the core. */
function routingProblem(placed: Placed, lengths: Lengths): { names: string[]; problem: RoutingProblem } {
  const { cells, capacitors } = placed;
  const rows = cells.length;
  const inRing = placed.ringUnits.filter((unit) => needsTrack(unit, placed));
  const wired = capacitors.filter(
    ({ name }) => cells.some((row) => row.includes(name)) || inRing.some(({ capacitor }) => capacitor === name),
  );
  const columns = cells[0].map((_, c): Column => {
    const names = [
      ...cells.map((row) => row[c]),
      ...inRing.filter(({ column }) => column === c).map(({ capacitor }) => capacitor),
    ];
    const rowsOf = wired.map(({ name }) => names.flatMap((other, row) => (other === name ? [row] : [])));
    const nets = [...wired.keys()].filter((net) => rowsOf[net].length > 0);
    return { nets, rows: nets.map((net) => rowsOf[net]), fill: names.lastIndexOf('-') };
  });
  return {
    names: wired.map(({ name }) => name),
    problem: { rows: rows, columns, counted: wired.map(({ role }) => role === 'bit'), lengths },
  };
}

function sidesOf(
  { cells }: Placed,
  { columns }: RoutingProblem,
  states: readonly State[],
  names: readonly string[],
): Side[][] {
  return cells.map((row, r) =>
    row.map((name, c): Side => {
      const at = columns[c].nets.findIndex((net) => names[net] === name);
      const { right, splits } = states[c];
      const split = splits.find((each) => each.at === at);
      return split ? (split.right.includes(r) ? 'R' : 'L') : at !== -1 && (right >> at) & 1 ? 'R' : 'L';
    }),
  );
}
