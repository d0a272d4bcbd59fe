import {
  atLeastZero,
  choice,
  constant,
  file,
  gradient,
  harmless,
  length,
  lengthOrZero,
  list,
  object,
  pair,
  position,
  positive,
  stream,
  text,
  truth,
  whole,
  worded,
} from './schema-parts.js';
import type { Schema } from './schema-parts.js';

const layer = object({
  name: harmless,
  'lefName?': harmless,
  stream,
  kind: choice('metal', 'plate', 'diffusion', 'implant', 'well', 'outline', 'marker', 'label', 'pin'),
  'of?': harmless,
  'minWidth_um?': length,
  'minSpacing_um?': length,
  'wideFrom_um?': length,
  'wideSpacing_um?': length,
  'minArea_um2?': positive,
  'minEnclosedArea_um2?': positive,
  'maxWidth_um?': length,
  'sheetResistance_ohm?': positive,
  'thickness_um?': length,
  'height_um?': lengthOrZero,
});

const via = object({
  name: harmless,
  stream,
  lower: harmless,
  upper: harmless,
  size_um: length,
  spacing_um: length,
  enclosure_um: lengthOrZero,
  'resistance_ohm?': atLeastZero,
});

const terminal = object({ layer: harmless, at_um: pair(position) });

const unit = object({
  kind: constant('parallel-plate'),
  topPlate_um: pair(length),
  plateEnclosure_um: length,
  tab_um: pair(length),
  tabLevel_um: length,
  capacitance_fF: positive,
  terminals: object({ bottom: terminal, top: terminal }),
});

const word = worded('^[A-Za-z][A-Za-z0-9_.]{0,63}$', 'a letter, then letters, digits, _ or ., 64 at most');
const value = worded('^[A-Za-z0-9_.+*/()-]{1,64}$', 'a value without blanks: letters, digits and _ . + - * / ( )');
const device = object({
  model: word,
  prefix: choice('C', 'X'),
  terminals: list(word, 2, 8),
  'bulk?': word,
  'parameters?': { type: 'object', additionalProperties: value },
  'multiplicity?': word,
});

const roleNames = [
  'bottomPlate',
  'topPlate',
  'trunk',
  'stub',
  'bus',
  'strap',
  'spine',
  'marker',
  'fillExclusion',
  'boundary',
];

export const technologySchema: Schema = file('technology', 'Technology template', {
  name: harmless,
  description: text(1000),
  hookup: choice('channel', 'under-plate'),
  grid_nm: whole(1, 1000),
  layers: list(layer, 1, 200),
  vias: list(via, 1, 100),
  viaUnderTopPlate: truth,
  wiresUnderPlate: truth,
  dielectric: object({
    relativePermittivity: positive,
    plateCapacitance_fF_per_um2: positive,
    'plateFringe_fF_per_um?': atLeastZero,
  }),
  unit,
  mismatch: object({
    coefficient_percent_um: atLeastZero,
    of: choice('single', 'pair'),
    'correlatedSigma_percent?': atLeastZero,
    'correlationLength_um?': length,
  }),
  gradient,
  proximityReach_um: lengthOrZero,
  device,
  roles: object(Object.fromEntries(roleNames.map((role) => [role, harmless]))),
});
