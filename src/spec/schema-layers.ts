import { file, harmless, list, object, stream, truth } from './schema-parts.js';
import type { Schema } from './schema-parts.js';

export const layersSchema: Schema = file('layers', 'Stream numbers for the layers of a technology', {
  'allowShared?': truth,
  layers: list(object({ name: harmless, stream }), 0, 300),
});
