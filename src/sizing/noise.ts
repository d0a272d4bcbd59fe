import { powerOfTwo } from '../core/power-of-two.js';
import { arraysOf } from './array-bits.js';
import type { Sized } from './array-bits.js';
import { digits } from './worked.js';
import type { Worked } from './worked.js';

/** J/K, exact by definition (SI 2019). */
export const BOLTZMANN = 1.380649e-23;
const MICRO = 1e-6;
const FEMTO = 1e-15;

/** Root mean square (uV) of the noise that a switch leaves on a capacitor: sqrt(kT/C). */
export const thermalNoise_uV = (capacitance_fF: number, temperature_K: number): number =>
  Math.sqrt((BOLTZMANN * temperature_K) / (capacitance_fF * FEMTO)) / MICRO;

/** An LSB in microvolts. */
const lsb_uV = ({ bits, fullScale_Vpp }: Pick<Sized, 'bits' | 'fullScale_Vpp'>): number =>
  fullScale_Vpp / powerOfTwo(bits) / MICRO;

export function quantizationNoise(converter: Sized): Worked {
  const { bits, fullScale_Vpp } = converter;
  return {
    name: 'quantisation noise',
    value: lsb_uV(converter) / Math.sqrt(12),
    unit: 'uV',
    formula: 'V / 2^N / sqrt(12)',
    inserted: `${fullScale_Vpp} V / 2^${bits} / sqrt(12)`,
    source: 'an error equally likely anywhere in one LSB; Bennett 1948 (from memory)',
  };
}

export function idealSqnr({ bits }: Pick<Sized, 'bits'>): Worked {
  return {
    name: 'ideal SQNR',
    value: 10 * Math.log10(1.5 * powerOfTwo(2 * bits)),
    unit: 'dB',
    formula: '10 log10(1.5 x 4^N)',
    inserted: `10 log10(1.5 x 4^${bits})`,
    source: 'a full-scale sine over that noise',
  };
}

/**
 * The least capacitance of one array: kT/C noise is `thermalToQuantization` of the quantisation noise, as powers. Two arrays of a
 * differential converter bring the noise of both, and share nothing of it.
 */
export function leastTotal(converter: Sized): Worked {
  const { bits, fullScale_Vpp, temperature_K, thermalToQuantization } = converter;
  const inputs = converter.differential ? 2 : 1;
  const kT = BOLTZMANN * temperature_K;
  const square = fullScale_Vpp * fullScale_Vpp;
  return {
    name: 'thermal noise',
    value: (12 * kT * powerOfTwo(2 * bits) * inputs) / (thermalToQuantization * square) / FEMTO,
    unit: 'fF an array',
    formula: `C >= 12 k T 4^N${inputs === 2 ? ' x 2' : ''} / (a V^2)`,
    inserted: `12 x 1.380649e-23 J/K x ${temperature_K} K x 4^${bits}${inputs === 2 ? ' x 2' : ''} / (${thermalToQuantization} x (${fullScale_Vpp} V)^2)`,
    source: `kT/C noise${inputs === 2 ? ' of both arrays' : ''} at most a times the quantisation noise, as powers`,
  };
}

/** What the noise comes to on an array of a capacitance, referred to the input. */
export function sampledNoise(converter: Sized, total_fF: number): Worked {
  const arrays = arraysOf(converter);
  const inputs = converter.differential ? 2 : 1;
  return {
    name: 'sampled noise',
    value: thermalNoise_uV(total_fF / inputs, converter.temperature_K),
    unit: 'uV',
    formula: `sqrt(${inputs === 2 ? '2 ' : ''}k T / C)`,
    inserted: `sqrt(${inputs === 2 ? '2 x ' : ''}1.380649e-23 J/K x ${converter.temperature_K} K / ${digits(total_fF)} fF)`,
    source: arrays === 2 && inputs === 1 ? 'on the array that the input is sampled on' : 'on what was chosen',
  };
}
