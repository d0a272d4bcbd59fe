import { figure } from '../core/figure.js';
import { InputError } from '../core/problem.js';
import { powerOfTwo } from '../core/power-of-two.js';
import type { Drive, Limits, ResolvedConverter } from '../spec/converter.js';
import { switchings } from '../spec/converter.js';
import type { Switching } from '../spec/converter.js';
import { mostBits } from '../spec/options.js';
import { leastUnit_fF, withUnitOf } from '../spec/scale-unit.js';
import type { Technology } from '../spec/technology.js';
import { estimatedArea } from './area.js';
import { arrayBits, arraysOf, splitWeights } from './array-bits.js';
import type { Sized } from './array-bits.js';
import { idealSqnr, leastTotal, quantizationNoise, sampledNoise } from './noise.js';
import { cycleTime, largestResistance } from './settling.js';
import { energyOfConversion, switchingEnergy } from './switching-energy.js';
import { capacitanceOfArea, sigmaFactors, unitArea, unitSigma } from './unit-mismatch.js';
import type { Worked } from './worked.js';

/** How large the unit has to be, and what follows. Figures of one array; of a pair each is so. */
export interface Sizing {
  readonly quantization: { readonly noise_uV: number; readonly sqnr_db: number };
  readonly thermal: { readonly total_fF: number; readonly unit_fF: number; readonly noise_uV: number };
  readonly mismatch: { readonly unitSigma_percent: number; readonly unit_fF: number };
  readonly technology: { readonly unit_fF: number };
  readonly unit: {
    readonly capacitance_fF: number;
    readonly binding: 'thermal' | 'mismatch' | 'technology';
    /** What the technology's grid makes of it. */
    readonly drawn_fF: number;
  };
  readonly array: {
    readonly bits: number;
    /** Where they are not 1, 2, 4, ... */
    readonly weights?: readonly number[];
    /** The termination among them. */
    readonly units: number;
    /** How many arrays stand at the comparator. */
    readonly count: number;
    /** What one of them may have, as a drawn array is measured, so that the converter keeps its own limits. */
    readonly limits: Limits;
  };
  readonly total: { readonly capacitance_fF: number };
  readonly area: { readonly estimate_um2: number };
  readonly switch?: {
    /** Of all switches in parallel. */
    readonly resistance_ohm: number;
    readonly drive: Drive;
    readonly cycle_ns: number;
  };
  readonly energy: Readonly<Record<Switching, number>> & { readonly conversion_pJ: number };
}

/** What is taken where the converter states none: half an LSB, and a share a little below that of three sigma of one step. */
const standardLimits: Limits = { inl_lsb: 0.5, dnl_lsb: 0.5 };
const standardYield = 0.99;

/** The converter with limits of INL or DNL, or both. */
const withLimits = (converter: Sized): Sized & { readonly limits: Limits } => {
  const { limits = {} } = converter;
  const stated = limits.inl_lsb !== undefined || limits.dnl_lsb !== undefined;
  return { ...converter, limits: { ...(stated ? {} : standardLimits), ...limits } };
};

/**
 * What one array may have, measured by itself over its own codes, so that the converter keeps its limits: another switching makes other
 * steps of the same units, and of two arrays each is half.
 */
function arrayLimits(converter: Sized & { readonly limits: Limits }): Limits {
  const { inl_lsb, dnl_lsb, yield: share = standardYield } = converter.limits;
  const own = sigmaFactors(converter);
  const alone = sigmaFactors({ ...converter, ...plainArray, bits: arrayBits(converter) });
  return {
    ...(inl_lsb !== undefined && { inl_lsb: (inl_lsb * alone.inl.value) / own.inl.value }),
    ...(dnl_lsb !== undefined && { dnl_lsb: (dnl_lsb * alone.dnl.value) / own.dnl.value }),
    yield: share,
  };
}

const fewestBits = 2;

