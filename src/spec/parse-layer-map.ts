import type { Result } from '../core/problem.js';
import type { LayerMap } from './layer-map.js';
import { items, record, word } from './loose.js';
import { read } from './read.js';
import type { Report } from './report.js';
import { quoted } from './words.js';

function check(value: unknown, report: Report): void {
  const seen = new Set<string>();
  items(record(value).layers).forEach((entry, i) => {
    const name = word(record(entry).name);
    if (name === undefined) return;
    if (seen.has(name)) report.add(`/layers/${i}/name`, `${quoted(name)} once more`, 'each layer once');
    seen.add(name);
  });
}

/** Reads a layer map (`steelyard/layers`). Whether its names fit a technology is for `applyLayerMap`. */
export function parseLayerMap(text: string, file: string): Result<LayerMap> {
  return read('layers', { text, file }, { refusals: () => [], check });
}
