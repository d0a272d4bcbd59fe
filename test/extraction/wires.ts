import type { Polygon } from '../../src/core/layout.js';
import type { Polygons } from '../../src/spec/polygons.js';
import { parallelPlate } from '../pipeline/drawn.js';

export type Box = readonly [x0: number, y0: number, x1: number, y1: number];
export type Label = readonly [text: string, x: number, y: number];

/** Wires on three metals of the parallel-plate template, vias between them, and names on the lower metal unless said otherwise. */
export function wiresOn(
  on: Record<string, readonly Box[]>,
  names: readonly Label[],
  nameOn = 'lower-metal-pin',
): Polygons {
  const layers = [...parallelPlate.layers, ...parallelPlate.vias];
  const streamOf = (name: string) => layers.find((layer) => layer.name === name)!.stream;
  const polygons = Object.entries(on).flatMap(([name, boxes]) =>
    boxes.map(([x0, y0, x1, y1]): Polygon => {
      const xy = [
        [x0, y0],
        [x1, y0],
        [x1, y1],
        [x0, y1],
      ] as const;
      return { ...streamOf(name), xy };
    }),
  );
  const { layer, datatype } = streamOf(nameOn);
  const labels = names.map(([text, x, y]) => ({ text, layer, texttype: datatype, xy: [x, y] as const }));
  return {
    format: 'steelyard/polygons',
    version: 1,
    databaseUnit_m: 1e-9,
    userUnit_m: 1e-6,
    topStructure: 'top',
    technology: parallelPlate,
    capacitors: [],
    structures: [{ name: 'top', polygons, references: [], labels }],
  };
}
