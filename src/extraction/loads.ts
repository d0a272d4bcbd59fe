import { BoxIndex } from '../core/boxes.js';
import type { Coupling, WireLoad } from './coupling.js';
import type { Net } from './net.js';
import type { WireNetwork } from './wire-network.js';

/** Capacitance (fF) of each node of a net to `TOP`, and to all else. What `TOP` itself has is the rest. */
export interface NodeLoads {
  readonly top: Float64Array;
  readonly rest: Float64Array;
}

/** A part of a wire's length, as large as `area` says, at `share` of the way from node `a` to node `b`. */
interface Part {
  readonly a: number;
  readonly b: number;
  readonly share: number;
  readonly area: number;
}

/**
 * Spreads the capacitances of nets over their nodes. What hangs on a wire goes to the nodes on either side of each stretch of it, to the nearer
 * one more, so that all Elmore delays are those of the wire as a line. What the pairs hold beyond the wires hangs on the units, on all alike;
 * on the pins where a net has none.
 */
export function nodeLoads({ pairs, wires }: Coupling, network: WireNetwork, nets: readonly Net[]): NodeLoads[] {
  const index = new BoxIndex(network.stretches);
  const wiresOf = new Map<string, WireLoad[]>(nets.map(({ name }) => [name, []]));
  for (const wire of wires) wiresOf.get(wire.net)?.push(wire);
  return nets.map((net) => {
    const loads: NodeLoads = { top: new Float64Array(net.nodes), rest: new Float64Array(net.nodes) };
    const left = { top: 0, rest: 0 };
    for (const { a, b, fF } of pairs)
      if (a === net.name || b === net.name)
        left[(a !== net.name && a === 'TOP') || (b !== net.name && b === 'TOP') ? 'top' : 'rest'] += fF;
    const ends = new Map(net.stretches.map((own) => [own.stretch, own]));
    for (const wire of wiresOf.get(net.name) ?? []) {
      const parts = partsOf(wire, network, index, ends);
      const all = parts.reduce((sum, { area }) => sum + area, 0);
      for (const [key, fF] of [
        ['top', wire.top_fF],
        ['rest', wire.load_fF],
      ] as const) {
        for (const { a, b, share, area } of parts) {
          loads[key][a] += (fF * area * (1 - share)) / all;
          loads[key][b] += (fF * area * share) / all;
        }
        if (all > 0) left[key] -= fF;
      }
    }
    const places = net.units.length > 0 ? net.units.map(({ node }) => node) : net.pins;
    for (const node of places) {
      loads.top[node] += left.top / places.length;
      loads.rest[node] += left.rest / places.length;
    }
    return loads;
  });
}

/** The stretches of a net that a drawn wire lies on. */
function partsOf(
  wire: WireLoad,
  { stretches, layers }: WireNetwork,
  index: BoxIndex,
  ends: ReadonlyMap<number, { readonly a: number; readonly b: number }>,
): Part[] {
  const parts: Part[] = [];
  for (const s of index.search(wire.x0, wire.y0, wire.x1, wire.y1).sort((i, j) => i - j)) {
    const own = ends.get(s);
    if (own === undefined || layers[stretches.layer[s]].name !== wire.layer) continue;
    const [x0, x1] = [Math.max(stretches.x0[s], wire.x0), Math.min(stretches.x1[s], wire.x1)];
    const [y0, y1] = [Math.max(stretches.y0[s], wire.y0), Math.min(stretches.y1[s], wire.y1)];
    if (x0 >= x1 || y0 >= y1) continue;
    const share =
      stretches.upright[s] === 1
        ? ((y0 + y1) / 2 - stretches.y0[s]) / (stretches.y1[s] - stretches.y0[s])
        : ((x0 + x1) / 2 - stretches.x0[s]) / (stretches.x1[s] - stretches.x0[s]);
    parts.push({ a: own.a, b: own.b, share, area: (x1 - x0) * (y1 - y0) });
  }
  return parts;
}
