import type { Point } from '../core/layout.js';
import { um } from '../core/units.js';
import type { Floorplan } from '../spec/floorplan.js';
import type { Polygons } from '../spec/polygons.js';
import { cellMarks } from './cell-marks.js';
import { drawnGroups } from './drawn-groups.js';
import type { Drawn } from './drawn-groups.js';
import { TOP, VSS } from './drawn-shapes.js';
import { frame } from './frame.js';
import { hookupLegend, lookOf } from './hookup-looks.js';
import { groundPaint, ink, paintsOf, paper, topPaint } from './palette.js';
import type { Paint } from './palette.js';
import { counted, decimal, plainText, textWidth } from './picture-text.js';
import { drawPins, pinsOf } from './pin-labels.js';
import type { Sheet } from './sheet.js';

/** Nominal pixels of the longer side, and the most that a micrometre takes. */
const LONGER_SIDE = 1040;
const LARGEST_MICROMETRE = 24;
/** User units per pixel at least. */
const FINEST = 4;
const SMALLEST_LETTER = 9;
const EDGE = 44;

/**
 * The drawing as a picture: every wire, plate and via in place, bits by colour, ground grey, the common plate in one strong colour,
 * pins named outside. One path per net and layer.
 *
 * @param p the drawing; shapes without a net (markers, outlines) are left out. @param f the floorplan that it was drawn from.
 * @returns an SVG file; same drawing, same bytes.
 * @throws InputError if the list holds no metal with a net, or refers to a structure that it does not hold.
 */
export async function drawHookupSvg(p: Polygons, f: Floorplan): Promise<string> {
  const drawn = drawnGroups(p);
  const { extent } = drawn;
  const [width_nm, height_nm] = [extent.x1 - extent.x0, extent.y1 - extent.y0];
  const longer = Math.max(width_nm, height_nm);
  const nominal = Math.min(LONGER_SIDE, (longer / 1000) * LARGEST_MICROMETRE);
  const times = Math.max(1, Math.ceil((FINEST * nominal * drawn.step) / longer));
  const scale = times / drawn.step;
  const px = (longer * scale) / nominal;
  const [width, height] = [width_nm * scale, height_nm * scale];
  const edge = Math.round(EDGE * px);
  const paints = netPaints(p);
  const letter = letterSize(p, drawn, { px, scale });

  const name = plainText(f.name ?? p.topStructure) || 'array';
  const bits = p.capacitors.filter((c) => c.role === 'bit').length;
  const subtitle =
    `${counted(bits, 'bit')} · ${counted(f.core.rows, 'row')} × ${counted(f.core.columns, 'column')} · ` +
    `block ${decimal(um(width_nm))} × ${decimal(um(height_nm))} µm`;
  const { sheet, x, y } = await frame({
    px,
    width,
    height: height + 2 * edge,
    title: name,
    subtitle,
    legend: hookupLegend(p, drawn, paints, letter === 0),
    perMicrometre: 1000 * scale,
  });

  const toSheet = ([px0, py0]: Point): Point => [
    x + Math.round((px0 - extent.x0) * scale),
    y + edge + Math.round((extent.y1 - py0) * scale),
  ];
  for (const group of drawn.groups)
    sheet.path(
      group.outlines.map((outline) => outlinePath(outline.map(toSheet))).join(''),
      lookOf(group, paints.get(group.net) ?? groundPaint, 1000 * scale),
    );
  drawNames(sheet, drawn, paints, letter, { px, scale, toSheet });
  const pins = pinsOf(drawn.labels, p.technology, extent.y0 + extent.y1);
  for (const side of ['top', 'bottom'] as const)
    drawPins(
      sheet,
      pins.filter((pin) => pin.side === side).map((pin) => ({ ...pin, x: toSheet([pin.x, 0])[0] })),
      { y: side === 'top' ? y + edge : y + edge + Math.round(height), left: x, right: x + Math.round(width), px, side },
    );
  return sheet.finish(`${name}: hookup`, subtitle);
}

/** Level and upright edges as h and v, which the files are full of. */
function outlinePath(xy: readonly Point[]): string {
  let [x, y] = xy[0];
  let path = `M${x} ${y}`;
  for (const [nextX, nextY] of xy.slice(1)) {
    path += nextY === y ? `h${nextX - x}` : nextX === x ? `v${nextY - y}` : `l${nextX - x} ${nextY - y}`;
    [x, y] = [nextX, nextY];
  }
  return `${path}z`;
}

function netPaints(p: Polygons): Map<string, Paint> {
  return paintsOf(p.capacitors).set(VSS, groundPaint).set(TOP, topPaint);
}

interface View {
  readonly px: number;
  readonly scale: number;
  readonly toSheet: (point: Point) => Point;
}

/** Letters on the plates, in user units; 0 where the longest bit name could not be read. */
function letterSize(p: Polygons, { plates }: Drawn, { px, scale }: Pick<View, 'px' | 'scale'>): number {
  const width = Math.min(...plates.map(({ left, right }) => right - left)) * scale;
  const names = p.capacitors.filter((c) => c.role === 'bit').map((c) => textWidth(plainText(c.name), 100, true));
  const size = Math.floor(Math.min(17 * px, width * 0.24, (width * 90) / Math.max(1, ...names)));
  return size < SMALLEST_LETTER * px ? 0 : size;
}

/** Whose plate it is, in its upper left corner: the name or, where that could not be read, the capacitor's mark. */
function drawNames(
  sheet: Sheet,
  { plates }: Drawn,
  paints: ReadonlyMap<string, Paint>,
  letter: number,
  view: View,
): void {
  const marked = new Map<string, [number, number][]>();
  let side = Infinity;
  for (const { net, left, right, top } of plates) {
    const width = (right - left) * view.scale;
    const [x, y] = view.toSheet([left, top]);
    if (letter === 0) {
      const middle: [number, number] = [x + Math.round(width * 0.2), y + Math.round(width * 0.24)];
      side = Math.min(side, width * 0.26);
      const middles = marked.get(net);
      if (middles) middles.push(middle);
      else marked.set(net, [middle]);
      continue;
    }
    const text = plainText(net);
    const size = Math.min(letter, Math.floor((width * 90) / Math.max(1, textWidth(text, 100, true))));
    sheet.text(text, x + Math.round(width * 0.06), y + Math.round(width * 0.06 + size * 0.85), {
      size,
      colour: ink,
      bold: true,
      halo: paper,
    });
  }
  for (const [net, middles] of marked)
    sheet.path(cellMarks(paints.get(net)?.mark ?? [], middles, side), {
      stroke: ink,
      strokeWidth: Math.max(1, Math.round(side / 7)),
    });
}
