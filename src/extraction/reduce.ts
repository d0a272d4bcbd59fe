import type { LoadedNet } from './timing.js';

/** A net with few nodes: node 0 is its pin. */
export interface ReducedNet {
  readonly name: string;
  /** Ohms between two nodes, each pair once. */
  readonly resistors: readonly { readonly a: number; readonly b: number; readonly ohm: number }[];
  /** Capacitance (fF) of each node to `TOP`, and to all else. */
  readonly top: readonly number[];
  readonly rest: readonly number[];
  /** The node of the unit that is reached last. */
  readonly last: number;
}

/**
 * A net reduced to a pin and a few more nodes, the quickest taken out first: those with least capacitance for the conductance to their
 * neighbours. Only ends of wires and nodes between two neighbours go, so a tree stays one. The capacitance of a node that goes is shared out
 * to its neighbours by their conductances, which is what Gaussian elimination does to G t = c: Elmore delays t of the nodes that stay do not
 * change, nor do sums of capacitance.
 * B. N. Sheehan, "TICER: Realizable Reduction of Extracted RC Circuits", ICCAD 1999, from memory.
 *
 * @param most nodes besides the pin that may stay; that of the unit reached last does.
 */
export function reducedNet({ net, loads, last }: LoadedNet, most: number): ReducedNet {
  const pin = net.pins[0];
  const isPin = new Set(net.pins);
  const rows = Array.from({ length: net.nodes }, () => new Map<number, number>());
  const top = loads.top.slice();
  const rest = loads.rest.slice();
  const at = (node: number) => (isPin.has(node) ? pin : node);
  const join = (a: number, b: number, siemens: number) => {
    if (a === b) return;
    rows[a].set(b, (rows[a].get(b) ?? 0) + siemens);
    rows[b].set(a, (rows[b].get(a) ?? 0) + siemens);
  };
  net.ohm.forEach((ohm, r) => join(at(net.a[r]), at(net.b[r]), 1 / ohm));
  for (const other of net.pins.filter((node) => node !== pin)) {
    top[pin] += top[other];
    rest[pin] += rest[other];
  }

  // In each round the quicker half of what may go does, unless a neighbour has gone before it in that round.
  const gone = new Uint8Array(net.nodes);
  for (const other of net.pins) gone[other] = other === pin ? 0 : 1;
  let left = net.nodes - net.pins.length;
  const time = new Float64Array(net.nodes);
  let may = Array.from(rows.keys()).filter((node) => node !== pin && node !== last);
  while (left > most) {
    may = may.filter((node) => gone[node] === 0);
    const round = may.filter((node) => rows[node].size <= 2);
    for (const node of round) {
      let siemens = 0;
      for (const g of rows[node].values()) siemens += g;
      time[node] = (top[node] + rest[node]) / siemens;
    }
    round.sort((a, b) => time[a] - time[b] || a - b);
    if (round.length === 0) break;
    const touched = new Set<number>();
    for (const node of round.slice(0, Math.ceil(round.length / 2))) {
      if (left === most) break;
      if (touched.has(node)) continue;
      const ends = [...rows[node]];
      const siemens = ends.reduce((sum, [, g]) => sum + g, 0);
      for (const [end, g] of ends) {
        touched.add(end);
        rows[end].delete(node);
        top[end] += (top[node] * g) / siemens;
        rest[end] += (rest[node] * g) / siemens;
      }
      if (ends.length === 2) join(ends[0][0], ends[1][0], (ends[0][1] * ends[1][1]) / siemens);
      rows[node].clear();
      gone[node] = 1;
      left--;
    }
  }

  // Numbered from the pin outwards.
  const number = new Map([[pin, 0]]);
  const resistors: { a: number; b: number; ohm: number }[] = [];
  for (const node of number.keys())
    for (const [end, siemens] of rows[node]) {
      if (!number.has(end)) number.set(end, number.size);
      const [a, b] = [number.get(node)!, number.get(end)!];
      if (a < b) resistors.push({ a, b, ohm: 1 / siemens });
    }
  const nodes = [...number.keys()];
  return {
    name: net.name,
    resistors,
    top: nodes.map((node) => top[node]),
    rest: nodes.map((node) => rest[node]),
    last: number.get(last) ?? 0,
  };
}
