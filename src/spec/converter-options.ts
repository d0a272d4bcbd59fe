import type { Converter, ResolvedConverter } from './converter.js';
import { switchings } from './converter.js';
import type { TableRow } from './option-table.js';
import { driveSchema, limitsSchema } from './options.js';
import { atLeastZero, choice, number, object, positive, seed, truth, whole, worded } from './schema-parts.js';
import type { Schema } from './schema-parts.js';

/** One key of a converter file. This table is its only description: schema, defaults, help and documentation come from it. */
export interface ConverterOption extends TableRow {
  readonly key: Exclude<keyof Converter, 'format' | 'version'>;
  readonly schema: Schema;
  /** The default; absent where there is none. */
  readonly value?: unknown;
}

/** Bits of a converter: an array of 14 bits may serve one more. */
const [fewestBits, mostBits] = [2, 15];

export const converterOptions: readonly ConverterOption[] = [
  {
    key: 'bits',
    values: `whole number ${fewestBits} to ${mostBits}`,
    standard: "`simulate`: the array's; `size` asks for it",
    help: 'bits of the converter',
    flag: '--bits <count>',
    schema: whole(fewestBits, mostBits),
  },
  {
    key: 'fullScale_Vpp',
    values: 'number above 0; of a differential converter the difference of both inputs',
    standard: '1',
    help: 'full scale in volts, peak to peak',
    flag: '--full-scale <volts>',
    schema: positive,
    value: 1,
  },
  {
    key: 'differential',
    values: '`true`, `false`',
    standard: '`false`',
    help: 'two arrays and two inputs of opposite sign',
    flag: '--differential',
    schema: truth,
    value: false,
  },
  {
    key: 'sampling',
    values: '`"bottom-plate"`, `"top-plate"`',
    standard: '`"bottom-plate"`',
    help: 'on which plates the input is sampled',
    flag: '--sampling <plates>',
    schema: choice('bottom-plate', 'top-plate'),
    value: 'bottom-plate',
  },
  {
    key: 'switching',
    values: switchings.map((name) => `\`"${name}"\``).join(', '),
    standard: '`"conventional"`',
    help: 'how the bits are switched from decision to decision',
    flag: '--switching <scheme>',
    schema: choice(...switchings),
    value: 'conventional',
  },
  {
    key: 'temperature_K',
    values: 'number above 0',
    standard: '300',
    help: 'temperature in kelvins',
    schema: positive,
    value: 300,
  },
  {
    key: 'sampleRate_MHz',
    values: 'number above 0',
    standard: 'none: no settling',
    help: 'conversions per microsecond',
    flag: '--sample-rate <MHz>',
    schema: positive,
  },
  {
    key: 'thermalToQuantization',
    values: 'number above 0',
    standard: '0.5',
    help: 'sampled noise over quantisation noise, as powers',
    schema: positive,
    value: 0.5,
  },
  {
    key: 'comparatorNoise_uV',
    values: 'number from 0',
    standard: '0',
    help: "noise of one comparison, rms at the comparator's input",
    schema: atLeastZero,
    value: 0,
  },
  {
    key: 'comparatorOffset_uV',
    values: 'number',
    standard: '0',
    help: "offset at the comparator's input",
    schema: number,
    value: 0,
  },
  {
    key: 'drive',
    values:
      '`{switch_ohm: number or list, reference_ohm}`; a number is the switch of B0, larger bits in inverse proportion',
    standard: '`size`: the largest resistance that settles in a cycle; `simulate`: settled',
    help: 'resistance of the switches and of the reference',
    schema: driveSchema,
  },
  {
    key: 'topLoad_fF',
    values: 'number from 0',
    standard: '0',
    help: 'what hangs on TOP outside the array',
    schema: atLeastZero,
    value: 0,
  },
  {
    key: 'mismatch',
    values: '`{coefficient_percent_um, of: "single" or "pair"}`: of one capacitor, or of the difference of two',
    standard: "the technology's",
    help: 'area law of random mismatch',
    schema: object({ coefficient_percent_um: atLeastZero, of: choice('single', 'pair') }),
  },
  {
    key: 'technology',
    values: "a shipped template's name, or a file ending in `.json`, relative to this one",
    standard: '`parallel-plate`',
    help: 'technology template',
    flag: '--technology <name or file>',
    schema: worded('^[^\\u0000-\\u001f\\u007f]{1,1000}$', "a shipped template's name or the name of a .json file"),
  },
  {
    key: 'limits',
    values: '`{inl_lsb, dnl_lsb, yield}`',
    standard: '`size`: 0.5 and 0.5 at three sigma; `simulate`: none',
    help: 'what the converter must keep, and which share of those made',
    schema: limitsSchema,
  },
  {
    key: 'samples',
    values: 'a power of two, 64 to 1048576',
    standard: '16384',
    help: 'points of the record',
    schema: whole(64, 1048576),
    value: 16384,
  },
  {
    key: 'seed',
    values: 'whole number from 0',
    standard: '1',
    help: 'seed of noise, of mismatch and of the phase of the input',
    schema: seed,
    value: 1,
  },
];

/** Fills in the defaults of a converter file. */
export function resolveConverter(converter: Converter): ResolvedConverter {
  const filled: Record<string, unknown> = { ...converter };
  for (const { key, value } of converterOptions) if (value !== undefined) filled[key] ??= value;
  return filled as unknown as ResolvedConverter;
}
