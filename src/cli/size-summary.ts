import { brief } from '../index.js';
import type { Converter, NonUnitPlate, ResolvedConverter, Sizing, Technology, Worked } from '../index.js';
import { labelled } from './summary.js';

const counted = (count: number, noun: string): string => `${count} ${noun}${count === 1 ? '' : 's'}`;
const numberWords = ['no', 'one', 'two'];

/** A figure in the largest unit that leaves it 1 or more. */
function scaled(value: number, ...units: readonly (readonly [size: number, name: string])[]): string {
  const [size, name] = units.find(([each]) => value >= each) ?? units[units.length - 1] ?? [1, ''];
  return `${brief(value / size)} ${name}`;
}
const capacitance = (value_fF: number) => scaled(value_fF, [1000, 'pF'], [1, 'fF']);
const resistance = (value_ohm: number) => scaled(value_ohm, [1e6, 'Mohm'], [1e3, 'kohm'], [1, 'ohm']);
const area = (value_um2: number) => scaled(value_um2, [1e6, 'mm2'], [1, 'um2']);
const percent = (share: number) => `${brief(100 * share)} %`;

const schemes = {
  conventional: 'conventional',
  splitMsb: 'split-MSB',
  monotonic: 'monotonic',
  vcmBased: 'Vcm-based',
} as const;

/** What the converter did not say and what was taken for it. */
function takenLines(stated: Converter): readonly string[] {
  const { limits = {} } = stated;
  const taken = [
    ...(stated.fullScale_Vpp === undefined ? ['a full scale of 1 V'] : []),
    ...(stated.differential === undefined ? ['a single-ended input'] : []),
    ...(stated.sampling === undefined ? ['bottom-plate sampling'] : []),
    ...(stated.switching === undefined ? ['conventional switching'] : []),
    ...(limits.inl_lsb === undefined && limits.dnl_lsb === undefined ? ['limits of 0.5 LSB'] : []),
    ...(stated.mismatch === undefined ? ["the technology's mismatch"] : []),
  ];
  return taken.length === 0 ? [] : labelled([['taken', `${taken.join(', ')}: nothing else was said`]]);
}

/** A sizing as lines of text. */
export function sizeSummary(
  sizing: Sizing,
  converter: ResolvedConverter & { readonly bits: number },
  stated: Converter,
  technology: Technology,
): readonly string[] {
  const { quantization, thermal, mismatch, unit, array, total, switch: resistances, energy } = sizing;
  const { bits, fullScale_Vpp, differential, sampling, switching, thermalToQuantization } = converter;
  const arrays = `${numberWords[array.count]} array${array.count === 1 ? '' : 's'}`;
  const { inl_lsb, dnl_lsb } = array.limits;
  const of = [
    ...(dnl_lsb === undefined ? [] : [`DNL ${brief(dnl_lsb)} LSB`]),
    ...(inl_lsb === undefined ? [] : [`INL ${brief(inl_lsb)} LSB`]),
  ];
  const off = Math.abs(unit.drawn_fF / unit.capacitance_fF - 1) < 1e-4 ? '' : `, drawn as ${brief(unit.drawn_fF)} fF`;
  const late = sampling === 'bottom-plate' && (switching === 'monotonic' || switching === 'vcmBased');
  const saving = late ? '; top-plate sampling would save a bit' : '';
  const pieces = 2 * array.bits - 1;
  const whole = `the ${pieces} capacitors of a split largest bit are more than an array may have, so the file has it whole; `;
  const names = switching !== 'splitMsb' ? '' : array.weights ? `${counted(pieces, 'capacitor')}, ` : whole;
  return [
    `${counted(bits, 'bit')}, ${fullScale_Vpp} V peak to peak, ${differential ? 'differential' : 'single-ended'}, ${sampling} sampling, ${schemes[switching]} switching, ${technology.name}`,
    '',
    ...labelled([
      ['unit', `${brief(unit.capacitance_fF)} fF: ${bindingWords[unit.binding]}${off}`],
      [
        'thermal',
        `${brief(thermal.unit_fF)} fF a unit, ${capacitance(thermal.total_fF)} an array: noise ${thermalToQuantization} of the quantisation's, as powers`,
      ],
      [
        'mismatch',
        `${brief(mismatch.unit_fF)} fF a unit: sigma ${brief(mismatch.unitSigma_percent)} % of a unit keeps 3 sigma within the limits`,
      ],
      ['technology', `${brief(sizing.technology.unit_fF)} fF a unit: the least that its rules allow`],
      [
        'array',
        `${counted(array.bits, 'bit')}, ${names}${array.units} units, ${capacitance(total.capacitance_fF)}; ${arrays}${saving}`,
      ],
      ['area', `about ${area(sizing.area.estimate_um2)} an array, rings included`],
      [
        'noise',
        `${brief(thermal.noise_uV)} uV sampled, ${brief(quantization.noise_uV)} uV of quantisation (SQNR ${brief(quantization.sqnr_db)} dB)`,
      ],
      ...(resistances === undefined
        ? []
        : [
            [
              'switches',
              `${resistance(resistances.resistance_ohm)} at most, all of an array in parallel, to settle in a cycle of ${brief(resistances.cycle_ns)} ns`,
            ] as const,
          ]),
      [
        'energy',
        Object.entries(schemes)
          .map(([key, words]) => `${words} ${brief(energy[key as keyof typeof schemes])}`)
          .join(', ') + ` C Vref^2; ${brief(energy.conversion_pJ)} pJ a conversion as chosen`,
      ],
      ['limits', `of one array by itself: ${of.join(', ')}, ${percent(array.limits.yield ?? 0)} of those made`],
    ]),
    ...takenLines(stated),
  ];
}

const bindingWords = {
  thermal: 'the noise decides',
  mismatch: 'the mismatch decides',
  technology: "the technology's rules decide",
};

/** Every figure with its formula, the numbers put in, and its source. */
export const explanation = (worked: readonly Worked[]): readonly string[] =>
  worked.flatMap(({ name, value, unit, formula, inserted, source }) => [
    name,
    `  ${formula}`,
    `  = ${inserted}`,
    `  = ${brief(value)} ${unit}`,
    `  (${source})`,
  ]);

/** The sides of a plate that is no whole number of units. */
export function plateLines(
  { wholeUnits, ratio, sides_um, drawn_um, drawnRatio, etchResidue }: NonUnitPlate & { readonly etchResidue?: number },
  technology: Technology,
): readonly string[] {
  const sides = (lengths: readonly number[]) =>
    `${lengths.map((length) => String(Math.round(length * 1e5) / 1e5)).join(' x ')} um`;
  const of = `a unit's perimeter to area, in ${technology.name}`;
  return labelled([
    ['plate', `${counted(wholeUnits, 'unit')} and one plate of ${brief(ratio)} units: ${sides(sides_um)}, with ${of}`],
    ['on the grid', `${sides(drawn_um)}, which is ${Number(drawnRatio.toPrecision(7))} units`],
    ...(etchResidue === undefined
      ? []
      : [['etching', `leaves ${Number(etchResidue.toPrecision(4))} of the plate's ratio`] as const]),
  ]);
}
