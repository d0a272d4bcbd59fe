import type { Polygons } from '../spec/polygons.js';
import { cellMarks } from './cell-marks.js';
import type { Drawn, DrawnGroup, GroupKind } from './drawn-groups.js';
import { TOP, VSS } from './drawn-shapes.js';
import type { LegendRow, SwatchBox } from './frame.js';
import { faintInk, groundPaint, ink, mixed, paper, topColour } from './palette.js';
import type { Paint } from './palette.js';
import { box } from './path-data.js';
import { plainText } from './picture-text.js';
import type { Look, Sheet } from './sheet.js';

/** Shades of one colour tell the levels: plates pale, the metal of the plates plain, the metal below darker. */
const shades: Readonly<Record<GroupKind, (colour: string) => string>> = {
  under: (colour) => mixed(colour, paper, 0.8),
  cover: (colour) => mixed(colour, paper, 0.55),
  plate: (colour) => mixed(colour, paper, 0.5),
  topPlate: () => paper,
  lower: (colour) => mixed(colour, '#000000', 0.22),
  middle: (colour) => colour,
  upper: (colour) => (colour === topColour ? colour : mixed(colour, ink, 0.35)),
  via: () => ink,
  topVia: () => paper,
};

export function lookOf({ kind, net }: DrawnGroup, { colour }: Paint, micrometre: number): Look {
  const fill = shades[kind](kind === 'plate' && net === VSS ? mixed(colour, paper, 0.35) : colour);
  const hair = Math.max(1, Math.round(micrometre * 0.05));
  switch (kind) {
    case 'plate':
      return { fill, stroke: mixed(colour, paper, 0.15), strokeWidth: hair };
    case 'topPlate':
      return { fill, opacity: 0.4 };
    case 'upper':
      return { fill, opacity: 0.88 };
    case 'via':
      return { fill, stroke: fill, strokeWidth: hair, round: true };
    case 'topVia':
      return { fill, round: true };
    case 'under':
    case 'cover':
    case 'lower':
    case 'middle':
      return { fill };
  }
}

/** Nets with their units, then what the shades say. `marked`: with the marks that stand on the plates. */
export function hookupLegend(
  p: Polygons,
  drawn: Drawn,
  paints: ReadonlyMap<string, Paint>,
  marked: boolean,
): LegendRow[] {
  const netSwatch =
    ({ colour, mark }: Paint): NonNullable<LegendRow['swatch']> =>
    (sheet, { x, y, width, height, px }) => {
      const plate = Math.round(width * 0.6);
      sheet.path(box(x, y, width, height), { fill: colour });
      sheet.path(box(x, y, plate, height), { fill: shades.plate(colour) });
      if (marked)
        sheet.path(cellMarks(mark, [[x + Math.round(plate / 2), y + Math.round(height / 2)]], height * 0.6), {
          stroke: ink,
          strokeWidth: Math.round(1.5 * px),
        });
    };
  const downwards = [...p.capacitors].reverse();
  const rows: LegendRow[] = [{ text: 'net', note: 'units' }];
  for (const c of [...downwards.filter((one) => one.role === 'bit'), ...downwards.filter((one) => one.role !== 'bit')])
    rows.push({ text: plainText(c.name), note: String(c.units), swatch: netSwatch(paints.get(c.name) ?? groundPaint) });
  rows.push({ text: VSS, swatch: netSwatch(groundPaint) });
  rows.push({
    text: TOP,
    swatch: (sheet, { x, y, width, height }) => sheet.path(box(x, y, width, height), { fill: topColour }),
  });

  const level = paints.get(downwards.find((c) => c.role === 'bit')?.name ?? '') ?? groundPaint;
  rows.push({ text: 'level' });
  const kinds = new Set(drawn.groups.map((g) => g.kind));
  const levels: [GroupKind, string][] = [
    ['under', 'shield under the units'],
    ['lower', 'below the plates'],
    ['middle', 'on the plates’ metal'],
    ['plate', 'bottom plate'],
    ['topPlate', 'top plate'],
    ['cover', 'shield over a channel'],
    ['upper', 'above the plates'],
    ['via', 'via'],
    ['topVia', 'via on a top plate'],
  ];
  for (const [kind, text] of levels)
    if (kinds.has(kind))
      rows.push({
        text,
        swatch: (sheet, at) =>
          levelSwatch(
            sheet,
            at,
            kind,
            kind === 'upper' ? topColour : kind === 'cover' || kind === 'under' ? groundPaint.colour : level.colour,
          ),
      });
  return rows;
}

function levelSwatch(sheet: Sheet, { x, y, width, height, px }: SwatchBox, kind: GroupKind, colour: string): void {
  const dot = Math.round(6 * px);
  const middle = box(x + Math.round((width - dot) / 2), y + Math.round((height - dot) / 2), dot, dot);
  const whole = box(x, y, width, height);
  switch (kind) {
    case 'via':
      return sheet.path(middle, { fill: ink });
    case 'topVia':
      sheet.path(whole, { fill: topColour });
      return sheet.path(middle, { fill: paper });
    case 'topPlate':
      sheet.path(whole, { fill: shades.plate(colour) });
      return sheet.path(whole, { fill: paper, opacity: 0.4, stroke: faintInk, strokeWidth: Math.round(px * 0.5) });
    case 'plate':
      return sheet.path(whole, {
        fill: shades.plate(colour),
        stroke: mixed(colour, paper, 0.15),
        strokeWidth: Math.round(px),
      });
    case 'under':
    case 'cover':
    case 'lower':
    case 'middle':
    case 'upper':
      return sheet.path(whole, { fill: shades[kind](colour) });
  }
}
