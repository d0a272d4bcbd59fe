import { Infeasible } from '../core/problem.js';

/** One net that leaves through the block's bottom edge. */
export interface Leaving {
  readonly net: string;
  /** Left edges of its trunks. */
  readonly trunks: readonly number[];
}

export interface Pins {
  /** Left edge of each net's drop, nets in the given order. */
  readonly x: readonly number[];
  /** Nets with a bus, from the ring down. A net without one has its only trunk above its pin. */
  readonly buses: readonly string[];
}

/**
 * Places the pins from left to right in the order given, and the buses that lead to them: the net with the most trunks next to the ring,
 * so that the trunks are short. A drop runs from its bus down past the buses below: it keeps clear of every trunk that ends lower.
 *
 * @param size `pitch` from the left edge of a drop to that of the next, or of any other vertical wire beside it.
 * @throws Infeasible where the pins do not fit between `first` and `last`.
 */
export function placePins(
  nets: readonly Leaving[],
  size: { first: number; last: number; pitch: number; grid: number },
  given?: readonly string[],
): Pins {
  const { first, last, pitch } = size;
  const direct = new Set(nets.filter((net) => net.trunks.length === 1).map((net) => net.net));
  if (given !== undefined) for (const net of given) direct.delete(net);
  // A direct net that is out of order gets a bus; each round takes one away, so this ends.
  for (;;) {
    const order = nets.filter((net) => !direct.has(net.net));
    const known = (net: string) => given?.indexOf(net) ?? -1;
    const buses = order
      .map((net, i) => ({ net: net.net, count: net.trunks.length, i }))
      .sort((a, b) => known(a.net) - known(b.net) || b.count - a.count || b.i - a.i)
      .map((entry) => entry.net);
    const result = sweep(nets, direct, buses, size);
    if (typeof result !== 'string') return { x: result, buses };
    if (result !== '' && direct.delete(result)) continue;
    if (direct.size === 0)
      throw new Infeasible(
        `${nets.length} pins at a pitch of ${pitch / 1000} um do not fit the block's bottom edge (${(last - first) / 1000} um).`,
        'Use a wider core or a ring.',
      );
    direct.delete([...direct].pop()!);
  }
}

/** The drops from left to right, or the name of a direct net that stands in the way ("" for none in particular). */
function sweep(
  nets: readonly Leaving[],
  direct: ReadonlySet<string>,
  buses: readonly string[],
  size: { first: number; last: number; pitch: number; grid: number },
): number[] | string {
  const { first, last, pitch, grid } = size;
  const depth = new Map(buses.map((net, i) => [net, i]));
  const level = (net: string) => depth.get(net) ?? Infinity;
  const x: number[] = [];
  const anchor = nets.findIndex((net) => direct.has(net.net));
  // Pins before the first direct net stand left of it, with room to dodge; without one they gather in the middle.
  const start =
    anchor === -1 ? (first + last - (nets.length - 1) * pitch) / 2 : nets[anchor].trunks[0] - 2 * anchor * pitch;
  let cursor = Math.max(first, Math.floor(start / grid) * grid);
  for (let i = 0; i < nets.length; i++) {
    const net = nets[i];
    const room = last - (nets.length - 1 - i) * pitch;
    if (direct.has(net.net)) {
      const at = net.trunks[0];
      if ((i > 0 && at < x[i - 1] + pitch) || at > room) return net.net;
      x.push(at);
    } else {
      let at = i === 0 ? cursor : Math.max(cursor, x[i - 1] + pitch);
      // In the way are the net's own trunks, and foreign ones that pass its bus: their own bus lies lower, or they run to the edge.
      const passing = nets
        .filter((other) => other === net || level(other.net) > level(net.net))
        .flatMap((other) => other.trunks);
      for (let moved = true; moved;) {
        moved = false;
        for (const trunk of passing)
          if (Math.abs(trunk - at) < pitch) {
            at = trunk + pitch;
            moved = true;
          }
      }
      if (at > room) return anchor === -1 ? '' : nets[anchor].net;
      x.push(at);
    }
    cursor = x[i] + pitch;
  }
  return x;
}
