import { pinName } from './pin-map.js';
import { file, list, name, object, worded } from './schema-parts.js';
import type { Schema } from './schema-parts.js';

export const pinsSchema: Schema = file('pins', 'Names of the pins in the files of other programs', {
  pins: list(object({ pin: name, name: worded(pinName.pattern, pinName.words) }), 0, 100),
});
