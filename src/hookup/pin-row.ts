import { firstAtLeast } from '../core/order.js';
import { Infeasible } from '../core/problem.js';
import { um } from '../core/units.js';
import type { Leaving, Pins } from './pins.js';

/** What a row of pins must keep, in nanometres. */
export interface RowSize {
  /** Left edges of the leftmost and of the rightmost place. */
  readonly first: number;
  readonly last: number;
  /** The least from the left edge of a drop to that of the next, or of any other vertical wire beside it. */
  readonly pitch: number;
  readonly grid: number;
}

interface Row {
  readonly x0: number;
  readonly buses: readonly number[];
  readonly length: number;
}

/**
 * Places the pins from left to right in the order given, each exactly `step` from the one before, and the buses that lead to them.
 *
 * A trunk runs from the ring down to its bus, a drop from its bus down to the edge. Where a drop of i comes too near to a trunk of j, the
 * bus of j has to lie above that of i:
 *
 *     j |     | i's trunk
 *     ==+==   |            j's bus
 *       | ====+==          i's bus; its drop, below j's trunk
 *              |
 *
 * So a place of the row stands or falls with whether these demands go round in a circle. The demands change only where a drop comes into or
 * out of reach of a trunk, and each of them holds on an open interval: if any place is possible, one of the intervals' ends is.
 *
 * Of the possible places that with the fewest buses, then the shortest ones, then the one nearest to the middle is taken.
 * @param given buses from the ring down, where the row has to go with them; if it cannot they are chosen anew.
 * @throws Infeasible where the row is too narrow, too wide, or cannot be reached with straight wires at any place.
 */
export function placeOnPitch(
  nets: readonly Leaving[],
  pitch_um: number,
  size: RowSize,
  given: readonly string[] | undefined,
): Pins {
  const { first, last, pitch, grid } = size;
  const step = Math.round(pitch_um * 1e6) / 1000;
  if (step % grid !== 0 || step < pitch)
    throw new Infeasible(
      step < pitch
        ? `Pins at a pitch of ${um(step)} um come nearer than their wires may: ${um(pitch)} um.`
        : `A pitch of ${um(step)} um between pins is no multiple of the technology's grid of ${grid} nm.`,
      `Ask for a pitch of ${um(Math.max(pitch, Math.ceil(step / grid) * grid))} um${step < pitch ? ' or more' : ''}.`,
    );
  const span = (nets.length - 1) * step;
  if (first + span > last)
    throw new Infeasible(
      `${nets.length} pins at a pitch of ${um(step)} um take ${um(span)} um; the block leaves ${um(Math.max(0, last - first))} um for them.`,
      'Ask for a smaller pitch, a core of more columns, or leave "pitch_um" out.',
    );
  const rows = (wanted: readonly string[] | undefined) => bestRow(nets, step, size, wanted);
  const row = (given && rows(given)) ?? rows(undefined);
  if (row === undefined)
    throw new Infeasible(
      `At no place can a row of pins at a pitch of ${um(step)} um in this order be reached with straight wires.`,
      'Ask for another pitch or another order, or leave "pitch_um" out.',
    );
  return { x: nets.map((_, i) => row.x0 + i * step), buses: row.buses.map((i) => nets[i].net) };
}

function bestRow(
  nets: readonly Leaving[],
  step: number,
  { first, last, pitch, grid }: RowSize,
  given: readonly string[] | undefined,
): Row | undefined {
  const span = (nets.length - 1) * step;
  const wires = nets.flatMap(({ trunks }, net) => trunks.map((x) => ({ x, net }))).sort((a, b) => a.x - b.x);
  const xs = wires.map(({ x }) => x);
  const ends = nets.map(({ trunks }) => [Math.min(...trunks), Math.max(...trunks)] as const);
  const rank = given && nets.map(({ net }) => given.indexOf(net));
  const middle2 = first + last - span;

  /** The buses of a row that begins at x0, or undefined where it cannot be. */
  const tried = (x0: number): Row | undefined => {
    const above = new Int32Array(nets.length);
    let bused = 0;
    let length = 0;
    for (let i = 0; i < nets.length; i++) {
      const drop = x0 + i * step;
      const isDirect = nets[i].trunks.length === 1 && drop === nets[i].trunks[0];
      if (rank === undefined ? !isDirect : rank[i] >= 0) {
        bused |= 1 << i;
        length += Math.max(drop, ends[i][1]) - Math.min(drop, ends[i][0]);
      } else if (!isDirect) return undefined;
      for (let w = firstAtLeast(xs, drop - pitch + 1); w < wires.length && xs[w] < drop + pitch; w++) {
        const { net, x } = wires[w];
        if (net !== i) above[i] |= 1 << net;
        else if (x !== drop) return undefined;
      }
    }
    const buses = inTurn(nets, bused, above, rank);
    return buses && { x0, buses, length };
  };

  const places = new Set([first, last - span, Math.floor(middle2 / 2 / grid) * grid]);
  for (const x of xs)
    for (let i = 0; i < nets.length; i++)
      for (const beside of [-pitch, 0, pitch]) {
        const x0 = x + beside - i * step;
        if (x0 >= first && x0 <= last - span && x0 % grid === 0) places.add(x0);
      }
  const offCentre = (x0: number) => Math.abs(2 * x0 - middle2);
  let best: Row | undefined;
  for (const x0 of [...places].sort((a, b) => offCentre(a) - offCentre(b) || a - b)) {
    const row = tried(x0);
    if (row === undefined) continue;
    const fewer = best === undefined ? -1 : row.buses.length - best.buses.length || row.length - best.length;
    if (fewer < 0) best = row;
  }
  return best;
}

/**
 * Nets with a bus from the ring down, each below all that have to lie above it: of those that may come next the one with the most trunks,
 * so that trunks are short, or the one that is given. Undefined where the demands go round in a circle.
 */
function inTurn(
  nets: readonly Leaving[],
  bused: number,
  above: Int32Array,
  rank: readonly number[] | undefined,
): number[] | undefined {
  const buses: number[] = [];
  for (let left = bused; left !== 0;) {
    let next = -1;
    for (let i = 0; i < nets.length; i++) {
      // A net without a bus is a wire from top to edge, which no drop comes near: it has no demands to meet.
      if (!((left >> i) & 1) || (above[i] & left) !== 0) continue;
      const before = (j: number) => (rank ? rank[i] < rank[j] : nets[i].trunks.length >= nets[j].trunks.length);
      if (next === -1 || before(next)) next = i;
    }
    if (next === -1 || (rank && rank[next] !== buses.length)) return undefined;
    buses.push(next);
    left &= ~(1 << next);
  }
  return buses;
}
