import type { Label, Part, Point, Polygon } from '../core/layout.js';
import { outline, type Rectangle } from '../core/rectangle.js';
import type { Stream, Technology } from '../spec/technology.js';

/** Collects the shapes of one structure by layer name. Shapes are whole nanometres on the technology's grid. */
export class Sheet {
  readonly polygons: Polygon[] = [];
  readonly labels: Label[] = [];
  readonly #streams = new Map<string, Stream>();
  readonly #pinOf = new Map<string, Stream>();
  readonly #grid: number;

  constructor(technology: Technology) {
    for (const layer of technology.layers) {
      this.#streams.set(layer.name, layer.stream);
      if (layer.kind === 'pin' && layer.of !== undefined) this.#pinOf.set(layer.of, layer.stream);
    }
    for (const via of technology.vias) this.#streams.set(via.name, via.stream);
    this.#grid = technology.grid_nm;
  }

  #place(layer: string): Stream {
    const stream = this.#streams.get(layer);
    if (stream === undefined) throw new RangeError(`no layer ${layer} in the technology`);
    return stream;
  }

  /** A rectangle. @throws RangeError if it is empty or off the grid: a defect of the drawing, never of its input. */
  add(layer: string, shape: Rectangle, meaning?: { net: string; part: Part }): void {
    if (shape.x0 >= shape.x1 || shape.y0 >= shape.y1) throw new RangeError(`empty shape on ${layer}`);
    this.outline(layer, outline(shape), meaning);
  }

  /** An outline, counter-clockwise from its lowest, then leftmost point. */
  outline(layer: string, xy: readonly Point[], meaning?: { net: string; part: Part }): void {
    for (const [x, y] of xy)
      if (x % this.#grid !== 0 || y % this.#grid !== 0)
        throw new RangeError(`point ${x},${y} on ${layer} is off the grid of ${this.#grid} nm`);
    const { layer: number, datatype } = this.#place(layer);
    this.polygons.push({ layer: number, datatype, ...meaning, xy });
  }

  /** A square via with its middle at x, y. */
  via(name: string, size: number, x: number, y: number, net: string): void {
    const half = size / 2;
    this.add(name, { x0: x - half, y0: y - half, x1: x + half, y1: y + half }, { net, part: 'via' });
  }

  /** A pin: its shape on the pin layer of a metal, and the name in its middle. */
  pin(metal: string, shape: Rectangle, net: string): void {
    const stream = this.#pinOf.get(metal);
    if (stream === undefined) throw new RangeError(`no pin layer for ${metal} in the technology`);
    this.polygons.push({ ...stream, net, part: 'pin', xy: outline(shape) });
    const middle: Point = [Math.floor((shape.x0 + shape.x1) / 2), Math.floor((shape.y0 + shape.y1) / 2)];
    this.labels.push({ text: net, layer: stream.layer, texttype: stream.datatype, xy: middle });
  }
}
