import { streamKey } from '../core/flatten.js';
import type { Label } from '../core/layout.js';
import type { Technology } from '../spec/technology.js';
import { faintInk, ink } from './palette.js';
import { line } from './path-data.js';
import { plainText, textWidth } from './picture-text.js';
import type { Sheet } from './sheet.js';
import { spread } from './spread.js';

export interface Pin {
  readonly text: string;
  readonly x: number;
  readonly y: number;
  readonly side: 'top' | 'bottom';
}

/** Those of the labels that lie on pin layers, each at the nearer of the upper and the lower edge of a block that starts at 0. */
export function pinsOf(labels: readonly Label[], technology: Technology, height: number): Pin[] {
  const pinLayers = new Set(technology.layers.filter((l) => l.kind === 'pin').map((l) => streamKey(l.stream)));
  return labels
    .filter((l) => pinLayers.has(streamKey({ layer: l.layer, datatype: l.texttype })))
    .map(({ text, xy: [x, y] }) => ({
      text: plainText(text),
      x,
      y,
      side: 2 * y > height ? ('top' as const) : ('bottom' as const),
    }))
    .sort((a, b) => a.x - b.x);
}

export interface LabelledEdge {
  /** Of the block's edge in the sheet. */
  readonly y: number;
  readonly left: number;
  readonly right: number;
  readonly px: number;
  readonly side: Pin['side'];
}

/** Writes the names beside an edge, spread so that none overlaps another, each with a line to its pin. `x` of the pins is the sheet's. */
export function drawPins(sheet: Sheet, pins: readonly Pin[], { y, left, right, px, side }: LabelledEdge): void {
  const at = (nominal: number) => Math.round(nominal * px);
  const size = at(13);
  const outward = side === 'bottom' ? 1 : -1;
  const widths = pins.map((pin) => textWidth(pin.text, size, true) + at(7));
  const centres = spread(
    pins.map((pin) => pin.x),
    widths,
    left,
    right,
  );
  let leaders = '';
  pins.forEach((pin, i) => {
    const [near, far] = [y + outward * at(6), y + outward * at(17)];
    leaders += line(pin.x, y, pin.x, near) + line(pin.x, near, centres[i], far);
  });
  sheet.path(leaders, { stroke: faintInk, strokeWidth: at(1), round: true });
  pins.forEach((pin, i) => {
    const baseline = y + outward * at(20) + (side === 'bottom' ? at(10) : 0);
    sheet.text(pin.text, centres[i], baseline, { size, colour: ink, bold: true, align: 'center' });
  });
}
