import { arraySchema } from './schema-array.js';
import { converterSchema } from './schema-converter.js';
import { floorplanSchema } from './schema-floorplan.js';
import { layersSchema } from './schema-layers.js';
import { metricsSchema } from './schema-metrics.js';
import type { Schema } from './schema-parts.js';
import { pinsSchema } from './schema-pins.js';
import { polygonsSchema } from './schema-polygons.js';
import { technologySchema } from './schema-technology.js';

const schemas = {
  array: arraySchema,
  floorplan: floorplanSchema,
  polygons: polygonsSchema,
  metrics: metricsSchema,
  technology: technologySchema,
  layers: layersSchema,
  pins: pinsSchema,
  converter: converterSchema,
} satisfies Record<string, Schema>;

/** Names of the file formats: `format` is `steelyard/NAME`. */
export type SchemaName = keyof typeof schemas;

export const schemaNames = Object.keys(schemas) as readonly SchemaName[];

/** The JSON Schema (draft 2020-12) of a file format. */
export const schema = (name: SchemaName): Schema => schemas[name];
