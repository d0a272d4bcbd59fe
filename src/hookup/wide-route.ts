import { type RoutingProblem, type State, StateMaker } from './routing-problem.js';
import { ChannelSolver, EXACT_ORDER, type Stubs } from './track-order.js';

/** What a trunk costs; on a channel without a track for it, in addition; else as much more as trunks stand there already. */
const TRUNK = 1000;
const OVERFULL = 1_000_000;
const ROUNDS = 20;
/** Nanometres, more than all the wires of a block. */
const ABOVE_LENGTHS = 0x100_0000_0000;

export interface WideRoute {
  readonly tracks: number;
  /** A state of every column: each net on one side. */
  readonly states: readonly State[];
  readonly channels: readonly (readonly number[])[];
  /** Trunks that the nets would need if no channel were ever full. */
  readonly fewestTrunks: number;
}

/**
 * A hookup for columns of more nets than can be weighed set by set: each net in turn takes the channels that are best for it alone while
 * the others keep theirs, round after round. On tracks from `least` on, `most` at most.
 * @returns null where none of these serves.
 */
export function wideRoute(problem: RoutingProblem, least: number, most: number): WideRoute | null {
  const { columns } = problem;
  const nets = problem.counted.length;
  // Fill dummies want a free track as a net wants a trunk.
  const wants = Array.from({ length: nets + 1 }, (_, net) =>
    columns.map((column) => (net === nets ? column.fill >= 0 : column.nets.includes(net))),
  );
  const alone = new Int32Array(columns.length + 1);
  const fewestTrunks = wants
    .slice(0, nets)
    .reduce((sum, columnsOf) => sum + cover(columnsOf, alone, Infinity).filter(Boolean).length, 0);
  for (let tracks = least; tracks <= most; tracks++) {
    const covers = balanced(wants, tracks);
    if (covers === null) continue;
    const maker = new StateMaker(problem);
    const states = columns.map((column, c) => {
      const whole = (1 << column.nets.length) - 1;
      const left = column.nets.reduce((set, net, at) => (covers[net][c] ? set | (1 << at) : set), 0);
      return maker.make(c, left, whole & ~left, []);
    });
    const solver = new ChannelSolver({ ...problem, tracks, crossoverCost: ABOVE_LENGTHS });
    const channels = Array.from({ length: columns.length + 1 }, (_, c) => {
      const fromLeft = states[c - 1]?.intoRight.stubs ?? [];
      const fromRight = states[c]?.intoLeft.stubs ?? [];
      const count = new Set([...fromLeft, ...fromRight].map(({ net }) => net)).size;
      return count <= EXACT_ORDER ? solver.order(fromLeft, fromRight) : byStubs(fromLeft, fromRight, tracks);
    });
    return { tracks, states, channels, fewestTrunks };
  }
  return null;
}

/** The channels of every net; null where some channel is overfull. */
function balanced(wants: readonly (readonly boolean[])[], tracks: number): boolean[][] | null {
  const load = new Int32Array(wants[0].length + 1);
  const covers: boolean[][] = [];
  for (let round = 0; round < ROUNDS; round++) {
    let changed = false;
    wants.forEach((columns, net) => {
      const before = covers[net] as boolean[] | undefined;
      before?.forEach((taken, channel) => (load[channel] -= Number(taken)));
      const now = cover(columns, load, tracks);
      now.forEach((taken, channel) => (load[channel] += Number(taken)));
      changed ||= now.some((taken, channel) => taken !== before?.[channel]);
      covers[net] = now;
    });
    if (!changed) break;
  }
  return load.every((count) => count <= tracks) ? covers : null;
}

/** Channels such that every column of a net has one beside it, at the least cost: a dynamic programme along the channels. */
function cover(columns: readonly boolean[], load: Int32Array, tracks: number): boolean[] {
  const price = (channel: number) => TRUNK + load[channel] + (load[channel] >= tracks ? OVERFULL : 0);
  let without = 0;
  let taken = price(0);
  // Whether the channel before is taken where this one is not, and where it is.
  const before: (readonly [boolean, boolean])[] = [[false, false]];
  columns.forEach((wanted, c) => {
    const fromTaken = [wanted || taken < without, taken < without] as const;
    const next = fromTaken[0] ? taken : without;
    taken = (fromTaken[1] ? taken : without) + price(c + 1);
    without = next;
    before.push(fromTaken);
  });
  const result: boolean[] = [];
  let now = taken < without;
  for (let channel = columns.length; channel >= 0; channel--) {
    result.unshift(now);
    now = before[channel][now ? 1 : 0];
  }
  return result;
}

/** A channel's nets, those hooked from the left first, on the tracks from the left. */
function byStubs(left: readonly Stubs[], right: readonly Stubs[], tracks: number): number[] {
  const pull = new Map<number, number>();
  for (const { net, count } of left) pull.set(net, (pull.get(net) ?? 0) + count);
  for (const { net, count } of right) pull.set(net, (pull.get(net) ?? 0) - count);
  const order = [...pull.keys()].sort((a, b) => pull.get(b)! - pull.get(a)! || a - b);
  return [...order, ...new Array<number>(tracks - order.length).fill(-1)];
}
