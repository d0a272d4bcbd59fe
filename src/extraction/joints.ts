import type { Boxes } from '../core/boxes.js';
import { BoxList } from '../core/boxes.js';
import { DisjointSets } from '../core/components.js';
import { orderBy } from '../core/order.js';
import type { Rectangle } from '../core/rectangle.js';
import type { Resistors } from './nodal.js';

/**
 * Stretches of straight wire, each between two nodes, `a` at its left or lower end; before the first joint of a wire and beyond its last one
 * the two are the same.
 */
export interface Stretches extends Boxes {
  readonly a: Int32Array;
  readonly b: Int32Array;
  /** 1 where the wire runs along y. */
  readonly upright: Uint8Array;
  /** Number of the layer that the wire was added with. */
  readonly layer: Int16Array;
}

/** A place on a body where others may be joined, and what lies between it and the body's centre line. */
export interface End {
  readonly end: number;
  readonly ohm: number;
}

interface Wire extends Rectangle {
  readonly layer: number;
  /** Ohms per square. */
  readonly sheet: number;
}

/**
 * Bodies that conduct and the places where they are joined. A wire is a straight rectangle with its centre line along its longer side; a
 * shape is one node all over.
 */
export class Joints {
  readonly #bodies: (Wire | undefined)[] = [];
  readonly #body: number[] = [];
  /** Along the centre line, in half-nanometres. */
  readonly #at: number[] = [];
  readonly #a: number[] = [];
  readonly #b: number[] = [];
  readonly #ohm: number[] = [];

  addWire(wire: Wire): number {
    return this.#bodies.push(wire) - 1;
  }

  addShape(): number {
    return this.#bodies.push(undefined) - 1;
  }

  /**
   * The place where something joins a body that covers the window there, or touches it in a side of it. On a wire it is the window's middle on
   * the centre line; from there to the window's own middle current runs across, as wide as the window. What joins at a wire's end is on its
   * centre line already.
   */
  end(body: number, { x0, y0, x1, y1 }: Rectangle): End {
    const wire = this.#bodies[body];
    if (wire === undefined) return { end: this.#place(body, 0), ohm: 0 };
    const flat = isFlat(wire);
    const [along, wide] = flat ? [x0 + x1, x1 - x0] : [y0 + y1, y1 - y0];
    const off = flat ? y0 + y1 - wire.y0 - wire.y1 : x0 + x1 - wire.x0 - wire.x1;
    const ohm = wide === 0 ? 0 : (wire.sheet * Math.abs(off)) / 2 / wide;
    return { end: this.#place(body, along), ohm };
  }

  link(a: End, b: End, ohm = 0): void {
    this.#a.push(a.end);
    this.#b.push(b.end);
    this.#ohm.push(a.ohm + ohm + b.ohm);
  }

  #place(body: number, at: number): number {
    this.#at.push(at);
    return this.#body.push(body) - 1;
  }

  /** The network, and the node that each end has become: ends with nothing between them are one. */
  finish(): { readonly network: Resistors; readonly stretches: Stretches; readonly nodeOf: Int32Array } {
    const [body, at] = [Int32Array.from(this.#body), Int32Array.from(this.#at)];
    const nodes = new DisjointSets(body.length);
    const links = { a: [...this.#a], b: [...this.#b], ohm: [...this.#ohm] };
    const boxes = new BoxList();
    const sides = { a: [] as number[], b: [] as number[], upright: [] as number[], layer: [] as number[] };
    const stretch = (wire: Wire, a: number, b: number) => {
      const upright = !isFlat(wire);
      const from = a < 0 ? (upright ? wire.y0 : wire.x0) : at[a] >> 1;
      const to = b < 0 ? (upright ? wire.y1 : wire.x1) : at[b] >> 1;
      if (to <= from) return;
      if (upright) boxes.push(wire.x0, from, wire.x1, to);
      else boxes.push(from, wire.y0, to, wire.y1);
      sides.a.push(a < 0 ? b : a);
      sides.b.push(b < 0 ? a : b);
      sides.upright.push(upright ? 1 : 0);
      sides.layer.push(wire.layer);
    };
    const order = orderBy(body, at);
    for (let i = 0; i < order.length;) {
      const own = body[order[i]];
      const wire = this.#bodies[own];
      let before = -1;
      for (; i < order.length && body[order[i]] === own; i++) {
        const end = order[i];
        const ohm = wire && before >= 0 ? along(wire, (at[end] - at[before]) / 2) : 0;
        if (before >= 0 && ohm === 0) nodes.join(before, end);
        else if (before >= 0) {
          links.a.push(before);
          links.b.push(end);
          links.ohm.push(ohm);
        }
        if (wire) stretch(wire, before, end);
        before = end;
      }
      if (wire) stretch(wire, before, -1);
    }
    links.ohm.forEach((ohm, i) => ohm === 0 && nodes.join(links.a[i], links.b[i]));
    const { count, of: nodeOf } = nodes.numbered();
    const resists = links.ohm.flatMap((ohm, i) => (ohm > 0 ? i : []));
    const pick = (list: readonly number[]) => resists.map((i) => list[i]);
    return {
      network: {
        nodes: count,
        a: looked(pick(links.a), nodeOf),
        b: looked(pick(links.b), nodeOf),
        ohm: Float64Array.from(pick(links.ohm)),
      },
      stretches: {
        ...boxes.finish(),
        a: looked(sides.a, nodeOf),
        b: looked(sides.b, nodeOf),
        upright: Uint8Array.from(sides.upright),
        layer: Int16Array.from(sides.layer),
      },
      nodeOf,
    };
  }
}

function looked(list: readonly number[], up: Int32Array): Int32Array {
  const found = new Int32Array(list.length);
  for (let i = 0; i < found.length; i++) found[i] = up[list[i]];
  return found;
}

const isFlat = ({ x0, y0, x1, y1 }: Rectangle): boolean => x1 - x0 >= y1 - y0;

/** Sheet resistance times length over width. */
const along = (wire: Wire, length: number): number =>
  (wire.sheet * length) / (isFlat(wire) ? wire.y1 - wire.y0 : wire.x1 - wire.x0);
