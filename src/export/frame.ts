import { faintInk, ink, paper } from './palette.js';
import { box, line } from './path-data.js';
import { decimal, textWidth } from './picture-text.js';
import { openSheet } from './sheet.js';
import type { Sheet } from './sheet.js';

/** What surrounds a drawing: title above, legend on the right, scale bar below where it is to scale. Sizes here are nominal pixels. */
export interface Surroundings {
  /** User units per nominal pixel. */
  readonly px: number;
  /** The drawing with what it needs around itself, in user units. */
  readonly width: number;
  readonly height: number;
  readonly title: string;
  readonly subtitle: string;
  readonly legend: readonly LegendRow[];
  /** User units per micrometre; absent: no scale bar. */
  readonly perMicrometre?: number;
}

/** A row of the legend; without a swatch a heading. `swatch` draws into the given box. */
export interface LegendRow {
  readonly text: string;
  readonly note?: string;
  readonly swatch?: (sheet: Sheet, at: SwatchBox) => void;
}

export interface SwatchBox {
  readonly x: number;
  readonly y: number;
  readonly width: number;
  readonly height: number;
  readonly px: number;
}

const MARGIN = 28;
const TITLE = 22;
const SUBTITLE = 13;
const ROW = 23;
const LETTER = 13;
const SWATCH = { width: 24, height: 15 };
const LEGEND_GAP = 36;

/** Opens a sheet of the right size and draws the surroundings; the drawing's upper left corner lies at x, y. */
export async function frame(around: Surroundings): Promise<{ sheet: Sheet; x: number; y: number }> {
  const { px, legend } = around;
  const at = (nominal: number) => Math.round(nominal * px);

  const nameWidth = Math.max(0, ...legend.map((row) => textWidth(row.text, LETTER, row.swatch === undefined)));
  const noteWidth = Math.max(0, ...legend.map((row) => textWidth(row.note ?? '', LETTER)));
  const legendWidth = SWATCH.width + 10 + nameWidth + (noteWidth > 0 ? 16 + noteWidth : 0);
  const top = MARGIN + TITLE + 8 + SUBTITLE + 20;
  const drawn = { width: Math.ceil(around.width / px), height: Math.ceil(around.height / px) };
  const below = Math.max(drawn.height, legend.length * ROW);
  const titleWidth = Math.max(textWidth(around.title, TITLE, true), textWidth(around.subtitle, SUBTITLE));
  const widthPx = 2 * MARGIN + Math.max(drawn.width + LEGEND_GAP + legendWidth, titleWidth);
  const { perMicrometre } = around;
  const heightPx = top + below + (perMicrometre === undefined ? 0 : 46) + MARGIN;

  const sheet = await openSheet(at(widthPx), at(heightPx), widthPx);
  sheet.path(box(0, 0, at(widthPx), at(heightPx)), { fill: paper });
  sheet.text(around.title, at(MARGIN), at(MARGIN + TITLE * 0.8), { size: at(TITLE), colour: ink, bold: true });
  sheet.text(around.subtitle, at(MARGIN), at(MARGIN + TITLE + 8 + SUBTITLE * 0.8), {
    size: at(SUBTITLE),
    colour: faintInk,
  });

  const legendX = MARGIN + drawn.width + LEGEND_GAP;
  legend.forEach((row, i) => {
    const y = top + i * ROW;
    row.swatch?.(sheet, { x: at(legendX), y: at(y), width: at(SWATCH.width), height: at(SWATCH.height), px });
  });
  for (const heading of [true, false])
    legend.forEach((row, i) => {
      if ((row.swatch === undefined) !== heading) return;
      const x = heading ? legendX : legendX + SWATCH.width + 10;
      sheet.text(row.text, at(x), at(top + i * ROW + 12.5), {
        size: at(LETTER),
        colour: heading ? faintInk : ink,
        bold: heading,
      });
    });
  legend.forEach((row, i) => {
    if (row.note === undefined) return;
    sheet.text(row.note, at(legendX + legendWidth), at(top + i * ROW + 12.5), {
      size: at(LETTER),
      colour: faintInk,
      align: 'right',
    });
  });
  if (perMicrometre !== undefined)
    scaleBar(sheet, { ...around, perMicrometre }, { x: at(MARGIN), y: at(top + below + 34) });
  return { sheet, x: at(MARGIN), y: at(top) };
}

/** The longest of 1, 2, 5, 10, ... that takes at most a quarter of the drawing, or 160 pixels. */
function scaleBar(
  sheet: Sheet,
  { px, width, perMicrometre }: Surroundings & { readonly perMicrometre: number },
  { x, y }: { x: number; y: number },
): void {
  const room = Math.min(160 * px, Math.max(width / 4, 60 * px));
  let length_nm = 1;
  for (let decade = 1; decade < 1e9; decade *= 10)
    for (const step of [1, 2, 5]) if (step * decade * perMicrometre <= room * 1000) length_nm = step * decade;
  const length = Math.round((length_nm * perMicrometre) / 1000);
  const at = (nominal: number) => Math.round(nominal * px);
  const tick = at(5);
  sheet.path(
    line(x, y, x + length, y) + line(x, y - tick, x, y + tick) + line(x + length, y - tick, x + length, y + tick),
    {
      stroke: ink,
      strokeWidth: at(1.5),
    },
  );
  sheet.text(`${decimal(length_nm / 1000)} µm`, x + length + at(9), y + at(4.5), { size: at(LETTER), colour: ink });
}
