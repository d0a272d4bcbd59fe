/**
 * The longest sum of signed vectors. `squared` is the square of the length of sum_k s_k v_k, s_k = +-1, at its largest;
 * `code` has bit k set where s_k = +1 in the sum that is reached by the smallest such number, vectors of length 0 counting
 * as s_k = -1.
 */
export interface LongestSum {
  readonly squared: bigint;
  readonly code: bigint;
}

/** Of numbers: all of one sign. */
export function longestSumOnLine(values: readonly bigint[]): LongestSum {
  let length = 0n;
  let positive = 0n;
  let negative = 0n;
  values.forEach((value, k) => {
    if (value > 0n) positive |= 1n << BigInt(k);
    if (value < 0n) negative |= 1n << BigInt(k);
    length += value < 0n ? -value : value;
  });
  return { squared: length * length, code: positive < negative ? positive : negative };
}

/**
 * Of vectors in the plane, by a walk around their zonotope. With every vector turned into the upper half plane and in the
 * order of their angles, the sum of all is one vertex; reversing one direction after the other visits half the others, and
 * the rest are their negatives:
 *
 *        __v3_
 *   -v1 /     \ -v1 reversed first, then v2, ...
 *      |       |
 *
 * No longest sum is missed. Let V be one. Reversing s_k v_k cannot make it longer: |V - 2 s_k v_k|^2 <= |V|^2, so s_k v_k .
 * V >= |v_k|^2 > 0. So s_k is the sign of v_k . V, with no vector at right angles to V: a vertex, and no other signs reach
 * it. Everything is compared in whole numbers.
 */
export function longestSumInPlane(xs: readonly bigint[], ys: readonly bigint[]): LongestSum {
  const upper = xs
    .map((x, k) => {
      const y = ys[k];
      const down = y < 0n || (y === 0n && x < 0n);
      return { x: down ? -x : x, y: down ? -y : y, bit: 1n << BigInt(k), down };
    })
    .filter(({ x, y }) => x !== 0n || y !== 0n);
  upper.sort((a, b) => {
    const cross = a.x * b.y - b.x * a.y;
    return cross > 0n ? -1 : cross < 0n ? 1 : 0;
  });
  let x = 0n;
  let y = 0n;
  let plus = 0n;
  let all = 0n;
  for (const v of upper) {
    x += v.x;
    y += v.y;
    all |= v.bit;
    if (!v.down) plus |= v.bit;
  }
  let squared = -1n;
  let code = 0n;
  for (const v of upper) {
    // Of vectors in one direction some turned and some not: a place along an edge, shorter than one of the edge's ends.
    const length2 = x * x + y * y;
    const lesser = plus < (all ^ plus) ? plus : all ^ plus;
    if (length2 > squared || (length2 === squared && lesser < code)) {
      squared = length2;
      code = lesser;
    }
    x -= 2n * v.x;
    y -= 2n * v.y;
    plus ^= v.bit;
  }
  return squared < 0n ? { squared: 0n, code: 0n } : { squared, code };
}
