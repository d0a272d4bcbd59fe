import type { BoxIndex } from '../core/boxes.js';
import { nm } from '../core/units.js';
import type { Conductors } from './conductors.js';
import type { Drawing } from './drawing.js';

/** The place on a piece where it should have been joined to another. */
export interface Joint {
  readonly x: number;
  readonly y: number;
}

/** The nodes of each piece, in order. */
export function membersOf(c: Conductors): readonly (readonly number[])[] {
  const members: number[][] = Array.from({ length: c.pieces }, () => []);
  for (let n = 0; n < c.piece.length; n++) members[c.piece[n]].push(n);
  return members;
}

/**
 * Finds where a piece that has come off its net should be joined to it: at a via of its own that lands on nothing, where it overlaps
 * the net in a layer above or below with room for a via, or across the narrowest gap on its own layer.
 */
export class JointFinder {
  readonly #c: Conductors;
  readonly #index: readonly BoxIndex[];
  /** For each layer the layers that a via joins it to, with the side of that via. */
  readonly #across: readonly (readonly (readonly [layer: number, side: number])[])[];
  readonly #reach: number;
  readonly #loose: ReadonlyMap<number, Joint>;

  constructor(c: Conductors, drawing: Drawing) {
    this.#c = c;
    this.#index = c.layers.map((layer) => drawing.sheet(layer.name).index);
    this.#across = c.layers.map((layer) =>
      drawing.technology.vias
        .filter((via) => via.lower === layer.name || via.upper === layer.name)
        .map((via) => {
          const other = via.lower === layer.name ? via.upper : via.lower;
          return [c.layers.findIndex((l) => l.name === other), nm(via.size_um)] as const;
        })
        .filter(([l]) => l >= 0),
    );
    this.#loose = new Map(c.looseVias.flatMap((via) => via.meets.map((node) => [c.piece[node], via] as const)));
    this.#reach = 10 * Math.max(...c.layers.map((layer) => nm(layer.minSpacing_um ?? 0)), 1000);
  }

  /** @param wanted whether a piece is part of the net that this one came off. */
  find(nodes: readonly number[], wanted: (piece: number) => boolean): Joint | undefined {
    const c = this.#c;
    const piece = c.piece[nodes[0]];
    const loose = this.#loose.get(piece);
    if (loose) return loose;
    const other = (node: number) => c.piece[node] !== piece && wanted(c.piece[node]);
    return this.#overlap(nodes, other) ?? this.#gap(nodes, other);
  }

  #overlap(nodes: readonly number[], other: (node: number) => boolean): Joint | undefined {
    const { box, layerOf, base } = this.#c;
    for (const node of nodes) {
      if (layerOf[node] < 0) continue;
      for (const [layer, side] of this.#across[layerOf[node]])
        for (const i of this.#index[layer].search(box.x0[node], box.y0[node], box.x1[node], box.y1[node])) {
          const there = base[layer] + i;
          const [x0, x1] = [Math.max(box.x0[node], box.x0[there]), Math.min(box.x1[node], box.x1[there])];
          const [y0, y1] = [Math.max(box.y0[node], box.y0[there]), Math.min(box.y1[node], box.y1[there])];
          if (x1 - x0 >= side && y1 - y0 >= side && other(there)) return { x: (x0 + x1) / 2, y: (y0 + y1) / 2 };
        }
    }
    return undefined;
  }

  #gap(nodes: readonly number[], other: (node: number) => boolean): Joint | undefined {
    const { box, layerOf, base } = this.#c;
    let best: Joint | undefined;
    let window = this.#reach;
    let least = window * window;
    for (const node of nodes) {
      const layer = layerOf[node];
      if (layer < 0) continue;
      const found = this.#index[layer].search(
        box.x0[node] - window,
        box.y0[node] - window,
        box.x1[node] + window,
        box.y1[node] + window,
      );
      for (const i of found) {
        const there = base[layer] + i;
        const dx = Math.max(0, box.x0[there] - box.x1[node], box.x0[node] - box.x1[there]);
        const dy = Math.max(0, box.y0[there] - box.y1[node], box.y0[node] - box.y1[there]);
        if (dx * dx + dy * dy >= least || !other(there)) continue;
        least = dx * dx + dy * dy;
        window = Math.ceil(Math.sqrt(least));
        best = { x: middle(box.x0, box.x1, node, there), y: middle(box.y0, box.y1, node, there) };
      }
    }
    return best;
  }
}

/** Along one axis: the middle of what two boxes have in common, or else the end of the first that is nearer to the second. */
function middle(low: Int32Array, high: Int32Array, node: number, there: number): number {
  if (low[there] > high[node]) return high[node];
  if (high[there] < low[node]) return low[node];
  return (Math.max(low[node], low[there]) + Math.min(high[node], high[there])) / 2;
}
