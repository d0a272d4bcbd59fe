import type { Polygons } from '../spec/polygons.js';
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

/** Pin labels of the top structure, each at the nearer of the upper and the lower edge. */
export function pinsOf(p: Polygons, height: number): Pin[] {
  const pinLayers = new Set(
    p.technology.layers.filter((l) => l.kind === 'pin').map((l) => `${l.stream.layer}/${l.stream.datatype}`),
  );
  const labels = p.structures.find((s) => s.name === p.topStructure)?.labels ?? [];
  return labels
    .filter((l) => pinLayers.has(`${l.layer}/${l.texttype}`))
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
