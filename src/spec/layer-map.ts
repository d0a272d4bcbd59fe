import type { Problem, Result } from '../core/problem.js';
import type { Stream, Technology } from './technology.js';
import { meant, quoted } from './words.js';

/** Stream numbers of one's own: names are those of a template's layers and vias. */
export interface LayerMap {
  readonly format: 'steelyard/layers';
  readonly version: 1;
  /** Lets two layers leave on one stream number. */
  readonly allowShared?: boolean;
  readonly layers: readonly { readonly name: string; readonly stream: Stream }[];
}

/**
 * The technology with the map's stream numbers, all else untouched.
 * Refused: a name that the technology has not; two layers on one stream number, unless the map allows it.
 */
export function applyLayerMap(technology: Technology, map: LayerMap): Result<Technology> {
  const issues: Problem[] = [];
  const drawn = [...technology.layers, ...technology.vias];
  const names = drawn.map((l) => l.name);
  const entryOf = new Map(map.layers.map((entry, i) => [entry.name, i]));
  map.layers.forEach(({ name }, i) => {
    if (names.includes(name)) return;
    issues.push({ pointer: `/layers/${i}/name`, found: quoted(name), wanted: meant(name, names, 'layer or via') });
  });
  const mapped = <T extends { readonly name: string; readonly stream: Stream }>(layer: T): T => {
    const entry = entryOf.get(layer.name);
    return entry === undefined ? layer : { ...layer, stream: map.layers[entry].stream };
  };
  const layers = technology.layers.map(mapped);
  const vias = technology.vias.map(mapped);
  if (map.allowShared !== true) {
    const holder = new Map<string, string>();
    for (const { name, stream } of [...layers, ...vias]) {
      const number = `${stream.layer}/${stream.datatype}`;
      const other = holder.get(number);
      if (other === undefined) {
        holder.set(number, name);
        continue;
      }
      const entry = entryOf.get(name) ?? entryOf.get(other);
      issues.push({
        pointer: entry === undefined ? '/layers' : `/layers/${entry}/stream`,
        found: `stream number ${number} for ${quoted(other)} and for ${quoted(name)}`,
        wanted: 'a stream number of its own for each, or "allowShared": true',
      });
    }
  }
  return issues.length > 0 ? { ok: false, issues } : { ok: true, value: { ...technology, layers, vias } };
}
