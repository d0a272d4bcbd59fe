import type { Floorplan } from '../spec/floorplan.js';
import { cellMarks } from './cell-marks.js';
import { frame } from './frame.js';
import type { LegendRow } from './frame.js';
import { faintInk, groundPaint, ink, mixed, paintsOf, paper } from './palette.js';
import type { Paint } from './palette.js';
import { box, circle, greatestCommonDivisor, line } from './path-data.js';
import { counted, decimal, plainText, textWidth } from './picture-text.js';
import type { Sheet } from './sheet.js';

/** Nominal pixels: the longer side of core and rings together, and the most that one cell takes. */
const LONGER_SIDE = 960;
const LARGEST_CELL = 64;
/** User units per pixel at least, so that thin lines and small gaps stay whole numbers. */
const FINEST = 4;
const SMALLEST_LETTER = 8;
const AXIS = 22;

/**
 * The placement as a picture: one cell per unit in its capacitor's colour, the rings faint, names in the cells or, where those would
 * be too small to read, a mark per capacitor. Proportions are those of the pitch, exactly.
 *
 * @param f the floorplan; technology, rings and placement may be missing.
 * @returns an SVG file; same floorplan, same bytes.
 */
export async function drawFloorplanSvg(f: Floorplan): Promise<string> {
  const { rows, columns } = f.core;
  const rings = ringsOf(f);
  const [pitchX, pitchY] = f.core.pitch_um;
  const size = cellSize(pitchX, pitchY, Math.max(columns + 2 * rings, rows + 2 * rings));
  const { px, width, height } = size;
  const paints = paintsOf(f.capacitors);
  const at = (nominal: number) => Math.round(nominal * px);
  const axis = at(AXIS);

  const letter = letterSize(size, f);
  const name = plainText(f.name ?? '') || 'array';
  const bits = f.capacitors.filter((c) => c.role === 'bit').length;
  const subtitle =
    `${counted(bits, 'bit')} · ${counted(rows, 'row')} × ${counted(columns, 'column')} · ` +
    `pitch ${decimal(pitchX)} × ${decimal(pitchY)} µm`;
  const { sheet, x, y } = await frame({
    px,
    width: axis + (columns + 2 * rings) * width,
    height: axis + (rows + 2 * rings) * height,
    title: name,
    subtitle,
    legend: legendOf(f, paints, letter === 0),
    perMicrometre: width / pitchX,
  });

  const grid: Grid = { ...size, x: x + axis + rings * width, y: y + axis + rings * height, rows, columns, rings };
  drawRings(sheet, grid);
  drawCells(sheet, grid, f, paints, letter);
  drawAxes(sheet, grid);
  drawCentre(sheet, grid);
  return sheet.finish(`${name}: placement`, subtitle);
}

interface CellSize {
  readonly px: number;
  readonly width: number;
  readonly height: number;
}

interface Grid extends CellSize {
  /** Upper left corner of the core. */
  readonly x: number;
  readonly y: number;
  readonly rows: number;
  readonly columns: number;
  readonly rings: number;
}

/** The pitch, to a nanometre, in lowest terms, times the least whole number that leaves lines and gaps whole. */
function cellSize(pitchX: number, pitchY: number, cells: number): CellSize {
  const [a, b] = wholePitch(pitchX, pitchY);
  const longer = Math.min(LARGEST_CELL, LONGER_SIDE / cells);
  const times = Math.max(1, Math.ceil((longer * FINEST) / Math.max(a, b)));
  const [width, height] = [2 * a * times, 2 * b * times];
  return { px: Math.max(width, height) / longer, width, height };
}

function wholePitch(pitchX: number, pitchY: number): [number, number] {
  const [x, y] = [pitchX, pitchY].map((pitch) => Math.max(1, Math.round(pitch * 1000))) as [number, number];
  const divisor = greatestCommonDivisor(x, y);
  return [x / divisor, y / divisor];
}

