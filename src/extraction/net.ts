import { DisjointSets } from '../core/components.js';
import type { Resistors } from './nodal.js';
import type { WireNetwork } from './wire-network.js';

/** One net of a drawing as a resistor network of its own: all that its pins are joined to. */
export interface Net extends Resistors {
  readonly name: string;
  /** Nodes under the net's pin labels. */
  readonly pins: readonly number[];
  /** The units that have a terminal on the net, the bottom one where it is both: number of the cell in the drawing, and the node. */
  readonly units: readonly { readonly cell: number; readonly node: number }[];
  /** Numbers of the stretches of the drawing's network, and the nodes that they lie between. */
  readonly stretches: readonly { readonly stretch: number; readonly a: number; readonly b: number }[];
  /** Its layers and vias whose resistance is not stated, and was taken for none. */
  readonly unstated: readonly string[];
}

/** The nets of a drawing that have a pin, in the order of the names given; those without a pin are left out. */
export function netsOf(network: WireNetwork, names: readonly string[]): Net[] {
  const parts = new DisjointSets(network.nodes);
  for (let r = 0; r < network.ohm.length; r++) parts.join(network.a[r], network.b[r]);
  const { count, of: part } = parts.numbered();
  const number = new Int32Array(network.nodes);
  const size = new Int32Array(count);
  for (let node = 0; node < network.nodes; node++) number[node] = size[part[node]]++;
  const inPart = <T>(items: Iterable<T>, nodeOf: (item: T) => number): readonly (readonly T[])[] => {
    const lists: T[][] = Array.from({ length: count }, () => []);
    for (const item of items) lists[part[nodeOf(item)]].push(item);
    return lists;
  };
  const resistors = inPart(network.ohm.keys(), (r) => network.a[r]);
  const stretches = inPart(network.stretches.a.keys(), (s) => network.stretches.a[s]);
  const terminals = network.units.flatMap(({ cell, bottom, top }) =>
    (part[bottom] === part[top] ? [bottom] : [bottom, top]).map((node) => ({ cell, node })),
  );
  const units = inPart(terminals, ({ node }) => node);
  const bareVias = inPart(network.bareVias, ({ node }) => node);
  const unstated = (own: number): string[] => {
    const bare = ({ stretches: { layer }, layers }: WireNetwork, s: number): string[] =>
      layers[layer[s]].sheetResistance_ohm === undefined ? [layers[layer[s]].name] : [];
    return [
      ...new Set([...stretches[own].flatMap((s) => bare(network, s)), ...bareVias[own].map(({ via }) => via)]),
    ].sort();
  };
  return names.flatMap((name) => {
    const pins = network.pins.get(name);
    if (pins === undefined) return [];
    const own = part[pins[0]];
    return [
      {
        name,
        nodes: size[own],
        a: Int32Array.from(resistors[own], (r) => number[network.a[r]]),
        b: Int32Array.from(resistors[own], (r) => number[network.b[r]]),
        ohm: Float64Array.from(resistors[own], (r) => network.ohm[r]),
        pins: pins.filter((node) => part[node] === own).map((node) => number[node]),
        units: units[own].map(({ cell, node }) => ({ cell, node: number[node] })),
        stretches: stretches[own].map((s) => ({
          stretch: s,
          a: number[network.stretches.a[s]],
          b: number[network.stretches.b[s]],
        })),
        unstated: unstated(own),
      },
    ];
  });
}
