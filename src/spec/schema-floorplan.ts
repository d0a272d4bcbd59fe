import { mostCells, mostRings, mostWeight } from './options.js';
import { arraySchema } from './schema-array.js';
import {
  cell,
  choice,
  embedded,
  file,
  length,
  list,
  name,
  object,
  pair,
  seed,
  status,
  text,
  whole,
} from './schema-parts.js';
import type { Schema } from './schema-parts.js';
import { technologySchema } from './schema-technology.js';

export const capacitorsSchema = list(
  object({ name, role: choice('bit', 'termination'), weight: whole(1, mostWeight), units: whole(1, mostCells) }),
  1,
  64,
);

export const coreSchema = object({
  rows: whole(1, mostCells),
  columns: whole(1, mostCells),
  pitch_um: pair(length),
});

const placement = object({
  method: text(200),
  'seed?': seed,
  'emphasis?': choice('balanced', 'gradient', 'dispersed', 'wiring'),
  'status?': status,
  'proof?': object({ figure: text(100), class: choice('zero-first-order', 'point-reflected') }),
  'work?': whole(0, Number.MAX_SAFE_INTEGER),
});

const hookup = object({
  'sides?': list(list(choice('L', 'R', '-'))),
  'channels?': list(list(name)),
  'columns?': list(list(name)),
  buses: list(name),
});

const around = (most: number): Schema => whole(-mostRings, most + mostRings - 1);

export const floorplanSchema: Schema = file('floorplan', 'Placed capacitor array', {
  'name?': name,
  'array?': embedded(arraySchema),
  core: coreSchema,
  capacitors: capacitorsSchema,
  cells: list(list(cell), 1),
  'ringUnits?': list(object({ capacitor: name, row: around(mostCells), column: around(mostCells) })),
  'placement?': placement,
  'hookup?': hookup,
  'technology?': embedded(technologySchema),
});