/** As many rings as the array has, or as its units in the ring ask for. */
function ringsOf(f: Floorplan): number {
  const { rows, columns } = f.core;
  const reach = (f.ringUnits ?? []).map((u) => Math.max(-u.row, u.row - rows + 1, -u.column, u.column - columns + 1));
  return Math.max(f.array?.rings ?? 0, ...reach);
}

function drawRings(sheet: Sheet, grid: Grid): void {
  let outlines = '';
  for (let row = -grid.rings; row < grid.rows + grid.rings; row++)
    for (let column = -grid.rings; column < grid.columns + grid.rings; column++)
      if (row < 0 || row >= grid.rows || column < 0 || column >= grid.columns)
        outlines += cellBox(grid, row, column, 1 / 9);
  sheet.path(outlines, { fill: '#f4f5f6', stroke: '#d3d7da', strokeWidth: Math.max(1, Math.round(grid.px * 0.8)) });
}

/** The cell, less a rim of the given share of its shorter side. */
function cellBox({ x, y, width, height }: Grid, row: number, column: number, rim: number): string {
  const inset = Math.max(1, Math.round((Math.min(width, height) * rim) / 2));
  return box(x + column * width + inset, y + row * height + inset, width - 2 * inset, height - 2 * inset);
}

function drawCells(sheet: Sheet, grid: Grid, f: Floorplan, paints: ReadonlyMap<string, Paint>, letter: number): void {
  const groups = new Map<string, (readonly [row: number, column: number])[]>();
  const put = (name: string, row: number, column: number) => {
    const cells = groups.get(name);
    if (cells) cells.push([row, column]);
    else groups.set(name, [[row, column]]);
  };
  f.cells.forEach((names, row) => names.forEach((name, column) => put(name, row, column)));
  for (const u of f.ringUnits ?? []) put(u.capacitor, u.row, u.column);

  for (const name of ['-', ...f.capacitors.map((c) => c.name)]) {
    const cells = groups.get(name) ?? [];
    const { colour, onColour, mark } = paints.get(name) ?? fillPaint;
    sheet.path(cells.map(([row, column]) => cellBox(grid, row, column, 1 / 16)).join(''), { fill: colour });
    const middles = cells.map(
      ([row, column]) =>
        [grid.x + column * grid.width + grid.width / 2, grid.y + row * grid.height + grid.height / 2] as const,
    );
    if (letter === 0) {
      const side = Math.min(grid.width, grid.height);
      sheet.path(cellMarks(mark, middles, side * 0.44), {
        stroke: onColour,
        strokeWidth: Math.max(1, Math.round(side / 13)),
      });
      continue;
    }
    const text = name === '-' ? '–' : plainText(name);
    const fitted = Math.min(letter, fittedLetter(grid, text));
    if (fitted < (SMALLEST_LETTER - 2) * grid.px) continue;
    for (const [cx, cy] of middles)
      sheet.text(text, cx, Math.round(cy + fitted * 0.36), {
        size: fitted,
        colour: onColour,
        bold: true,
        align: 'center',
      });
  }
}

const fillPaint: Paint = { colour: '#e6e8ea', onColour: '#8a9299', mark: [] };

/** Letters as large as the longest bit name allows, 0 where that is too small to read. */
function letterSize(grid: CellSize, f: Floorplan): number {
  const names = f.capacitors.filter((c) => c.role === 'bit').map((c) => plainText(c.name));
  const size = Math.min(...names.map((name) => fittedLetter(grid, name)));
  return size < SMALLEST_LETTER * grid.px ? 0 : size;
}

const fittedLetter = ({ width, height, px }: CellSize, text: string): number =>
  Math.floor(Math.min(height * 0.42, 20 * px, (width * 0.8 * 100) / Math.max(1, textWidth(text, 100, true))));

