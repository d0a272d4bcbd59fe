import { options } from './options.js';
import { file } from './schema-parts.js';
import type { Schema } from './schema-parts.js';

const oneOf = ['bits', 'weights'].map((key): Schema => ({ properties: { [key]: {} }, required: [key] }));

export const arraySchema: Schema = {
  ...file(
    'array',
    'Capacitor array',
    Object.fromEntries(
      options.map(({ key, schema, help, available }) => {
        const title = available ? help : `${help} (not available yet)`;
        return [`${key}?`, { title, ...schema }];
      }),
    ),
  ),
  oneOf,
};
