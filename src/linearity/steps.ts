/**
 * The steps between neighbouring distinct nominal levels, as differences of points. Point p has the components
 * `points[i][p]`; every step of group [a0, a1, b0, b1] (four entries of `groups` each) leads from a point a0 <= a < a1 to a
 * point b0 <= b < b1.
 */
interface Steps {
  readonly points: readonly Float64Array[];
  readonly groups: Int32Array;
}

/** Beyond it, there are no steps of weights that are not straight binary. */
const MOST_CAPACITORS = 14;

/**
 * Straight binary weights (1, 2, 4, ...) have one step per bit: the bit goes on and all lower ones go off. With other
 * weights several subsets of bits may make a level, and a step leads from any of one level to any of the next.
 *
 * @param weight LSB, ascending. @param vectors components of the end-point residuals, each by bit.
 * @returns undefined for more than 14 capacitors that are not straight binary.
 */
export function stepsOf(weight: readonly number[], vectors: readonly (readonly number[])[]): Steps | undefined {
  if (isStraightBinary(weight)) return bitSteps(vectors);
  return weight.length <= MOST_CAPACITORS ? levelSteps(weight, vectors) : undefined;
}

/** Whether the weights are 1, 2, 4, ... */
export function isStraightBinary(weight: readonly number[]): boolean {
  let next = 1;
  for (const w of weight) {
    if (w !== next) return false;
    next *= 2;
  }
  return true;
}

/** Points 2 k: all bits below k. Points 2 k + 1: bit k alone. */
function bitSteps(vectors: readonly (readonly number[])[]): Steps {
  const points = vectors.map((values) => {
    let below = 0;
    const both = values.flatMap((value) => {
      below += value;
      return [below - value, value];
    });
    return Float64Array.from(both);
  });
  const groups = Int32Array.from((vectors[0] ?? []).flatMap((_, k) => [2 * k, 2 * k + 1, 2 * k + 1, 2 * k + 2]));
  return { points, groups };
}

function levelSteps(weight: readonly number[], vectors: readonly (readonly number[])[]): Steps {
  const count = 1 << weight.length;
  // By subset d: the nominal level, then the components; those of d without its lowest bit, plus that bit's.
  const sums = [weight, ...vectors].map((values) => {
    const sum = new Float64Array(count);
    for (let d = 1; d < count; d++) sum[d] = sum[d & (d - 1)] + values[31 - Math.clz32(d & -d)];
    return sum;
  });
  const order = (a: number, b: number): number => {
    for (const sum of sums) if (sum[a] !== sum[b]) return sum[a] - sum[b];
    return 0;
  };
  const subsets = Array.from({ length: count }, (_, d) => d).sort(order);
  // Subsets of one level with the same residual are one point: capacitors of equal weight and mirrored cells make many of them.
  const distinct = subsets.filter((d, i) => i === 0 || order(subsets[i - 1], d) !== 0);
  const [level, ...components] = sums;
  const points = components.map((sum) => Float64Array.from(distinct, (d) => sum[d]));
  const starts = distinct.flatMap((d, i) => (i === 0 || level[distinct[i - 1]] !== level[d] ? [i] : []));
  const ends = [...starts.slice(1), distinct.length];
  const groups = Int32Array.from(ends.slice(1).flatMap((end, i) => [starts[i], ends[i], ends[i], end]));
  return { points, groups };
}
