import { figure } from '../core/figure.js';
import type { Circuit } from '../extraction/circuit.js';
import { foldCase } from '../spec/pin-map.js';
import type { Polygons } from '../spec/polygons.js';
import { TOP, VSS } from './drawn-shapes.js';
import { netlistText, remarkOnPins, subcircuitOf } from './spice-text.js';
import type { NetlistOptions } from './spice-text.js';

/** Capacitances are left out below this share of their pair: what rounding leaves of a sum. */
const SLIVER = 1e-12;

/**
 * Two lists of shares, each adding up to 1, laid side by side: which share of the one goes with which of the other. At most as many pieces as
 * both lists have entries, and every entry's pieces add up to it.
 *
 *     |  0  | 1 |    2    |
 *     | 0 |    1    |  2  |      pieces 0-0, 0-1, 1-1, 2-1, 2-2
 */
function sideBySide(
  one: readonly number[],
  other: readonly number[],
  piece: (i: number, j: number, share: number) => void,
): void {
  let [left, right] = [one[0], other[0]];
  for (let i = 0, j = 0; i < one.length && j < other.length;) {
    const share = Math.min(left, right);
    if (share > SLIVER) piece(i, j, share);
    left -= share;
    right -= share;
    if (left <= right) left = one[++i];
    else right = other[++j];
  }
}

/**
 * A SPICE netlist of the drawing as extracted: the wires of each bit as resistors from its pin on, and all capacitances, of the units too,
 * between their nodes, to `TOP`, to `VSS`. Capacitances between two nets add up to what the extraction says, and so do those of each node.
 * @throws InputError with every name that a netlist cannot hold
 */
export function writeExtractedNetlist(
  p: Polygons,
  { coupling, nets }: Circuit,
  { pins }: Pick<NetlistOptions, 'pins'> = {},
): string {
  const circuit = subcircuitOf(p, pins === undefined ? {} : { pins });
  const taken = new Set(circuit.pins.map(foldCase));
  const ownName = (name: string): string => {
    while (taken.has(foldCase(name))) name += '_';
    taken.add(foldCase(name));
    return name;
  };
  const reduced = new Map(nets.map((net) => [net.name, net]));
  const nodes = new Map(
    coupling.nets.map((name) => {
      const pin = circuit.nodeOf(name);
      const inner = reduced.get(name)?.top.slice(1) ?? [];
      return [name, [pin, ...inner.map((_, i) => ownName(`${pin}_${i + 1}`))]];
    }),
  );
  const lines: string[][] = [];
  for (const { name, resistors } of nets)
    for (const { a, b, ohm } of resistors)
      lines.push([`R${lines.length + 1}`, nodes.get(name)![a], nodes.get(name)![b], `${figure(ohm)}`]);

  const sharesOf = (name: string, other: string): readonly number[] => {
    const net = reduced.get(name);
    if (net === undefined) return [1];
    const loads = other === TOP ? net.top : net.rest;
    const all = loads.reduce((sum, fF) => sum + fF, 0);
    return all > 0 ? loads.map((fF) => fF / all) : [1];
  };
  let count = 0;
  for (const { a, b, fF } of coupling.pairs) {
    if (!(fF > 0)) continue;
    sideBySide(sharesOf(a, b), sharesOf(b, a), (i, j, share) =>
      lines.push([`C${++count}`, nodes.get(a)![i], nodes.get(b)![j], `${figure(fF * share)}f`]),
    );
  }
  return netlistText(
    circuit,
    'wires and vias as resistors, capacitances between all conductors',
    [
      remarkOnPins,
      'Wires of each net are reduced to few nodes: Elmore delays at those that are left are as drawn.',
      `${circuit.nodeOf(VSS)} is a node without resistance.`,
    ],
    lines,
  );
}
