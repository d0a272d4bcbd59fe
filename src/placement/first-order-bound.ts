import type { DealtNet } from './dealing.js';

const MOST_SUMS = 40_000;

/**
 * A lower bound of the first order, max over codes of |sum of a_k| in LSB per ppm/um, that holds for every placement of these nets in this
 * core. 0 where the argument finds nothing, which does not mean that 0 can be reached.
 *
 * In half-pitches from the core's centre let s_k be the sum of the positions of capacitor k, S that of all capacitors that have weight,
 * W their weights together; a_k = s_k - (w_k / W) S.
 *
 * 1. Along an axis of an even count of cells positions are odd, so s_k is even or odd as n_k is; along an odd count they are even, so s_k
 *    is. Whatever S is, |a_k| along the axis is at least the distance d_k(S) of (w_k / W) S from the whole numbers of that parity.
 * 2. All cells of the core add up to 0, so -S is the sum over the cells without weight, f of them: it has the parity that they have, and
 *    |S| is at most the sum of the f outermost positions.
 * 3. A code may be one capacitor alone: the maximum is at least each |a_k|. Along a line it is at least half the sum of the |a_k| taken along
 *    it, since the a_k add up to 0 and either those that point forward or those that point back make up that half.
 * So the least, over the possible S, of the larger of 3's figures, with d_k for |a_k|, is a bound.
 *
 * 4. Two capacitors of one unit and one weight stand in different cells: |a_k - a_l| = |r_k - r_l| is at least the shorter pitch, so one
 *    of |a_k|, |a_l| is at least half of it.
 *
 * @param pitch pitch_um, x and y.
 */
export function firstOrderBound(
  core: { readonly rows: number; readonly columns: number },
  nets: readonly DealtNet[],
  pitch: readonly [x: number, y: number],
): number {
  const bits = nets.filter(({ weight }) => weight > 0);
  const fill = core.rows * core.columns - bits.reduce((sum, { units }) => sum + units, 0);
  const total = bits.reduce((sum, { weight }) => sum + weight, 0);
  const along = (cells: number, across: number, step: number): Axis => axis(bits, total, cells, across, fill, step / 2);
  const x = along(core.columns, core.rows, pitch[0]);
  const y = along(core.rows, core.columns, pitch[1]);
  let least = Infinity;
  if (x.sums * y.sums <= MOST_SUMS) {
    for (let i = 0; i < x.sums; i++) {
      for (let j = 0; j < y.sums; j++) {
        let most = Math.max(x.half[i], y.half[j]);
        for (let k = 0; k < bits.length; k++) {
          const dx = x.distance[i * bits.length + k];
          const dy = y.distance[j * bits.length + k];
          most = Math.max(most, Math.sqrt(dx * dx + dy * dy));
        }
        least = Math.min(least, most);
      }
    }
  } else least = Math.max(leastOf(x, bits.length), leastOf(y, bits.length));

  const singles = bits.filter(({ units }) => units === 1).map(({ weight }) => weight);
  const twins = new Set(singles).size < singles.length;
  return 1e-6 * Math.max(least, twins ? Math.min(pitch[0], pitch[1]) / 2 : 0);
}

/** What one axis says for each possible S, in um. */
interface Axis {
  readonly sums: number;
  /** [sum * bits + k]: the least |a_k| along the axis. */
  readonly distance: Float64Array;
  /** [sum]: half of what these add up to. */
  readonly half: Float64Array;
}

function axis(
  bits: readonly DealtNet[],
  total: number,
  cells: number,
  across: number,
  fill: number,
  step: number,
): Axis {
  // The outermost positions are cells - 1, and there are 2 * across of them, then cells - 3, and so on.
  let reach = 0;
  let left = fill;
  for (let position = cells - 1; position > 0 && left > 0; position -= 2) {
    reach += position * Math.min(left, 2 * across);
    left -= 2 * across;
  }
  const parityOf = (count: number): number => (cells % 2 === 0 ? count % 2 : 0);
  // Turning the core about its centre turns S: as the d_k are even in S, those from 0 up say it all.
  const first = parityOf(fill);
  const sums = Math.floor(Math.max(0, reach - first) / 2) + 1;
  const distance = new Float64Array(sums * bits.length);
  const half = new Float64Array(sums);
  for (let i = 0; i < sums; i++) {
    bits.forEach(({ weight, units }, k) => {
      const wanted = (weight * (first + 2 * i)) / total - parityOf(units);
      const d = Math.abs(wanted - 2 * Math.round(wanted / 2)) * step;
      distance[i * bits.length + k] = d;
      half[i] += d / 2;
    });
  }
  return { sums, distance, half };
}

function leastOf({ sums, distance, half }: Axis, bits: number): number {
  let least = Infinity;
  for (let i = 0; i < sums; i++) {
    let most = half[i];
    for (let k = 0; k < bits; k++) most = Math.max(most, distance[i * bits + k]);
    least = Math.min(least, most);
  }
  return least;
}
