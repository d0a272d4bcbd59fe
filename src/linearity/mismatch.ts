import type { Capacitor, Core } from '../spec/floorplan.js';
import type { MismatchFigures } from '../spec/metrics.js';
import { comparisonLength, correlationOf } from './correlation.js';
import { GRAIN, pairSums } from './covariance.js';
import { bitsOf } from './expected-units.js';
import { worstOverSigns, worstOverSteps } from './worst-variance.js';

export interface Placed {
  readonly core: Core;
  readonly capacitors: readonly Capacitor[];
  /** Rows of capacitor names from the top; what is no bit's name (dummies, the termination) counts for nothing. */
  readonly cells: readonly (readonly string[])[];
}

export interface Mismatch {
  /** Relative standard deviation of one unit, of the part that it has for itself. */
  readonly localSigma_percent: number;
  /** The same of the part that neighbours share: correlated by exp(-distance / correlationLength_um), 0: with nobody. */
  readonly correlatedSigma_percent: number;
  readonly correlationLength_um: number;
}

/** Covariances of the bits by ascending weight, row by row. */
export interface Covariances {
  /** Of what they are, units^2. */
  readonly capacitance: readonly Float64Array[];
  /** Of what each has besides gain, LSB^2: from the line through both ends, and from the least-squares line. */
  readonly endPoint: readonly Float64Array[];
  readonly leastSquares: readonly Float64Array[];
}

/** Standard deviations over all codes, at most; `dnl` absent beyond 14 capacitors that are not straight binary. */
interface Sigma extends Covariances {
  readonly inl: number;
  readonly dnl?: number;
  readonly inlLeastSquares: number;
}

/** Figures of random mismatch, and the covariances that they come from. */
export interface MismatchAnalysis extends Covariances {
  readonly figures: MismatchFigures;
}

/**
 * What random mismatch does to the transfer curve: sigma INL and sigma DNL of the worst code in LSB, from the line through both ends and
 * (INL) from the least-squares line; and the same for units of variance 1, wholly correlated, 0.9 at a distance of one pitch, which judges
 * the placement alone. In the linear model (errors small against the unit), exact over all codes.
 */
export function analyseMismatch(placed: Placed, mismatch: Mismatch): MismatchAnalysis {
  const { localSigma_percent, correlatedSigma_percent, correlationLength_um } = mismatch;
  const { inl, dnl, inlLeastSquares, ...covariances } = worstSigma(
    placed,
    localSigma_percent / 100,
    correlatedSigma_percent / 100,
    correlationLength_um,
  );
  const figures: MismatchFigures = {
    inlSigma_lsb: inl,
    ...(dnl !== undefined && { dnlSigma_lsb: dnl }),
    inlSigmaLeastSquares_lsb: inlLeastSquares,
    placement: placementSigma(placed, comparisonLength(placed.core.pitch_um)),
  };
  return { figures, ...covariances };
}

/** Sigma INL and DNL of the worst code per sigma of one unit, for units of variance 1 that are wholly correlated over `length_um`. */
export function placementSigma(placed: Placed, length_um: number): MismatchFigures['placement'] {
  const { inl, dnl } = worstSigma(placed, 0, 1, length_um);
  return { inlSigma_perUnitSigma: inl, ...(dnl !== undefined && { dnlSigma_perUnitSigma: dnl }) };
}

function worstSigma({ core, capacitors, cells }: Placed, local: number, correlated: number, length_um: number): Sigma {
  const bits = bitsOf(capacitors);
  const names = bits.map(({ name }) => name);
  const weight = bits.map((bit) => bit.weight);
  const itself = names.map((name) => BigInt(cells.reduce((n, line) => n + line.filter((c) => c === name).length, 0)));
  const alone = names.map((_, k) => names.map((__, l) => (k === l ? GRAIN * itself[k] : 0n)));
  const shared = correlated > 0 && length_um > 0;
  const together = shared
    ? pairSums(names, cells, correlationOf(core.rows, core.columns, core.pitch_um, length_um))
    : alone;
  // Variances of what is left without gain, in LSB^2.
  const left = (vote: readonly number[]): Float64Array[] => {
    const own = withoutGain(weight, vote, alone);
    const common = withoutGain(weight, vote, together);
    return own.map((row, k) => row.map((v, l) => local * local * v + correlated * correlated * common[k][l]));
  };
  const grain = Number(GRAIN);
  const capacitance = alone.map((row, k) =>
    Float64Array.from(
      row,
      (own, l) => (local * local * Number(own) + correlated * correlated * Number(together[k][l])) / grain,
    ),
  );
  const endPoint = left(weight.map(() => 1));
  const leastSquares = left(weight);
  const dnl = worstOverSteps(weight, endPoint);
  return {
    inl: Math.sqrt(Math.max(0, worstOverSigns(endPoint))),
    ...(dnl !== undefined && { dnl: Math.sqrt(dnl) }),
    inlLeastSquares: Math.sqrt(Math.max(0, worstOverSigns(leastSquares))),
    capacitance,
    endPoint,
    leastSquares,
  };
}

/**
 * Covariance of e_k = s_k - w_k sum_j v_j s_j / sum_j v_j w_j from that of the s_k. With votes v = 1 these are the residuals of the
 * end-point fit, with v = w those of least squares; of both, the largest |INL| is half the largest |sum +-e_k| (see `Residuals`). In whole
 * numbers up to the last division: of large covariances little is left.
 */
function withoutGain(
  weight: readonly number[],
  vote: readonly number[],
  covariance: readonly (readonly bigint[])[],
): Float64Array[] {
  const w = weight.map(BigInt);
  const v = vote.map(BigInt);
  const scale = w.reduce((sum, each, k) => sum + v[k] * each, 0n);
  const along = covariance.map((row) => row.reduce((sum, entry, l) => sum + v[l] * entry, 0n));
  const all = along.reduce((sum, entry, k) => sum + v[k] * entry, 0n);
  const grains = Number(scale * scale * GRAIN);
  return covariance.map((row, k) =>
    Float64Array.from(
      row,
      (entry, l) => Number(scale * (scale * entry - w[k] * along[l] - w[l] * along[k]) + w[k] * w[l] * all) / grains,
    ),
  );
}
