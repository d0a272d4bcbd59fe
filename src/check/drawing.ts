import type { Boxes } from '../core/boxes.js';
import { BoxIndex } from '../core/boxes.js';
import type { FlatDrawing, FlatLayer } from '../core/flatten.js';
import { flatten, streamKey } from '../core/flatten.js';
import { unitedSlabs } from '../core/slabs.js';
import type { Polygons } from '../spec/polygons.js';
import type { Layer, Technology, Via } from '../spec/technology.js';

const noBoxes = (): FlatLayer => ({
  layer: 0,
  datatype: 0,
  x0: new Int32Array(),
  y0: new Int32Array(),
  x1: new Int32Array(),
  y1: new Int32Array(),
  shape: new Int32Array(),
  cell: new Int32Array(),
});

/** A region as disjoint slabs, with an index of them. */
export interface Region {
  readonly slabs: Boxes;
  readonly slabIndex: BoxIndex;
}

/** One layer or via of the technology as drawn: its rectangles, their union, and an index of either. */
export interface Sheet extends Region {
  readonly boxes: FlatLayer;
  readonly index: BoxIndex;
}

/** A drawing flattened, with what several rules ask of it. */
export class Drawing {
  readonly technology: Technology;
  readonly flat: FlatDrawing;
  readonly #layerSheets: ReadonlyMap<string, Sheet>;
  readonly #viaSheets: ReadonlyMap<string, Sheet>;

  constructor(p: Polygons) {
    this.technology = p.technology;
    const { unit } = p.technology;
    this.flat = flatten(p.structures, p.topStructure, unit.kind === 'named-cell' ? unit.cell : undefined);
    const sheets = (ofAll: readonly (Layer | Via)[]) =>
      new Map(
        ofAll.map(({ name, stream }) => {
          const boxes = this.flat.layers.get(streamKey(stream)) ?? noBoxes();
          const slabs = unitedSlabs(boxes);
          return [name, { boxes, index: new BoxIndex(boxes), slabs, slabIndex: new BoxIndex(slabs) }];
        }),
      );
    this.#layerSheets = sheets(p.technology.layers);
    this.#viaSheets = sheets(p.technology.vias);
  }

  /** What is drawn on a layer. @throws RangeError for a name that the technology does not have. */
  sheet(layer: string): Sheet {
    const sheet = this.#layerSheets.get(layer);
    if (!sheet) throw new RangeError(`the technology has no layer "${layer}"`);
    return sheet;
  }

  /** What is drawn of a via. @throws RangeError for a name that the technology does not have. */
  viaSheet(via: string): Sheet {
    const sheet = this.#viaSheets.get(via);
    if (!sheet) throw new RangeError(`the technology has no via "${via}"`);
    return sheet;
  }

  layer(name: string): Layer {
    const layer = this.technology.layers.find((l) => l.name === name);
    if (!layer) throw new RangeError(`the technology has no layer "${name}"`);
    return layer;
  }
}

const conductingKinds = new Set(['metal', 'plate', 'diffusion', 'well']);
export const conducts = (layer: Layer): boolean => conductingKinds.has(layer.kind);

/** Whether layer `a` lies below layer `b`; without heights, as they are listed. */
export function liesBelow(a: Layer, b: Layer, technology: Technology): boolean {
  if (a.height_um !== undefined && b.height_um !== undefined) return a.height_um < b.height_um;
  return technology.layers.indexOf(a) < technology.layers.indexOf(b);
}

/** The conducting layers that a via meets from its lower to its upper one. */
export function crossedLayers(via: Via, drawing: Drawing): Layer[] {
  const { technology } = drawing;
  const [lower, upper] = [drawing.layer(via.lower), drawing.layer(via.upper)];
  // A well lies below whatever contacts come from.
  const between = (l: Layer) => l.kind !== 'well' && liesBelow(lower, l, technology) && liesBelow(l, upper, technology);
  return technology.layers.filter((l) => conducts(l) && (l === lower || l === upper || between(l)));
}

/** The area (nm2) of a window that a region covers. */
export function coveredArea(sheet: Region, x0: number, y0: number, x1: number, y1: number): number {
  const { slabs } = sheet;
  let area = 0;
  for (const i of sheet.slabIndex.search(x0, y0, x1, y1))
    area +=
      Math.max(0, Math.min(x1, slabs.x1[i]) - Math.max(x0, slabs.x0[i])) *
      Math.max(0, Math.min(y1, slabs.y1[i]) - Math.max(y0, slabs.y0[i]));
  return area;
}
