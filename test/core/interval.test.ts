import { binomialDistribution } from 'simple-statistics';
import { describe, expect, it } from 'vitest';
import { clopperPearson } from '../../src/core/interval.js';
import { Random } from '../../src/core/random.js';

/** Probability of each count, by products: upwards from none, or downwards from all where that is likelier. */
function counts(trials: number, p: number): number[] {
  if (p > 0.5) return counts(trials, 1 - p).reverse();
  const shares = [(1 - p) ** trials];
  for (let k = 1; k <= trials; k++) shares.push((shares[k - 1] * p * (trials - k + 1)) / ((1 - p) * k));
  return shares;
}
const sum = (shares: readonly number[]): number => shares.reduce((all, share) => all + share, 0);

describe('the interval of Clopper and Pearson', () => {
  it.each([
    [1, 12],
    [7, 10],
    [3, 40],
    [38, 40],
    [60, 120],
    [119, 120],
  ])('%d of %d: the binomial tails at its ends are a fortieth each', (successes, trials) => {
    const { low, high } = clopperPearson(successes, trials, 0.95);
    expect(sum(counts(trials, low).slice(successes))).toBeCloseTo(0.025, 9);
    expect(sum(counts(trials, high).slice(0, successes + 1))).toBeCloseTo(0.025, 9);
    // A statistics library agrees, to the share of far counts that it leaves out.
    const library = (p: number) => binomialDistribution(trials, p) as number[];
    expect(Math.abs(sum(library(low).slice(successes)) - 0.025)).toBeLessThan(1.1e-4);
    expect(Math.abs(sum(library(high).slice(0, successes + 1)) - 0.025)).toBeLessThan(1.1e-4);
  });

  it('of none or all has a closed form', () => {
    for (const trials of [1, 10, 1000, 100_000]) {
      const none = clopperPearson(0, trials, 0.95);
      expect(none.low).toBe(0);
      expect(Math.log1p(-none.high) * trials).toBeCloseTo(Math.log(0.025), 8);
      const all = clopperPearson(trials, trials, 0.95);
      expect(all.high).toBe(1);
      expect(Math.log(all.low) * trials).toBeCloseTo(Math.log(0.025), 8);
    }
  });

  it('turns about when successes become failures, and shrinks with the root of the trials', () => {
    const { low, high } = clopperPearson(37, 250, 0.9);
    const other = clopperPearson(213, 250, 0.9);
    expect(other.low).toBeCloseTo(1 - high, 12);
    expect(other.high).toBeCloseTo(1 - low, 12);
    const narrow = clopperPearson(990_000, 1_000_000, 0.95);
    expect((narrow.high - narrow.low) / (2 * 1.95996 * Math.sqrt((0.99 * 0.01) / 1e6))).toBeCloseTo(1, 2);
  });

  it('covers at its rate in 1,000 repetitions of a small case', () => {
    // The rate is above 95 %, for counts are whole: of 60 trials at 0.9 it is the probability of all counts whose interval holds 0.9.
    const [trials, share, repetitions] = [60, 0.9, 1000];
    const covers = (successes: number): boolean => {
      const { low, high } = clopperPearson(successes, trials, 0.95);
      return low <= share && share <= high;
    };
    const rate = sum(counts(trials, share).map((p, successes) => (covers(successes) ? p : 0)));
    expect(rate).toBeGreaterThan(0.95);
    const random = new Random(3);
    let covered = 0;
    for (let i = 0; i < repetitions; i++) {
      let successes = 0;
      for (let j = 0; j < trials; j++) if (random.unit() < share) successes++;
      if (covers(successes)) covered++;
    }
    expect(Math.abs(covered - rate * repetitions) / Math.sqrt(repetitions * rate * (1 - rate))).toBeLessThan(4);
  });
});
