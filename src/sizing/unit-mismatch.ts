import { powerOfTwo } from '../core/power-of-two.js';
import { redrawn } from '../spec/scale-unit.js';
import type { Technology } from '../spec/technology.js';
import { drawnCapacitance_fF, matchedArea_um2 } from '../spec/unit-geometry.js';
import { arrayBits, arraysOf, decidesFirst } from './array-bits.js';
import type { Sized } from './array-bits.js';
import { digits } from './worked.js';
import type { Worked } from './worked.js';

/** Sigma at the worst code or step per sigma of a unit, LSB, and its formula. */
interface SigmaFactor {
  readonly value: number;
  readonly formula: string;
}

/** Sigmas that a limit stands for. */
const SIGMAS = 3;

/**
 * Sigma of INL and DNL of a converter with independent units, exact to first order (end-point line), at the worst code.
 *
 * An array of n bits has W = 2^n - 1 units. The level of k of them on has the variance k (W - k) / W; the largest step exchanges 2^(n-1)
 * units for the 2^(n-1) - 1 others, a variance of W (less 1/W, which the published rule leaves out). With the largest bit split it
 * exchanges half as many. Where the sign is decided first the level next to the exact zero has the largest bit on one side and all others
 * on the other: W - 1/W, for step and level alike. Two arrays are averaged, or each level is made of both.
 */
export function sigmaFactors(converter: Sized): { readonly inl: SigmaFactor; readonly dnl: SigmaFactor } {
  const n = arrayBits(converter);
  const units = powerOfTwo(n) - 1;
  const arrays = arraysOf(converter);
  const over = arrays === 2 ? ' / sqrt(2)' : '';
  const factor = (variance: number, formula: string): SigmaFactor => ({
    value: Math.sqrt(variance / arrays),
    formula: `sqrt(${formula})${over}`,
  });
  const half = powerOfTwo(n - 1);
  if (decidesFirst(converter)) {
    const both = factor(units - 1 / units, `2^${n} - 1 - 1 / (2^${n} - 1)`);
    return { inl: both, dnl: both };
  }
  return {
    inl: factor((half * (half - 1)) / units, `2^${n - 1} (2^${n - 1} - 1) / (2^${n} - 1)`),
    dnl: converter.switching === 'splitMsb' ? factor(half - 1, `2^${n - 1} - 1`) : factor(units, `2^${n} - 1`),
  };
}

const published = 'independent units, end-point line, worst code; linear algebra';

/** The largest sigma of a unit that keeps three sigma of INL and DNL within the limits; a limit that is not given asks for nothing. */
export function unitSigma(converter: Sized): Worked {
  const { inl, dnl } = sigmaFactors(converter);
  const { limits = {} } = converter;
  const demands = [
    { of: 'DNL', limit: limits.dnl_lsb, factor: dnl },
    { of: 'INL', limit: limits.inl_lsb, factor: inl },
  ].flatMap(({ of, limit, factor }) =>
    limit === undefined ? [] : [{ of, limit, factor, value: (100 * limit) / (SIGMAS * factor.value) }],
  );
  const least = demands.reduce((a, b) => (b.value < a.value ? b : a), demands[0]);
  return {
    name: 'mismatch',
    value: least.value,
    unit: '%',
    formula: `s <= L / (${SIGMAS} F), F = ${least.factor.formula} of ${least.of}`,
    inserted: `${least.limit} LSB / (${SIGMAS} x ${digits(least.factor.value)})`,
    source: published,
  };
}

/** The area (um2) at which a unit has this sigma: the area law sigma^2 = A^2 / area; a coefficient of pairs counts twice the variance. */
export function unitArea(sigma_percent: number, mismatch: Technology['mismatch']): Worked {
  const { coefficient_percent_um: coefficient, of } = mismatch;
  const variances = of === 'pair' ? 2 : 1;
  return {
    name: 'matched area',
    value: (coefficient * coefficient) / (variances * sigma_percent * sigma_percent),
    unit: 'um2',
    formula: of === 'pair' ? 'area >= A^2 / (2 s^2)' : 'area >= A^2 / s^2',
    inserted: `(${coefficient} % um)^2 / (${of === 'pair' ? '2 x ' : ''}(${digits(sigma_percent)} %)^2)`,
    source: `coefficient of ${of === 'pair' ? 'the difference of two units' : 'one unit'}; Pelgrom, Duinmaijer, Welbers, JSSC 24(5), 1989 (from memory)`,
  };
}

const REDRAWN = 4;

/** The capacitance (fF) of the technology's unit made so large that its matched area is this. */
export function capacitanceOfArea(area_um2: number, technology: Technology): Worked {
  const { unit, dielectric } = technology;
  const own_um2 = matchedArea_um2(unit);
  if (unit.kind !== 'parallel-plate') {
    let value = (unit.capacitance_fF * area_um2) / own_um2;
    // Fingers are redrawn: their number and length change together, and the area follows only about in proportion.
    for (let round = 0; unit.kind === 'framed-fingers' && round < REDRAWN; round++)
      value *= area_um2 / matchedArea_um2(redrawn(technology, unit, value).unit);
    return {
      name: 'its capacitance',
      value,
      unit: 'fF a unit',
      formula:
        unit.kind === 'framed-fingers' ? 'C = C0 area / area0, redrawn until the area is right' : 'C = C0 area / area0',
      inserted: `${digits(unit.capacitance_fF)} fF x ${digits(area_um2)} um2 / ${digits(own_um2)} um2`,
      source: `the unit of ${technology.name}`,
    };
  }
  const side = Math.sqrt(area_um2 / own_um2);
  const [width, height] = unit.topPlate_um.map((length) => side * length);
  const { plateCapacitance_fF_per_um2: density = 0, plateFringe_fF_per_um: fringe = 0 } = dielectric;
  const stated = unit.capacitance_fF / (drawnCapacitance_fF(technology) ?? unit.capacitance_fF);
  const scaled = drawnCapacitance_fF({ dielectric, unit: { ...unit, topPlate_um: [width, height] } }) ?? 0;
  const times = Math.abs(stated - 1) < 1e-9 ? '' : ` x ${digits(stated)}`;
  return {
    name: 'its capacitance',
    value: stated * scaled,
    unit: 'fF a unit',
    formula: `C = (area c + perimeter f)${times === '' ? '' : ' x q'}`,
    inserted: `(${digits(area_um2)} um2 x ${density} fF/um2 + ${digits(2 * (width + height))} um x ${fringe} fF/um)${times}`,
    source: `plate of ${technology.name} in its own proportions`,
  };
}
