import { figure } from '../core/figure.js';
import type { ArraySpec } from './array-spec.js';
import type { TableRow } from './option-table.js';
import {
  atLeastZero,
  choice,
  gradient,
  length,
  lengthOrZero,
  list,
  name,
  object,
  pair,
  positive,
  seed,
  share,
  worded,
  whole,
} from './schema-parts.js';
import type { Schema } from './schema-parts.js';
import type { Technology } from './technology.js';
import { isWideUnit, matchedArea_um2, unitSize_um } from './unit-geometry.js';
import { either } from './words.js';

/** One key of an array file. This table is its only description: schema, defaults, help and documentation come from it. */
export interface Option extends TableRow {
  readonly available: boolean;
  readonly schema: Schema;
  /** Which of the schema's values work in this version; absent: all. */
  readonly works?: { readonly accepts: (value: unknown) => boolean; readonly wanted: string };
  /** The default, from the keys resolved before this one; absent where the tool chooses later or nothing is the default. */
  readonly resolve?: (before: ArraySpec, technology: Technology) => unknown;
  /** True: the value may be given in part, and `resolve` makes it whole. */
  readonly partly?: true;
}

/** The template that is taken where none is named. */
export const standardTechnologies = { channel: 'parallel-plate', 'under-plate': 'under-plate' } as const;

export const mostBits = 14;
export const mostWeights = 20;
export const mostWeight = 16383;
export const mostCells = 40000;
export const mostRings = 3;

/** Resistances of switches and reference, of an array as of a converter. */
export const driveSchema = object({
  switch_ohm: { type: ['number', 'array'], minimum: 0, maximum: 1e12, items: atLeastZero, maxItems: mostWeights },
  'reference_ohm?': atLeastZero,
});
export const limitsSchema = object({ 'inl_lsb?': positive, 'dnl_lsb?': positive, 'yield?': share });

const side = choice('bottom', 'top');

const allBut = (later: string, ...now: string[]): NonNullable<Option['works']> => ({
  accepts: (value) => now.some((v) => v === value),
  wanted: `${either(now)} ("${later}" is not available yet)`,
});

/** Rings of dummies whose pitch, at least that of the unit and the spacing beside it, add up to the proximity reach. */
export function ringsToReach(technology: Technology): number {
  const { unit, layers, roles, proximityReach_um } = technology;
  const side = Math.min(...unitSize_um(unit));
  const metal = layers.find((l) => l.name === roles.bottomPlate);
  const spacing = (isWideUnit(technology) ? metal?.wideSpacing_um : metal?.minSpacing_um) ?? 0;
  const nanometres = (length_um: number): number => Math.round(length_um * 1000);
  return Math.max(1, Math.ceil(nanometres(proximityReach_um) / nanometres(side + spacing)));
}

/** Relative standard deviation of one unit by the area law: the coefficient over the square root of the unit's area. */
export function unitMismatch({ mismatch, unit }: Technology): NonNullable<ArraySpec['mismatch']> {
  const area_um2 = matchedArea_um2(unit);
  // A coefficient of pairs is that of a difference of two units: its variance is twice a unit's.
  const variances = mismatch.of === 'pair' ? 2 : 1;
  return {
    localSigma_percent: figure(mismatch.coefficient_percent_um / Math.sqrt(area_um2 * variances)),
    correlatedSigma_percent: mismatch.correlatedSigma_percent ?? 0,
    correlationLength_um: mismatch.correlationLength_um ?? 0,
  };
}

