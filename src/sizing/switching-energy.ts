import { powerOfTwo } from '../core/power-of-two.js';
import type { Switching } from '../spec/converter.js';
import { arraysOf } from './array-bits.js';
import type { Sized } from './array-bits.js';
import { digits } from './worked.js';
import type { Worked } from './worked.js';

interface Scheme {
  readonly words: string;
  /** n: bits of the converter. */
  readonly energy: (n: number) => number;
  readonly formula: string;
  readonly source: string;
}

/**
 * Mean energy that a differential converter of n bits takes from its reference for the decisions of one conversion, all codes alike, the
 * reset excluded, in C Vref^2 (C: one unit). Sums over the decisions of what each of them draws on the mean, in closed form.
 */
const schemes: Readonly<Record<Switching, Scheme>> = {
  conventional: {
    words: 'conventional',
    energy: (n) => powerOfTwo(n + 2) / 3 - 2 + powerOfTwo(1 - n) / 3,
    formula: '2^(N+2)/3 - 2 + 2^(1-N)/3',
    source: 'sum of 2^(N+1-2i) (2^i - 1) over i = 1..N',
  },
  splitMsb: {
    words: 'split MSB',
    energy: (n) => (5 * powerOfTwo(n - 1)) / 3 - 1 + powerOfTwo(1 - n) / 3,
    formula: '5 x 2^(N-1)/3 - 1 + 2^(1-N)/3',
    source: '2^(N-1) and the sum of 2^(N+1-2i) (2^(i-1) - 1) over i = 2..N; Ginsburg, Chandrakasan 2005 (from memory)',
  },
  monotonic: {
    words: 'monotonic',
    energy: (n) => powerOfTwo(n - 2) - 0.5,
    formula: '2^(N-2) - 1/2',
    source: 'sum of 2^(N-2-i) over i = 1..N-1; Liu, Chang, Huang, Lin 2010 (from memory)',
  },
  vcmBased: {
    words: 'Vcm-based',
    energy: (n) => powerOfTwo(n - 1) / 3 - 0.5 + powerOfTwo(-n) / 3,
    formula: '2^(N-1)/3 - 1/2 + 2^-N/3',
    source: 'sum of 2^(N-2-2i) (2^i - 1) over i = 1..N-1; Zhu et al. 2010 (from memory)',
  },
};

/** Mean switching energy of a scheme for a converter of `bits`, C Vref^2. */
export function switchingEnergy(scheme: Switching, bits: number): Worked {
  const { words, energy, formula, source } = schemes[scheme];
  return {
    name: `energy, ${words}`,
    value: energy(bits),
    unit: 'C Vref^2',
    formula,
    inserted: formula.replaceAll('N', String(bits)).replace('- 1/2', '- 0.5'),
    source,
  };
}

/**
 * The same in picojoules. Each array of a pair takes half on the mean; the reference is what an array's full scale comes to, which is half
 * that of a pair.
 */
export function energyOfConversion(energy: Worked, unit_fF: number, converter: Sized): Worked {
  const arrays = arraysOf(converter);
  const reference_V = converter.fullScale_Vpp / arrays;
  return {
    name: 'energy a conversion',
    value: ((arrays / 2) * energy.value * unit_fF * reference_V * reference_V) / 1000,
    unit: 'pJ',
    formula: `${arrays === 1 ? '1/2 ' : ''}E C Vref^2`,
    inserted: `${arrays === 1 ? '1/2 x ' : ''}${digits(energy.value)} x ${digits(unit_fF)} fF x (${digits(reference_V)} V)^2`,
    source: 'of the switching chosen; reset, comparator and logic are not counted',
  };
}