const plainArray = { differential: false, sampling: 'bottom-plate', switching: 'conventional' } as const;

/** The switch of B0 of which all switches in parallel, each in inverse proportion to its bit, come to a resistance; to four digits. */
const driveOf = (resistance_ohm: number, units: number): Drive => ({
  switch_ohm: Number((resistance_ohm * units).toPrecision(4)),
});

/**
 * Sizes the unit of a converter's array: large enough for the noise, for the mismatch and for the technology's rules.
 * @returns the figures, the way to each, and the technology with that unit
 * @throws Infeasible where the technology has no unit so large; InputError at /bits where no array has so many bits, or so few.
 */
export function sizeConverter(
  converter: ResolvedConverter & { readonly bits: number },
  technology: Technology,
): { readonly sizing: Sizing; readonly worked: readonly Worked[]; readonly technology: Technology } {
  const sized = withLimits(converter);
  const { bits } = sized;
  const n = arrayBits(sized);
  if (n < fewestBits || n > mostBits)
    throw new InputError([
      {
        pointer: '/bits',
        found: `${bits}, for which the array has ${n}`,
        wanted: `an array of ${fewestBits} to ${mostBits} bits`,
      },
    ]);
  const weights = sized.switching === 'splitMsb' ? splitWeights(n) : undefined;
  const units = powerOfTwo(n);

  const quantization = quantizationNoise(sized);
  const sqnr = idealSqnr(sized);
  const least = leastTotal(sized);
  const sigma = unitSigma(sized);
  const area = unitArea(sigma.value, { ...technology.mismatch, ...sized.mismatch });
  const matched = capacitanceOfArea(area.value, technology);
  const demands = { technology: leastUnit_fF(technology), thermal: least.value / units, mismatch: matched.value };
  const binding = (['technology', 'thermal', 'mismatch'] as const).reduce((a, b) => (demands[b] > demands[a] ? b : a));
  const unit_fF = figure(demands[binding]);
  const total_fF = unit_fF * units;

  const noise = sampledNoise(sized, total_fF);
  const made = withUnitOf(technology, unit_fF);
  const block = estimatedArea(weights ?? Array.from({ length: n }, (_, bit) => powerOfTwo(bit)), made);
  const cycle = sized.sampleRate_MHz === undefined ? undefined : cycleTime(sized);
  const resistance = cycle && largestResistance(bits, cycle.value, total_fF);
  const energies = switchings.map((scheme) => [scheme, switchingEnergy(scheme, bits)] as const);
  const conversion = energyOfConversion(switchingEnergy(sized.switching, bits), unit_fF, sized);

  return {
    technology: made,
    sizing: {
      quantization: { noise_uV: quantization.value, sqnr_db: sqnr.value },
      thermal: { total_fF: least.value, unit_fF: demands.thermal, noise_uV: noise.value },
      mismatch: { unitSigma_percent: sigma.value, unit_fF: demands.mismatch },
      technology: { unit_fF: demands.technology },
      unit: { capacitance_fF: unit_fF, binding, drawn_fF: made.unit.capacitance_fF },
      array: { bits: n, ...(weights && { weights }), units, count: arraysOf(sized), limits: arrayLimits(sized) },
      total: { capacitance_fF: total_fF },
      area: { estimate_um2: block.value },
      ...(cycle &&
        resistance && {
          switch: {
            resistance_ohm: resistance.value,
            drive: sized.drive ?? driveOf(resistance.value, units),
            cycle_ns: cycle.value,
          },
        }),
      energy: {
        ...(Object.fromEntries(energies.map(([scheme, { value }]) => [scheme, value])) as Record<Switching, number>),
        conversion_pJ: conversion.value,
      },
    },
    worked: [
      ...[quantization, sqnr, least, noise, sigma, area, matched, block],
      ...(cycle && resistance ? [cycle, resistance] : []),
      ...energies.map(([, each]) => each),
      conversion,
    ],
  };
}
