import type { Conductors } from './conductors.js';

/** Sums capacitances (aF) between the conductors of a drawing: by nets, by wires, by units. */
export class Tally {
  readonly conductors: Conductors;
  /** Of two nets with numbers a < b: [a * nets + b]. What `unit` holds is not in it. */
  readonly pair: Float64Array;
  readonly pairError: Float64Array;
  /** Of each conductor that is no unit's and on neither `VSS` nor `TOP`: to `TOP`, and to all else. */
  readonly top: Float64Array;
  readonly rest: Float64Array;
  /** From the bottom of each unit with its top on `TOP`, to all of `TOP`. */
  readonly unit: Float64Array;
  /** The net of the bottom of each such unit; -1 for other units. */
  readonly bottom: Int16Array;
  readonly #vss: number;
  readonly #top: number;

  constructor(conductors: Conductors) {
    const { nets, net, cell, cells, box } = conductors;
    this.conductors = conductors;
    this.#vss = nets.length - 2;
    this.#top = nets.length - 1;
    this.pair = new Float64Array(nets.length * nets.length);
    this.pairError = new Float64Array(nets.length * nets.length);
    this.top = new Float64Array(box.x0.length);
    this.rest = new Float64Array(box.x0.length);
    this.unit = new Float64Array(cells);
    this.bottom = new Int16Array(cells).fill(-1);
    const onTop = new Set<number>();
    for (let i = 0; i < net.length; i++) if (cell[i] >= 0 && net[i] === this.#top) onTop.add(cell[i]);
    for (let i = 0; i < net.length; i++)
      if (cell[i] >= 0 && net[i] !== this.#top && onTop.has(cell[i])) this.bottom[cell[i]] = net[i];
  }

  /**
   * Adds what a conductor (-1: the substrate) has to a net. Between two nets it counts once, from the one that comes first in
   * `Conductors.nets`; callers add both sides.
   * @param error of it, as a share
   */
  add(conductor: number, other: number, aF: number, error: number): void {
    const { net, cell } = this.conductors;
    const own = conductor < 0 ? this.#vss : net[conductor];
    if (own === other) return;
    const unit = conductor < 0 ? -1 : cell[conductor];
    if (unit >= 0 && other === this.#top && this.bottom[unit] >= 0) {
      this.unit[unit] += aF;
      return;
    }
    if (own < other) this.addPair(own, other, aF, error);
    if (unit < 0 && own < this.#vss) {
      if (other === this.#top) this.top[conductor] += aF;
      else this.rest[conductor] += aF;
    }
  }

  addPair(a: number, b: number, aF: number, error: number): void {
    const at = Math.min(a, b) * this.conductors.nets.length + Math.max(a, b);
    this.pair[at] += aF;
    this.pairError[at] += error * Math.abs(aF);
  }
}
