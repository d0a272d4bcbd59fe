/**
 * The subset of bits of each nominal level that a conversion ends at, from 0 upwards: from the largest weight down, a bit is on where what is
 * left allows it. Bit k of a subset is 1 << k.
 *
 * A successive approximation in the order of the weights ends there: the step up to a level is decided when its last bit that is on is
 * tried, against just these bits.
 * @param weight ascending. @returns levels that some subset makes in this way; of complete weights all from 0 to their sum
 */
export function levelSubsets(weight: readonly number[]): { readonly level: Int32Array; readonly subset: Int32Array } {
  const total = weight.reduce((sum, w) => sum + w, 0);
  const level: number[] = [];
  const subset: number[] = [];
  for (let aim = 0; aim <= total; aim++) {
    let left = aim;
    let on = 0;
    for (let k = weight.length - 1; k >= 0; k--) {
      if (weight[k] > left) continue;
      left -= weight[k];
      on |= 1 << k;
    }
    if (left > 0) continue;
    level.push(aim);
    subset.push(on);
  }
  return { level: Int32Array.from(level), subset: Int32Array.from(subset) };
}

/** Each different step between neighbouring levels once: +1 for a bit that goes on, -1 for one that goes off. Binary bits: one step each. */
export function levelSteps(weight: readonly number[]): readonly Int8Array[] {
  const { subset } = levelSubsets(weight);
  const seen = new Set<string>();
  const steps: Int8Array[] = [];
  for (let i = 1; i < subset.length; i++) {
    const [from, to] = [subset[i - 1], subset[i]];
    const key = `${to & ~from} ${from & ~to}`;
    if (seen.has(key)) continue;
    seen.add(key);
    steps.push(Int8Array.from(weight, (_, k) => ((to >> k) & 1) - ((from >> k) & 1)));
  }
  return steps;
}
