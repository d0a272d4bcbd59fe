import type { Label } from '../core/layout.js';
import type { Conductors } from './conductors.js';
import type { Drawing } from './drawing.js';
import type { Finding } from './finding.js';
import { placeUm } from './finding.js';

export const ground = 'VSS';
export const commonPlate = 'TOP';

/** A pin label and the node that it lies on. */
export interface PinLabel {
  readonly name: string;
  readonly node: number;
  readonly x: number;
  readonly y: number;
}

/** Pin names are labels on pin layers; their point must lie on the pin's metal. */
export function pinLabels(
  drawing: Drawing,
  c: Conductors,
): { readonly labels: readonly PinLabel[]; readonly findings: Finding[] } {
  const labels: PinLabel[] = [];
  const findings: Finding[] = [];
  const pins = drawing.technology.layers.filter((layer) => layer.kind === 'pin');
  const pinOf = (label: Label) =>
    pins.find((pin) => pin.stream.layer === label.layer && pin.stream.datatype === label.texttype);
  for (const label of drawing.flat.labels) {
    const pin = pinOf(label);
    if (!pin) continue;
    const [x, y] = label.xy;
    const metal = c.layers.findIndex((layer) => layer.name === pin.of);
    const under = metal < 0 ? [] : drawing.sheet(c.layers[metal].name).index.search(x, y, x, y);
    if (under.length === 0) {
      const text = `label ${label.text} lies on no ${pin.of ?? 'metal'}`;
      findings.push({ rule: 'label', layer: pin.name, at_um: placeUm(x, y), nets: [label.text], text });
      continue;
    }
    const node = c.base[metal] + under.reduce((a, b) => Math.min(a, b));
    labels.push({ name: label.text, node, x, y });
  }
  return { labels, findings };
}

/** The names that labels give each piece, each name once, sorted. */
export function pieceNames(labels: readonly PinLabel[], c: Conductors): ReadonlyMap<number, readonly string[]> {
  const names = new Map<number, string[]>();
  for (const label of labels) {
    const piece = c.piece[label.node];
    const known = names.get(piece) ?? [];
    if (!known.includes(label.name)) names.set(piece, [...known, label.name].sort());
  }
  return names;
}
