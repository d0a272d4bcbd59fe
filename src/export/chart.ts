import { frame } from './frame.js';
import type { LegendRow } from './frame.js';
import { faintInk, ink, mixed, paper } from './palette.js';
import { box, line } from './path-data.js';
import type { Sheet } from './sheet.js';

/** A quantity along one side of a chart. */
interface Axis {
  /** With its unit. */
  readonly label: string;
  readonly from: number;
  readonly to: number;
}

/** A curve over values of x that ascend; y that is not finite leaves a gap. */
interface Curve {
  readonly name: string;
  /** What the legend says beside the name. */
  readonly note?: string;
  readonly colour: string;
  readonly x: ArrayLike<number>;
  readonly y: ArrayLike<number>;
  /** A line, a line cut into dashes, or a bar from the foot of the chart. */
  readonly kind: 'line' | 'dashes' | 'bars';
}

interface Chart {
  readonly title: string;
  readonly subtitle: string;
  readonly description: string;
  readonly x: Axis;
  readonly y: Axis;
  /** The first is drawn first: what comes later lies over it. */
  readonly curves: readonly Curve[];
  /** Words at places of the chart. */
  readonly marks?: readonly { readonly x: number; readonly y: number; readonly text: string }[];
}

/** User units per nominal pixel: curves are drawn to a tenth of a pixel in whole numbers. */
const PX = 10;
const WIDTH = 880;
const HEIGHT = 440;
const LEFT = 64;
const BELOW = 46;
const LETTER = 12;

/** Draws curves with axes, in the surroundings of all other pictures. @returns an SVG file; same chart, same bytes. */
export async function drawChart(chart: Chart): Promise<string> {
  const { title, subtitle, description, curves, marks = [] } = chart;
  const { sheet, x, y } = await frame({
    px: PX,
    width: (LEFT + WIDTH) * PX,
    height: (HEIGHT + BELOW) * PX,
    title,
    subtitle,
    legend: curves.map(legendRow),
  });
  const field: Field = { chart, left: x + LEFT * PX, top: y };
  drawAxes(sheet, field);
  for (const curve of curves) drawCurve(sheet, field, curve);
  const at = places(field);
  for (const mark of marks)
    sheet.text(mark.text, at.x(mark.x), at.y(mark.y) - 5 * PX, {
      size: LETTER * PX,
      colour: ink,
      align: 'center',
      halo: paper,
    });
  return sheet.finish(title, description);
}

interface Field {
  readonly chart: Chart;
  /** Upper left corner of the field, in user units. */
  readonly left: number;
  readonly top: number;
}

function places({ chart: { x, y }, left, top }: Field): { x: (value: number) => number; y: (value: number) => number } {
  const share = (value: number, { from, to }: Axis): number => Math.min(1, Math.max(0, (value - from) / (to - from)));
  return {
    x: (value) => left + Math.round(share(value, x) * WIDTH * PX),
    y: (value) => top + Math.round((1 - share(value, y)) * HEIGHT * PX),
  };
}

/** Round numbers within an axis, a handful of them: steps of 1, 2 or 5 times a power of ten. */
function ticks({ from, to }: Axis): { readonly values: readonly number[]; readonly decimals: number } {
  const span = to - from;
  let power = 1;
  let decimals = 0;
  for (; power * 10 <= span / 4; power *= 10);
  for (; power > span / 4; power /= 10) decimals++;
  const step = [5, 2, 1].map((n) => n * power).find((size) => span / size >= 4) ?? power;
  const values: number[] = [];
  for (let n = Math.ceil(from / step - 1e-9); n * step <= to + 1e-9 * span; n++) values.push(n * step);
  return { values, decimals };
}

