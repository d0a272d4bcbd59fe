import type { Deal } from '../array/cost-term.js';
import { perPpmPerUm2, pitchNm } from './figures.js';
import { momentsOfDeal } from './moments.js';
import { endPointResiduals } from './residuals.js';
import { worstSecondOrder } from './worst-code.js';

/**
 * The second order of a deal over all codes: `squared`, to compare with a bound or another deal of the same bits, and LSB
 * per ppm/um^2.
 */
interface ExactSecondOrder {
  readonly squared: bigint;
  readonly inl_lsb_per_ppm_per_um2: number;
}

/** Exact where `secondOrderTerm` bounds from above. Pitches in whole nanometres, given in um. */
export function secondOrderInl(deal: Deal, pitch_um: readonly [x: number, y: number]): ExactSecondOrder {
  const residuals = endPointResiduals(momentsOfDeal(deal));
  const { squared } = worstSecondOrder(residuals, pitchNm(pitch_um));
  return { squared, inl_lsb_per_ppm_per_um2: perPpmPerUm2(squared, residuals.scale) };
}
