/** Resistors between nodes 0 .. nodes - 1; those of 0 ohm are not among them. */
export interface Resistors {
  readonly nodes: number;
  readonly a: Int32Array;
  readonly b: Int32Array;
  readonly ohm: Float64Array;
}

/**
 * Nodal analysis of a resistor network, solved once for any number of currents. Nodes are eliminated one by one, those with fewest
 * neighbours first: a star becomes a mesh, sums of positive numbers all the way. In a tree every node has one neighbour left when its turn
 * comes, so the cost is that of its nodes; loops cost what they weave.
 */
export class Nodal {
  readonly #order: Int32Array;
  /** Neighbours of the node eliminated as number n that come after it: `#to[#start[n]]` .. `#to[#start[n + 1] - 1]`. */
  readonly #start: Int32Array;
  readonly #to: readonly number[];
  readonly #siemens: readonly number[];
  readonly #all: Float64Array;
  readonly #nodes: number;

  /**
   * @param held nodes that are kept at 0 V.
   * @throws RangeError for a node that no way leads from to a held one.
   */
  constructor({ nodes, a, b, ohm }: Resistors, held: readonly number[]) {
    this.#nodes = nodes;
    const isHeld = new Uint8Array(nodes);
    for (const node of held) isHeld[node] = 1;
    const rows = Array.from({ length: nodes }, () => new Map<number, number>());
    const toHeld = new Float64Array(nodes);
    const join = (i: number, j: number, siemens: number) => {
      if (isHeld[j] === 1) toHeld[i] += siemens;
      else rows[i].set(j, (rows[i].get(j) ?? 0) + siemens);
    };
    for (let r = 0; r < ohm.length; r++) {
      if (a[r] === b[r]) continue;
      if (isHeld[a[r]] === 0) join(a[r], b[r], 1 / ohm[r]);
      if (isHeld[b[r]] === 0) join(b[r], a[r], 1 / ohm[r]);
    }

    // Lists by number of neighbours; a node whose number has changed since stands in a later list as well.
    const waiting: number[][] = [];
    const wait = (node: number) => (waiting[rows[node].size] ??= []).push(node);
    const done = isHeld.slice();
    let free = 0;
    for (let node = nodes - 1; node >= 0; node--)
      if (isHeld[node] === 0) {
        wait(node);
        free++;
      }
    const order = new Int32Array(free);
    const start = new Int32Array(free + 1);
    const all = new Float64Array(free);
    const to: number[] = [];
    const siemens: number[] = [];
    for (let n = 0, degree = 0; n < free;) {
      const node = waiting[degree]?.pop();
      if (node === undefined) {
        degree++;
        continue;
      }
      const row = rows[node];
      if (done[node] === 1 || row.size !== degree) continue;
      done[node] = 1;
      let sum = toHeld[node];
      for (const g of row.values()) sum += g;
      if (!(sum > 0)) throw new RangeError('a part of the network hangs on no held node');
      const star = [...row];
      star.forEach(([i, gi], one) => {
        rows[i].delete(node);
        toHeld[i] += (gi * toHeld[node]) / sum;
        for (let other = one + 1; other < star.length; other++) {
          const [j, gj] = star[other];
          const between = (rows[i].get(j) ?? 0) + (gi * gj) / sum;
          rows[i].set(j, between);
          rows[j].set(i, between);
        }
      });
      for (const [i, g] of star) {
        wait(i);
        degree = Math.min(degree, rows[i].size);
        to.push(i);
        siemens.push(g);
      }
      row.clear();
      order[n] = node;
      all[n] = sum;
      start[++n] = to.length;
    }
    this.#order = order;
    this.#start = start;
    this.#to = to;
    this.#siemens = siemens;
    this.#all = all;
  }

  /** @param amperes into each node. @returns volts of each node, 0 of those that are held. */
  solve(amperes: Float64Array): Float64Array {
    const current = amperes.slice();
    const count = this.#order.length;
    for (let n = 0; n < count; n++) {
      const own = current[this.#order[n]];
      for (let e = this.#start[n]; e < this.#start[n + 1]; e++)
        current[this.#to[e]] += (own * this.#siemens[e]) / this.#all[n];
    }
    const volts = new Float64Array(this.#nodes);
    for (let n = count - 1; n >= 0; n--) {
      let sum = current[this.#order[n]];
      for (let e = this.#start[n]; e < this.#start[n + 1]; e++) sum += this.#siemens[e] * volts[this.#to[e]];
      volts[this.#order[n]] = sum / this.#all[n];
    }
    return volts;
  }
}
