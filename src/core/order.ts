const digitBits = 11;
const digits = 1 << digitBits;

/**
 * Numbers 0 .. n - 1 in order of the first key, then of the second; equal ones keep their order. Least digit first, so that the cost is
 * a few passes whatever the order was.
 */
export function orderBy(first: Int32Array, second: Int32Array): Uint32Array {
  const count = first.length;
  let order = new Uint32Array(count).map((_, i) => i);
  let next = new Uint32Array(count);
  const starts = new Uint32Array(digits + 1);
  for (const key of [second, first]) {
    let least = 0;
    let most = 0;
    for (let i = 0; i < count; i++) {
      if (i === 0 || key[i] < least) least = key[i];
      if (i === 0 || key[i] > most) most = key[i];
    }
    // Whole numbers of 32 bits differ by less than 2^32, so three digits are enough.
    for (let shift = 0; shift < 32 && (most - least) >>> shift > 0; shift += digitBits) {
      starts.fill(0);
      for (let i = 0; i < count; i++) starts[(((key[i] - least) >>> shift) & (digits - 1)) + 1]++;
      for (let d = 0; d < digits; d++) starts[d + 1] += starts[d];
      for (let i = 0; i < count; i++) next[starts[((key[order[i]] - least) >>> shift) & (digits - 1)]++] = order[i];
      [order, next] = [next, order];
    }
  }
  return order;
}

/** Index of the first value of an ascending list that is at least `least`; the list's length where none is. */
export function firstAtLeast(ascending: readonly number[], least: number): number {
  let low = 0;
  let high = ascending.length;
  while (low < high) {
    const middle = (low + high) >> 1;
    if (ascending[middle] < least) low = middle + 1;
    else high = middle;
  }
  return low;
}