export const options: readonly Option[] = [
  {
    key: 'name',
    values: 'a letter, then letters, digits, `_`, 24 at most',
    standard: '`cdac<bits>`, with weights `cdac<capacitors>w`',
    help: 'name of the array, of its files and of its structures',
    available: true,
    schema: name,
    resolve: ({ bits, weights }) => (weights === undefined ? `cdac${bits}` : `cdac${weights.length}w`),
  },
  {
    key: 'bits',
    values: `whole number 2 to ${mostBits}; instead of \`weights\``,
    standard: '-',
    help: 'number of bits, weights 1, 2, 4, ...',
    flag: '--bits <count>',
    available: true,
    schema: whole(2, mostBits),
  },
  {
    key: 'weights',
    values: `2 to ${mostWeights} whole numbers, least significant bit first, ${mostWeight} in all at most; instead of \`bits\``,
    standard: '-',
    help: 'weights of the bits in units',
    available: true,
    schema: list(whole(1, mostWeight), 2, mostWeights),
  },
  {
    key: 'technology',
    values: "a shipped template's name, or a file ending in `.json`, relative to this one",
    standard: `\`${standardTechnologies.channel}\`; for the hookup \`under-plate\` \`${standardTechnologies['under-plate']}\``,
    help: 'technology template',
    flag: '--technology <name or file>',
    available: true,
    schema: worded('^[^\\u0000-\\u001f\\u007f]{1,1000}$', "a shipped template's name or the name of a .json file"),
    resolve: (_, technology) => technology.name,
  },
  {
    key: 'hookup',
    values: '`"channel"`, `"under-plate"`',
    standard: "the technology's",
    help: 'where the trunks run: in channels between the columns or under the plates',
    flag: '--hookup <style>',
    available: true,
    schema: choice('channel', 'under-plate'),
    resolve: (_, technology) => technology.hookup,
  },
  {
    key: 'unit_fF',
    values: "number above 0; plate or fingers are scaled within the technology's rules, a named cell's is fixed",
    standard: "the technology's",
    help: 'capacitance of one unit',
    available: true,
    schema: positive,
    resolve: (_, technology) => technology.unit.capacitance_fF,
  },
  {
    key: 'core',
    values: `\`{rows, columns}\`, ${mostCells} cells at most; with --floorplan-only also \`pitch_um: [x, y]\``,
    standard: 'chosen',
    help: 'rows and columns of the core',
    flag: '--core <RxC>',
    available: true,
    schema: object({ rows: whole(1, mostCells), columns: whole(1, mostCells), 'pitch_um?': pair(length) }),
  },
  {
    key: 'block',
    values: '`{maxWidth_um, maxHeight_um}`, one or both',
    standard: 'no limit',
    help: 'limits of the whole block, rings and buses included',
    available: false,
    schema: object({ 'maxWidth_um?': length, 'maxHeight_um?': length }),
  },
  {
    key: 'tracksPerChannel',
    values: 'whole number from 1',
    standard: 'chosen',
    help: 'tracks in a channel; under plates the most trunks below one column',
    available: true,
    schema: whole(1, 64),
  },
  {
    key: 'rings',
    values: `whole number 0 to ${mostRings}`,
    standard: "the least that covers the technology's `proximityReach_um`, at least 1",
    help: 'rings of dummies around the core',
    flag: '--rings <count>',
    available: true,
    schema: whole(0, mostRings),
    resolve: (_, technology) => ringsToReach(technology),
  },
  {
    key: 'termination',
    values: '`"ring"`, `"core"`, `"none"`',
    standard: '`"ring"` with one ring or more, else `"none"`',
    help: 'where the termination unit lies',
    available: true,
    schema: choice('ring', 'core', 'none'),
    resolve: ({ rings = 0 }) => (rings >= 1 ? 'ring' : 'none'),
  },
  {
    key: 'fillTop',
    values: '`"TOP"` (the same surroundings for all, costs gain only), `"VSS"`',
    standard: '`"TOP"`',
    help: "net of the fill dummies' top plates",
    available: true,
    schema: choice('TOP', 'VSS'),
    resolve: () => 'TOP',
  },
  {
    key: 'emphasis',
    values: '`"balanced"`, `"gradient"`, `"dispersed"`, `"wiring"`',
    standard: '`"balanced"`',
    help: 'what the placement gives most weight to',
    flag: '--emphasis <which>',
    available: true,
    schema: choice('balanced', 'gradient', 'dispersed', 'wiring'),
    resolve: () => 'balanced',
  },
  {
    key: 'effort',
    values: '`"quick"`, `"normal"`, `"thorough"`',
    standard: '`"normal"`',
    help: 'how much work the search may spend',
    flag: '--effort <how much>',
    available: true,
    schema: choice('quick', 'normal', 'thorough'),
    resolve: () => 'normal',
  },
  {
    key: 'seed',
    values: 'whole number from 0',
    standard: '1',
    help: "seed of the search's random numbers",
    flag: '--seed <number>',
    available: true,
    schema: seed,
    resolve: () => 1,
  },
  {
    key: 'balance',
    values: '`"on"`, `"off"`; `"on"` is not available yet',
    standard: '`"off"`',
    help: 'whether coupling to TOP is balanced to the weights',
    flag: '--balance <on|off>',
    available: true,
    schema: choice('on', 'off'),
    works: allBut('on', 'off'),
    resolve: () => 'off',
  },
  {
    key: 'gradient',
    values:
      "`{linear_ppm_per_um, quadratic_ppm_per_um2: number or {xx, xy, yy}, direction_deg}` about the core's centre",
    standard: "the technology's expectation; without a direction the worst one",
    help: 'gradient to expect across the array',
    available: true,
    schema: gradient,
    resolve: (_, technology) => technology.gradient,
  },
  {
    key: 'mismatch',
    values: '`{localSigma_percent, correlatedSigma_percent, correlationLength_um}`',
    standard: "the technology's, scaled to the unit",
    help: 'random mismatch of one unit',
    available: true,
    schema: object({
      localSigma_percent: atLeastZero,
      correlatedSigma_percent: atLeastZero,
      correlationLength_um: lengthOrZero,
    }),
    resolve: (_, technology) => unitMismatch(technology),
  },
  {
    key: 'drive',
    values:
      "`{switch_ohm, reference_ohm}`: B0's switch, larger bits' in inverse proportion to the weight; or a list, one for each bit",
    standard: 'none: no settling, Elmore delays of the wires alone',
    help: 'resistance of the switches, and of the reference in series with each',
    available: true,
    schema: driveSchema,
  },
  {
    key: 'topLoad_fF',
    values: 'number from 0',
    standard: '0',
    help: 'what hangs on TOP outside the array',
    available: true,
    schema: atLeastZero,
  },
  {
    key: 'pins',
    values: '`{bits: {side: "bottom" or "top", order, pitch_um}, top: {side}}`, each of them optional',
    standard: '`{bits: {side: "bottom"}, top: {side: "top"}}`, in the order of the weights, where the wires end',
    help: 'where the pins lie',
    available: true,
    schema: object({
      'bits?': object({ 'side?': side, 'order?': list(name, 1, mostWeights + 1), 'pitch_um?': length }),
      'top?': object({ 'side?': side }),
    }),
    resolve: ({ pins }) => ({ bits: { side: 'bottom', ...pins?.bits }, top: { side: 'top', ...pins?.top } }),
    partly: true,
  },
  {
    key: 'pair',
    values: '`"none"`, `"mirrored"`; `"mirrored"` is not available yet',
    standard: '`"none"`',
    help: 'two arrays for a differential converter',
    available: true,
    schema: choice('none', 'mirrored'),
    works: allBut('mirrored', 'none'),
    resolve: () => 'none',
  },
  {
    key: 'limits',
    values:
      '`{inl_lsb, dnl_lsb, yield}`: with a yield the share of arrays within the others, else all errors at three sigma',
    standard: 'none',
    help: 'what the placed array must keep; exit code 1 where it does not',
    available: true,
    schema: limitsSchema,
  },
];
