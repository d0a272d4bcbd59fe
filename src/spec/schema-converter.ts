import { converterOptions } from './converter-options.js';
import { file } from './schema-parts.js';
import type { Schema } from './schema-parts.js';

export const converterSchema: Schema = file(
  'converter',
  'What a capacitor array is for',
  Object.fromEntries(converterOptions.map(({ key, schema, help }) => [`${key}?`, { title: help, ...schema }])),
);
