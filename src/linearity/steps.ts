/** Called with (x, y, xx, xy, yy): the residual that one step between neighbouring levels adds. */
type VisitStep = (x: number, y: number, xx: number, xy: number, yy: number) => void;

/** Beyond it, steps of weights that are not straight binary are not visited. */
const MOST_CAPACITORS = 14;

/**
 * Visits the steps between neighbouring distinct nominal levels. Straight binary weights (1, 2, 4, ...) have one step per bit: the bit
 * goes on and all lower ones go off. With other weights several subsets of bits may make a level, and each step is visited at all pairs of them.
 *
 * @param weight LSB, ascending. @param vectors the five components of the end-point residuals, each by bit.
 * @returns false, with nothing visited, for more than 14 capacitors that are not straight binary.
 */
export function visitSteps(
  weight: readonly number[],
  vectors: readonly (readonly number[])[],
  visit: VisitStep,
): boolean {
  if (isStraightBinary(weight)) visitBits(vectors, visit);
  else if (weight.length <= MOST_CAPACITORS) visitLevels(weight, vectors, visit);
  else return false;
  return true;
}

function isStraightBinary(weight: readonly number[]): boolean {
  let next = 1;
  for (const w of weight) {
    if (w !== next) return false;
    next *= 2;
  }
  return true;
}

function visitBits([x, y, xx, xy, yy]: readonly (readonly number[])[], visit: VisitStep): void {
  const below = [0, 0, 0, 0, 0];
  for (let k = 0; k < x.length; k++) {
    visit(x[k] - below[0], y[k] - below[1], xx[k] - below[2], xy[k] - below[3], yy[k] - below[4]);
    below[0] += x[k];
    below[1] += y[k];
    below[2] += xx[k];
    below[3] += xy[k];
    below[4] += yy[k];
  }
}

function visitLevels(weight: readonly number[], vectors: readonly (readonly number[])[], visit: VisitStep): void {
  const count = 1 << weight.length;
  // Sums over subset d: level and five components; a subset's sum is that of the subset without its lowest bit, plus that bit.
  const sums = Array.from({ length: 6 }, () => new Float64Array(count));
  const [level, sx, sy, sxx, sxy, syy] = sums;
  for (let d = 1; d < count; d++) {
    const k = 31 - Math.clz32(d & -d);
    const rest = d & (d - 1);
    [weight, ...vectors].forEach((of, i) => (sums[i][d] = sums[i][rest] + of[k]));
  }
  const order = (a: number, b: number): number => {
    for (const sum of sums) if (sum[a] !== sum[b]) return sum[a] - sum[b];
    return 0;
  };
  const subsets = Array.from({ length: count }, (_, d) => d).sort(order);
  // Subsets of one level with the same residual are one: capacitors of equal weight and mirrored cells make many of them.
  const distinct = Int32Array.from(subsets.filter((d, i) => i === 0 || order(subsets[i - 1], d) !== 0));
  const endOfLevel = (from: number): number => {
    let end = from;
    while (end < distinct.length && level[distinct[end]] === level[distinct[from]]) end++;
    return end;
  };
  let from = 0;
  let middle = endOfLevel(0);
  while (middle < distinct.length) {
    const to = endOfLevel(middle);
    for (let i = from; i < middle; i++) {
      const a = distinct[i];
      for (let j = middle; j < to; j++) {
        const b = distinct[j];
        visit(sx[b] - sx[a], sy[b] - sy[a], sxx[b] - sxx[a], sxy[b] - sxy[a], syy[b] - syy[a]);
      }
    }
    from = middle;
    middle = to;
  }
}