/** Row and column numbers along the core, as the file counts them. */
function drawAxes(sheet: Sheet, grid: Grid): void {
  const { px, x, y, width, height, rings } = grid;
  const writing = { size: Math.round(11 * px), colour: faintInk };
  const every = (cell: number) => [1, 2, 5, 10, 20, 50, 100].find((n) => n * cell >= 26 * px) ?? 200;
  const top = y - rings * height - Math.round(7 * px);
  const left = x - rings * width - Math.round(7 * px);
  for (let column = 0; column < grid.columns; column += every(width))
    sheet.text(String(column), x + column * width + width / 2, top, { ...writing, align: 'center' });
  for (let row = 0; row < grid.rows; row += every(height))
    sheet.text(String(row), left, Math.round(y + row * height + height / 2 + 4 * px), { ...writing, align: 'right' });
}

/** A ring with four hands about the common centroid, wide enough to leave a name inside readable. */
function drawCentre(sheet: Sheet, { px, x, y, rows, columns, width, height }: Grid): void {
  const [cx, cy] = [x + (columns * width) / 2, y + (rows * height) / 2];
  const radius = Math.round(Math.max(Math.min(width, height) * 0.42, 8.5 * px));
  const hand = Math.round(radius + Math.max(5 * px, radius * 0.3));
  const cross =
    circle(cx, cy, radius) +
    line(cx - hand, cy, cx - radius, cy) +
    line(cx + radius, cy, cx + hand, cy) +
    line(cx, cy - hand, cx, cy - radius) +
    line(cx, cy + radius, cx, cy + hand);
  sheet.path(cross, { stroke: paper, strokeWidth: Math.round(4.5 * px), round: true });
  sheet.path(cross, { stroke: ink, strokeWidth: Math.round(1.8 * px), round: true });
}

function legendOf(f: Floorplan, paints: ReadonlyMap<string, Paint>, marked: boolean): LegendRow[] {
  const rows: LegendRow[] = [{ text: 'capacitor', note: 'units' }];
  const downwards = [...f.capacitors].reverse();
  for (const c of [...downwards.filter((c) => c.role === 'bit'), ...downwards.filter((c) => c.role !== 'bit')]) {
    const { colour, onColour, mark } = paints.get(c.name) ?? fillPaint;
    rows.push({
      text: plainText(c.name),
      note: String(c.units),
      swatch: (sheet, { x, y, width, height, px }) => {
        sheet.path(box(x, y, width, height), { fill: colour });
        if (!marked) return;
        sheet.path(cellMarks(mark, [[x + Math.round(width / 2), y + Math.round(height / 2)]], height * 0.6), {
          stroke: onColour,
          strokeWidth: Math.max(1, Math.round(1.5 * px)),
        });
      },
    });
  }
  const fills = f.cells.flat().filter((name) => name === '-').length;
  if (fills > 0)
    rows.push({
      text: 'fill dummy',
      note: String(fills),
      swatch: (sheet, { x, y, width, height }) => sheet.path(box(x, y, width, height), { fill: fillPaint.colour }),
    });
  const rings = ringsOf(f);
  const around = (f.core.rows + 2 * rings) * (f.core.columns + 2 * rings) - f.core.rows * f.core.columns;
  if (rings > 0)
    rows.push({
      text: 'ring dummy',
      note: String(around - (f.ringUnits ?? []).length),
      swatch: (sheet, { x, y, width, height, px }) =>
        sheet.path(box(x, y, width, height), {
          fill: '#f4f5f6',
          stroke: mixed(groundPaint.colour, paper, 0.4),
          strokeWidth: Math.round(px),
        }),
    });
  rows.push({
    text: 'centre',
    swatch: (sheet, { x, y, width, height, px }) => {
      const [cx, cy] = [x + Math.round(width / 2), y + Math.round(height / 2)];
      const [r, h] = [Math.round(4 * px), Math.round(8 * px)];
      sheet.path(
        circle(cx, cy, r) +
          line(cx - h, cy, cx - r, cy) +
          line(cx + r, cy, cx + h, cy) +
          line(cx, cy - h, cx, cy - r) +
          line(cx, cy + r, cx, cy + h),
        { stroke: ink, strokeWidth: Math.round(1.5 * px) },
      );
    },
  });
  return rows;
}