function drawAxes(sheet: Sheet, field: Field): void {
  const { chart, left, top } = field;
  const at = places(field);
  const [right, bottom] = [left + WIDTH * PX, top + HEIGHT * PX];
  const [across, up] = [ticks(chart.x), ticks(chart.y)];
  const grid =
    across.values.map((value) => line(at.x(value), top, at.x(value), bottom)).join('') +
    up.values.map((value) => line(left, at.y(value), right, at.y(value))).join('');
  sheet.path(grid, { stroke: mixed(faintInk, paper, 0.75), strokeWidth: PX });
  sheet.path(box(left, top, right - left, bottom - top), { stroke: faintInk, strokeWidth: PX });
  const writing = { size: LETTER * PX, colour: faintInk };
  for (const value of across.values)
    sheet.text(value.toFixed(across.decimals), at.x(value), bottom + 17 * PX, { ...writing, align: 'center' });
  for (const value of up.values)
    sheet.text(value.toFixed(up.decimals), left - 7 * PX, at.y(value) + 4 * PX, { ...writing, align: 'right' });
  sheet.text(chart.x.label, left + Math.round((WIDTH * PX) / 2), bottom + 38 * PX, {
    ...writing,
    colour: ink,
    align: 'center',
  });
  sheet.text(chart.y.label, left + 8 * PX, top + 17 * PX, { ...writing, colour: ink, halo: paper });
}

/** Columns a tenth as wide as a pixel would be more than anybody sees. */
const COLUMNS = WIDTH * 2;

/** The curve column by column: where many points share one, the lowest and the highest stand for them. */
function thinned({ x, y }: Curve, { from, to }: Axis): readonly (readonly [x: number, y: number] | undefined)[] {
  if (x.length <= 2 * COLUMNS) {
    return Array.from({ length: x.length }, (_, i) => (Number.isFinite(y[i]) ? ([x[i], y[i]] as const) : undefined));
  }
  const points: (readonly [number, number] | undefined)[] = [];
  const columnOf = (i: number): number => Math.floor(((x[i] - from) / (to - from)) * COLUMNS);
  for (let i = 0; i < x.length;) {
    const column = columnOf(i);
    let [low, high] = [i, i];
    for (; i < x.length && columnOf(i) === column; i++) {
      if (y[i] < y[low]) low = i;
      if (y[i] > y[high]) high = i;
    }
    for (const at of low < high ? [low, high] : low > high ? [high, low] : [low])
      points.push(Number.isFinite(y[at]) ? [x[at], y[at]] : undefined);
  }
  return points;
}

function drawCurve(sheet: Sheet, field: Field, curve: Curve): void {
  const at = places(field);
  const foot = at.y(field.chart.y.from);
  const points = thinned(curve, field.chart.x);
  if (curve.kind === 'bars') {
    const bars = points.map((point) => (point ? line(at.x(point[0]), foot, at.x(point[0]), at.y(point[1])) : ''));
    sheet.path(bars.join(''), { stroke: curve.colour, strokeWidth: PX });
    return;
  }
  let data = '';
  let last: readonly [number, number] | undefined;
  for (const point of points) {
    const here = point && ([at.x(point[0]), at.y(point[1])] as const);
    if (here && last) data += `l${here[0] - last[0]} ${here[1] - last[1]}`;
    else if (here) data += `M${here[0]} ${here[1]}`;
    last = here;
  }
  sheet.path(data, {
    stroke: curve.colour,
    strokeWidth: Math.round(1.6 * PX),
    round: true,
    ...(curve.kind === 'dashes' && { dashes: [6 * PX, 5 * PX] as const }),
  });
}

const legendRow = ({ name, note, colour, kind }: Curve): LegendRow => ({
  text: name,
  ...(note !== undefined && { note }),
  swatch: (sheet, { x, y, width, height, px }) => {
    const middle = y + Math.round(height / 2);
    if (kind === 'bars') {
      const bars = [0.2, 0.5, 0.8].map((share, i) =>
        line(x + Math.round(share * width), y + height, x + Math.round(share * width), y + [4, 0, 7][i] * px),
      );
      sheet.path(bars.join(''), { stroke: colour, strokeWidth: Math.round(2 * px) });
    } else
      sheet.path(line(x, middle, x + width, middle), {
        stroke: colour,
        strokeWidth: Math.round(2 * px),
        ...(kind === 'dashes' && { dashes: [6 * px, 5 * px] as const }),
      });
  },
});
