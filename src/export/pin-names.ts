import { streamKey } from '../core/flatten.js';
import { pinNamer } from '../spec/pin-map.js';
import type { PinMap } from '../spec/pin-map.js';
import type { Polygons } from '../spec/polygons.js';

/** The drawing with its labels on pin layers renamed, for files that show labels; nets, cells and capacitors keep their names. */
export function withPinNames(p: Polygons, map: PinMap): Polygons {
  const pinLayers = new Set(p.technology.layers.filter((l) => l.kind === 'pin').map((l) => streamKey(l.stream)));
  const nameOf = pinNamer(map);
  const structures = p.structures.map((s) => ({
    ...s,
    labels: s.labels.map((label) =>
      pinLayers.has(streamKey({ layer: label.layer, datatype: label.texttype }))
        ? { ...label, text: nameOf(label.text) }
        : label,
    ),
  }));
  return { ...p, structures };
}
