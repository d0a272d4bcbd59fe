import { capacitorsSchema } from './schema-floorplan.js';
import {
  cell,
  choice,
  constant,
  embedded,
  file,
  list,
  name,
  object,
  pair,
  structureName,
  text,
  truth,
  whole,
} from './schema-parts.js';
import type { Schema } from './schema-parts.js';
import { technologySchema } from './schema-technology.js';

/** Whole database units within +-2^25, so that cross products stay exact. */
const coordinate = whole(-33554432, 33554432);
const point = pair(coordinate);
const stream = whole(0, 32767);

const parts = 'plate tab pad trunk stub bus drop strap spine ring shield pin via'.split(' ');
const polygon = object({
  layer: stream,
  datatype: stream,
  'net?': name,
  'part?': choice(...parts),
  xy: list(point, 3),
});

const reference = object({
  structure: structureName,
  origin: point,
  columns: whole(1, 32767),
  rows: whole(1, 32767),
  columnStep: point,
  rowStep: point,
  mirrored: truth,
  angle_deg: { type: 'integer', multipleOf: 90, minimum: -3600, maximum: 3600 },
  'cells?': list(cell),
});

const label = object({ text: text(512), layer: stream, texttype: stream, xy: point });

export const polygonsSchema: Schema = file('polygons', 'Drawing as a list of polygons', {
  databaseUnit_m: constant(1e-9),
  userUnit_m: constant(1e-6),
  topStructure: structureName,
  capacitors: capacitorsSchema,
  technology: embedded(technologySchema),
  structures: list(
    object({ name: structureName, polygons: list(polygon), references: list(reference), labels: list(label) }),
    1,
  ),
});
