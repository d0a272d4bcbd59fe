import type { Sized } from './array-bits.js';
import { digits } from './worked.js';
import type { Worked } from './worked.js';

/** Clock cycles of a conversion: two to sample, one for each decision. */
const cyclesOf = (decisions: number): number => decisions + 2;

/** Time constants until half an LSB is left of a full-scale step: (N + 1) ln 2. */
export const timeConstants = (bits: number): number => (bits + 1) * Math.LN2;

/** The time of one clock cycle, which a bit has to settle in. */
export function cycleTime({ bits, sampleRate_MHz = NaN }: Sized): Worked {
  return {
    name: 'clock cycle',
    value: 1000 / (cyclesOf(bits) * sampleRate_MHz),
    unit: 'ns',
    formula: 't = 1 / ((N + 2) f)',
    inserted: `1 / ((${bits} + 2) x ${sampleRate_MHz} MHz)`,
    source: 'two cycles to sample, one a decision; what the comparator takes of it comes off (common practice)',
  };
}

/** The largest resistance (ohm) through which a capacitance settles to half an LSB of full scale in a time. */
export function largestResistance(bits: number, time_ns: number, total_fF: number): Worked {
  return {
    name: 'resistance',
    value: (time_ns * 1e6) / (timeConstants(bits) * total_fF),
    unit: 'ohm',
    formula: 'R <= t / ((N + 1) ln 2 C)',
    inserted: `${digits(time_ns)} ns / ((${bits} + 1) ln 2 x ${digits(total_fF)} fF)`,
    source: 'half an LSB is left of a full-scale step, the whole array on TOP held',
  };
}
