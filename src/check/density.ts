import type { Polygons } from '../spec/polygons.js';
import { Drawing, conducts, coveredArea } from './drawing.js';

/** The share of the block's outline that a layer covers, 0 to 1. */
export interface LayerDensity {
  readonly layer: string;
  readonly density: number;
}

/**
 * Drawn density of every conducting layer within the block's outline, in the technology's order: what a density rule would count before
 * any fill. What a named cell of one's own library brings is not in it.
 * @returns an empty list for a drawing without an outline.
 * @throws InputError if the structures cannot be flattened.
 */
export function layerDensities(p: Polygons): LayerDensity[] {
  const drawing = new Drawing(p);
  const { slabs } = drawing.sheet(p.technology.roles.boundary);
  const blocks = Array.from(slabs.x0, (x0, i) => [x0, slabs.y0[i], slabs.x1[i], slabs.y1[i]] as const);
  const whole = blocks.reduce((sum, [x0, y0, x1, y1]) => sum + (x1 - x0) * (y1 - y0), 0);
  if (whole === 0) return [];
  return p.technology.layers.filter(conducts).map(({ name }) => {
    const sheet = drawing.sheet(name);
    const covered = blocks.reduce((sum, [x0, y0, x1, y1]) => sum + coveredArea(sheet, x0, y0, x1, y1), 0);
    return { layer: name, density: covered / whole };
  });
}
