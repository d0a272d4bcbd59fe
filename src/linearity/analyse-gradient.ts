import type { Capacitor, Core } from '../spec/floorplan.js';
import type { FirstOrder, SecondOrder } from '../spec/metrics.js';
import type { Gradient } from '../spec/technology.js';
import { largestSteps } from './dnl.js';
import { HALF_NM, onePercent, perPpmPerUm, perPpmPerUm2, pitchNm } from './figures.js';
import { lowerBound } from './lower-bound.js';
import { momentsOfCells } from './moments.js';
import { ownGradient, worstOwnError } from './own-gradient.js';
import { endPointResiduals, leastSquaresResiduals } from './residuals.js';
import { inNanometres, worstFirstOrder, worstSecondOrder } from './worst-code.js';
import { worstDirection, worstShape } from './worst-gradient.js';

interface GradientInput {
  readonly core: Core;
  readonly capacitors: readonly Capacitor[];
  /** Rows of capacitor names from the top; what is no bit's name (dummies, the termination) counts for nothing. */
  readonly cells: readonly (readonly string[])[];
  /** The user's own, or what the technology leads to expect. */
  readonly gradient?: Gradient;
}

export interface GradientFigures {
  readonly first: FirstOrder;
  readonly second: SecondOrder;
  /** Where a gradient was given. */
  readonly own?: { readonly inl_lsb: number; readonly dnl_lsb?: number };
  /** As `first.inl_lsb` and `second.inl_lsb`, but from the least-squares line through all 2^N codes. */
  readonly leastSquares: { readonly firstInl_lsb: number; readonly secondInl_lsb: number };
  /** The second order equals its lower bound exactly: no placement without first order has less. */
  readonly meetsBound: boolean;
}

/**
 * How far a linear and a quadratic gradient across the core bend the transfer curve, at worst.
 *
 * INL is the largest over all subsets of bits, in the linear model (errors small against the unit), from the line through
 * both ends. First order: 1 % from the centre to the farthest cell, along the worst direction. Second order: 1 % r'Qr /
 * r_far^2 with the worst Q of spectral norm 1. Both also per ppm/um and ppm/um^2. What is compared is compared in whole
 * numbers; only what is reported is rounded. DNL is absent beyond 14 capacitors that are not straight binary; worst
 * direction, shape and code where the figure is exactly 0.
 *
 * @param input weights and units are whole numbers, pitches whole nanometres.
 * @throws RangeError if a pitch is no whole number of nanometres.
 */
export function analyseGradient({ core, capacitors, cells, gradient }: GradientInput): GradientFigures {
  // Sorting is stable: bits of equal weight stay in the given order.
  const bits = capacitors.filter(({ role }) => role === 'bit').sort((a, b) => a.weight - b.weight);
  const names = bits.map(({ name }) => name);
  const weight = bits.map((bit) => bit.weight);
  const pitch = pitchNm(core.pitch_um);
  const moments = momentsOfCells(names, weight, cells);
  const residuals = endPointResiduals(moments);
  const { scale } = residuals;
  const own = gradient && ownGradient(gradient);
  const half = [HALF_NM * pitch[0], HALF_NM * pitch[1]] as const;
  const steps = largestSteps(weight, residuals, half, own);
  const inNm = inNanometres(residuals, pitch);
  const onIn = (code: bigint): string[] => names.filter((_, k) => (code >> BigInt(k)) & 1n);

  const worst1 = worstFirstOrder(residuals, pitch);
  const inl1 = perPpmPerUm(worst1.squared, scale);
  const percent1 = onePercent(core, 1);
  const first: FirstOrder = {
    inl_lsb: inl1 * percent1,
    ...(steps && { dnl_lsb: steps.first * percent1 }),
    inl_lsb_per_ppm_per_um: inl1,
    ...(steps && { dnl_lsb_per_ppm_per_um: steps.first }),
    ...(worst1.squared > 0n && { worstDirection_deg: worstDirection(inNm, worst1.code), worstCode: onIn(worst1.code) }),
  };

  const worst2 = worstSecondOrder(residuals, pitch);
  const inl2 = perPpmPerUm2(worst2.squared, scale);
  const percent2 = onePercent(core, 2);
  const bound = worst1.squared === 0n && !holdsTermination(capacitors, cells) ? lowerBound(core, bits) : undefined;
  const second: SecondOrder = {
    inl_lsb: inl2 * percent2,
    ...(steps && { dnl_lsb: steps.second * percent2 }),
    inl_lsb_per_ppm_per_um2: inl2,
    ...(steps && { dnl_lsb_per_ppm_per_um2: steps.second }),
    ...(worst2.squared > 0n && { worstShape: worstShape(inNm, worst2.code), worstCode: onIn(worst2.code) }),
    ...(bound && { lowerBound_inl_lsb: bound.inl_lsb }),
  };

  const line = leastSquaresResiduals(moments);
  return {
    first,
    second,
    meetsBound: bound?.squared === worst2.squared,
    ...(own && {
      own: { inl_lsb: worstOwnError(own, residuals, half), ...(steps && { dnl_lsb: steps.own }) },
    }),
    leastSquares: {
      firstInl_lsb: perPpmPerUm(worstFirstOrder(line, pitch).squared, line.scale) * percent1,
      secondInl_lsb: perPpmPerUm2(worstSecondOrder(line, pitch).squared, line.scale) * percent2,
    },
  };
}

function holdsTermination(capacitors: readonly Capacitor[], cells: readonly (readonly string[])[]): boolean {
  const terminations = new Set(capacitors.filter(({ role }) => role !== 'bit').map(({ name }) => name));
  return cells.some((line) => line.some((name) => terminations.has(name)));
}
