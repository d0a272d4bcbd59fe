import { figure } from '../core/figure.js';
import type { Floorplan } from './floorplan.js';
import type { Metrics } from './metrics.js';
import type { Polygons } from './polygons.js';
import { ofItsKind } from './schema-parts.js';
import type { Schema } from './schema-parts.js';
import { schema } from './schema.js';
import type { SchemaName } from './schema.js';
import type { Technology } from './technology.js';
import { harmlessText } from './words.js';

/** Values up to this many characters stand on one line. */
const lineWidth = 155;
/** Lists with one entry a line, however short. */
const tall = new Set([
  'capacitors',
  'cells',
  'sides',
  'layers',
  'vias',
  'structures',
  'polygons',
  'references',
  'labels',
]);
/** Lists whose entries stand on one line, however long. */
const flatEntries = new Set(['cells', 'sides', 'polygons', 'labels']);

type Keyed = Readonly<Record<string, unknown>>;

// Whole numbers (seeds, amounts of work, coordinates) are exact, all others figures.
function numberText(n: number): string {
  if (!Number.isFinite(n)) throw new RangeError('a file holds finite numbers only');
  return String(Number.isSafeInteger(n) ? n + 0 : figure(n));
}

const entriesOf = (value: Keyed): [string, unknown][] => Object.entries(value).filter(([, v]) => v !== undefined);

function scalar(value: unknown): string {
  // What does not print is escaped: a file may be shown on a terminal.
  return typeof value === 'number' ? numberText(value) : harmlessText(JSON.stringify(value));
}

function flat(value: unknown): string {
  if (typeof value !== 'object' || value === null) return scalar(value);
  if (Array.isArray(value)) return `[${value.map(flat).join(', ')}]`;
  return `{${entriesOf(value as Keyed)
    .map(([key, v]) => `${JSON.stringify(key)}: ${flat(v)}`)
    .join(', ')}}`;
}

function lines(value: unknown, key: string, indent: string): string {
  if (typeof value !== 'object' || value === null) return scalar(value);
  const inner = `${indent}  `;
  if (Array.isArray(value)) {
    const entries = value as readonly unknown[];
    const nested = entries.some((v) => typeof v === 'object' && v !== null);
    if (!nested || !tall.has(key)) {
      const line = flat(entries);
      if (!nested || line.length <= lineWidth) return line;
    }
    const text = entries.map((v) => (flatEntries.has(key) ? flat(v) : lines(v, '', inner)));
    return `[\n${inner}${text.join(`,\n${inner}`)}\n${indent}]`;
  }
  const entries = entriesOf(value as Keyed);
  if (!entries.some(([k, v]) => tall.has(k) && Array.isArray(v))) {
    const line = flat(value);
    if (line.length <= lineWidth) return line;
  }
  const text = entries.map(([k, v]) => `${JSON.stringify(k)}: ${lines(v, k, inner)}`);
  return `{\n${inner}${text.join(`,\n${inner}`)}\n${indent}}`;
}

/**
 * JSON text of any plain data: two spaces an indent, what is short on one line, figures with 12 significant digits, keys that are
 * undefined left out.
 * @throws RangeError a number that is not finite
 */
export function formatJson(value: object): string {
  const entries = Array.isArray(value) ? [] : entriesOf(value as Keyed);
  if (entries.length === 0) return `${lines(value, '', '')}\n`;
  return `{\n${entries.map(([k, v]) => `  ${JSON.stringify(k)}: ${lines(v, k, '  ')}`).join(',\n')}\n}\n`;
}

/** Keys in the schema's order. An array inside a floorplan stays as it is: what was given, then the defaults. */
function ordered(value: unknown, part: Schema | undefined, key = ''): unknown {
  if (part === undefined || typeof value !== 'object' || value === null || key === 'array') return value;
  if (Array.isArray(value)) {
    const shape = part.items;
    return shape?.properties === undefined ? value : value.map((v) => ordered(v, shape));
  }
  const keyed = value as Keyed;
  const { properties } = ofItsKind(part, keyed.kind);
  if (properties === undefined) return value;
  const known = Object.keys(properties).filter((k) => keyed[k] !== undefined);
  const rest = Object.keys(keyed).filter((k) => !Object.hasOwn(properties, k));
  return Object.fromEntries([...known, ...rest].map((k) => [k, ordered(keyed[k], properties[k], k)]));
}

const formatAs = (name: SchemaName, value: object): string => formatJson(ordered(value, schema(name)) as object);

/** The text of a floorplan's file. One row of cells is one line. An empty list of ring units is left out. */
export function formatFloorplan(floorplan: Floorplan): string {
  const { ringUnits = [], ...rest } = floorplan;
  return formatAs('floorplan', ringUnits.length === 0 ? rest : floorplan);
}

/** The text of a polygon list's file. One polygon is one line. */
export const formatPolygons = (polygons: Polygons): string => formatAs('polygons', polygons);

/** The text of a metrics file. */
export const formatMetrics = (metrics: Metrics): string => formatAs('metrics', metrics);

/** The text of a technology template's file. */
export const formatTechnology = (technology: Technology): string => formatAs('technology', technology);
