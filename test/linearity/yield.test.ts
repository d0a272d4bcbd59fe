import { mean, quantile, standardDeviation } from 'simple-statistics';
import { describe, expect, it } from 'vitest';
import { normalTail } from '../../src/core/normal.js';
import { Random } from '../../src/core/random.js';
import { analyseYield } from '../../src/linearity/analyse-yield.js';
import { analyseMismatch } from '../../src/linearity/mismatch.js';
import { countWithin, drawArrays, meansOf } from '../../src/linearity/yield.js';
import { lostShare } from '../../src/linearity/yield-tail.js';
import { exactInl, plan } from './brute-force.js';

const binary = (bits: number): number[] => Array.from({ length: bits }, (_, k) => 2 ** k);
/** Units all for themselves, of this sigma. */
const independent = (weight: readonly number[], sigma: number): Float64Array[] =>
  weight.map((w, k) => Float64Array.from(weight, (_, l) => (k === l ? w * sigma * sigma : 0)));
const none = (weight: readonly number[]): number[] => weight.map(() => 0);

function largest(
  weight: readonly number[],
  sigma: number,
  samples: number,
  seed: number,
): { inl: number[]; dnl: number[] } {
  // prettier-ignore
  const [inl, dnl]: [number[], number[]] = [[], []];
  drawArrays(weight, [weight], independent(weight, sigma), samples, seed, (i, d) => {
    inl.push(i / sigma);
    dnl.push(d / sigma);
  });
  return { inl, dnl };
}

describe('arrays drawn at random', () => {
  // Monte Carlo, N = 8 (D): E max |DNL| = 16.55, E max |INL| = 12.46 sigma of a unit, within 1 %.
  it('8 bits: the mean of the largest DNL is 16.55, of the largest INL 12.46 sigma (D)', () => {
    const { inl, dnl } = largest(binary(8), 0.001, 100_000, 1);
    expect(Math.abs(mean(dnl) / 16.55 - 1)).toBeLessThan(0.01);
    expect(Math.abs(mean(inl) / 12.46 - 1)).toBeLessThan(0.01);
  });

  it.each([2, 3, 5, 9])('two bits: largest INL and DNL are those of one normal number, seed %d', (seed) => {
    // c1 W / (c0 + c1) - 2 moves against c0: e1 = -e0, and the largest step is the one in the middle, 2 |e0|.
    const samples = 50_000;
    const { inl, dnl } = largest(binary(2), 0.001, samples, seed);
    // e0 = d0 - (d0 + d1) / 3: variance (4 + 2) / 9.
    const sigma = Math.sqrt(2 / 3);
    const half = sigma * Math.sqrt(2 / Math.PI);
    const spread = sigma * Math.sqrt(1 - 2 / Math.PI);
    expect(Math.abs((mean(inl) - half) / spread) * Math.sqrt(samples)).toBeLessThan(4);
    expect(Math.abs((mean(dnl) - 2 * half) / spread / 2) * Math.sqrt(samples)).toBeLessThan(4);
    // Quantiles of |normal|, found by a statistics library.
    for (const share of [0.5, 0.9, 0.99]) {
      const found = 1 - 2 * normalTail(quantile(inl, share) / sigma);
      expect(Math.abs(found - share) / Math.sqrt((share * (1 - share)) / samples)).toBeLessThan(4);
    }
    expect(standardDeviation(inl) / spread).toBeCloseTo(1, 1);
  });

  it('have INL and DNL of the exact conversion, code by code', () => {
    const weight = binary(6);
    const means = weight.map((w, k) => w + 0.1 * Math.sin(k));
    const found: [number, number][] = [];
    drawArrays(weight, [means], independent(weight, 0), 1, 1, (inl, dnl) => found.push([inl, dnl]));
    const inl = exactInl(means, weight);
    const dnl = inl.slice(1).map((value, i) => value - inl[i]);
    expect(found[0][0]).toBeCloseTo(Math.max(...inl.map(Math.abs)), 12);
    expect(found[0][1]).toBeCloseTo(Math.max(...dnl.map(Math.abs)), 12);
  });

  it('of other weights take the steps that a conversion takes', () => {
    const weight = [1, 2, 3, 5, 8];
    const means = [1.05, 1.9, 3.1, 5, 7.8];
    const total = means.reduce((a, b) => a + b);
    const value = (on: readonly number[]): number => on.reduce((sum, k) => sum + means[k], 0) * (19 / total);
    // Largest first, down to the level.
    const levels = Array.from({ length: 20 }, (_, aim) => {
      let left = aim;
      return value([4, 3, 2, 1, 0].filter((k) => weight[k] <= left && ((left -= weight[k]), true)));
    });
    const steps = levels.slice(1).map((level, i) => Math.abs(level - levels[i] - 1));
    const found: number[] = [];
    drawArrays(weight, [means], independent(weight, 0), 1, 1, (_, dnl) => found.push(dnl));
    expect(found[0]).toBeCloseTo(Math.max(...steps), 12);
  });
});

describe('counting', () => {
  const weight = binary(8);
  const covariance = independent(weight, 0.012);
  const limits = { inl_lsb: 0.4, dnl_lsb: 0.5 };
  const bow = weight.map((_, k) => (k === 7 ? 0.12 : 0));
  const wires = weight.map((_, k) => (k === 6 ? -0.1 : 0));

  it('separates what the gradient, the wires and chance cost, on the same arrays', () => {
    const counts = countWithin(weight, meansOf(weight, bow, wires), covariance, limits, 20_000, 3);
    const one = (gradient: number[], wiring: number[]): number =>
      countWithin(weight, meansOf(weight, gradient, wiring), covariance, limits, 20_000, 3).all;
    expect(counts).toEqual({
      all: one(bow, wires),
      randomOnly: one(none(weight), none(weight)),
      withoutGradient: one(none(weight), wires),
      withoutWiring: one(bow, none(weight)),
    });
    expect(counts.randomOnly).toBeGreaterThan(counts.withoutWiring);
    expect(counts.withoutWiring).toBeGreaterThan(0);
  });

  it('knows no limit that is not given', () => {
    const count = (given: object): number =>
      countWithin(weight, meansOf(weight, bow, wires), covariance, given, 1000, 3).all;
    expect(count({})).toBe(1000);
    expect(count({ inl_lsb: 0.4 })).toBeGreaterThanOrEqual(count(limits));
    expect(count({ dnl_lsb: 1e-9 })).toBe(0);
  });
});

describe('the tail', () => {
  it.each([
    [4, 0.03, { inl_lsb: 0.25, dnl_lsb: 0.25 }],
    [8, 0.012, { inl_lsb: 0.3, dnl_lsb: 1 }],
    [8, 0.012, { inl_lsb: 0.25, dnl_lsb: 0.5 }],
    [9, 0.008, { dnl_lsb: 0.5 }],
  ])('%d bits, sigma %d, %j: the share lost is the one that is counted', (bits, sigma, limits) => {
    const weight = binary(bits);
    const means = weight.map((w, k) => w + (k === bits - 1 ? 0.03 : 0));
    const covariance = independent(weight, sigma);
    const samples = 100_000;
    const lost = lostShare(weight, means, covariance, limits, 10_000, 1);
    const counted = 1 - countWithin(weight, meansOf(means, none(weight), none(weight)), covariance, limits, samples, 2).all / samples; // prettier-ignore
    // To first order: the exact formula differs by a share of the relative error of the whole array.
    const sigmas = Math.sqrt((counted * (1 - counted)) / samples) + (lost.high - lost.low) / 4;
    expect(Math.abs(lost.share - counted)).toBeLessThan(4 * sigmas + 0.02 * counted);
    expect(lost.low).toBeLessThanOrEqual(lost.share);
    expect(lost.high).toBeGreaterThanOrEqual(lost.share);
  });

  it('of one number is the tail of the normal distribution, however far', () => {
    // Two bits: everything hangs on e0, of variance 2/3 of a unit's.
    const weight = binary(2);
    for (const sigmas of [3, 5, 8, 12]) {
      const sigma = 0.01;
      const limit = sigmas * sigma * Math.sqrt(2 / 3);
      const { share, low, high } = lostShare(weight, weight, independent(weight, sigma), { inl_lsb: limit }, 4000, 1);
      expect(share / (2 * normalTail(sigmas))).toBeCloseTo(1, 8);
      expect([low / share, high / share]).toEqual([1, 1]);
    }
  });

  it('holds the true share at its rate', () => {
    const weight = binary(6);
    const covariance = independent(weight, 0.02);
    const truth = lostShare(weight, weight, covariance, { inl_lsb: 0.3 }, 400_000, 99).share;
    let held = 0;
    for (let seed = 1; seed <= 200; seed++) {
      const { low, high } = lostShare(weight, weight, covariance, { inl_lsb: 0.3 }, 500, seed);
      if (low <= truth && truth <= high) held++;
    }
    expect(Math.abs(held - 190) / Math.sqrt(200 * 0.95 * 0.05)).toBeLessThan(4);
  });
});

describe('the yield of a floorplan', () => {
  const placed = plan(
    ['C3 C2 C3 C1 C3', 'C2 C3 C0 C3 C2', 'C3 C1 C3 C2 C3'],
    { C0: 1, C1: 2, C2: 4, C3: 8 },
    [7.2, 5.7],
  );
  const mismatch = { localSigma_percent: 4, correlatedSigma_percent: 3, correlationLength_um: 20 };
  const yields = (input: object = {}) =>
    analyseYield({
      ...placed,
      gradient: { linear_ppm_per_um: 0, quadratic_ppm_per_um2: 0 },
      covariances: analyseMismatch(placed, mismatch),
      limits: { inl_lsb: 0.2, dnl_lsb: 0.3, yield: 0.9 },
      samples: 20_000,
      seed: 1,
      ...input,
    });

  it('is what units drawn one by one give', () => {
    // Every unit by itself, with the correlation of all pairs, by a factor of our own making (Gram and Schmidt).
    const units = placed.cells.flatMap((line, row) => line.map((name, column) => ({ name, x: 7.2 * column, y: 5.7 * row }))); // prettier-ignore
    const cov = units.map((a, i) =>
      units.map((b, j) => (i === j ? 0.04 ** 2 : 0) + 0.03 ** 2 * Math.exp(-Math.hypot(a.x - b.x, a.y - b.y) / 20)),
    );
    const lower: number[][] = [];
    cov.forEach((row, i) => {
      lower.push([]);
      for (let j = 0; j <= i; j++) {
        const rest = row[j] - lower[j].slice(0, j).reduce((sum, v, k) => sum + v * lower[i][k], 0);
        lower[i].push(i === j ? Math.sqrt(rest) : rest / lower[j][j]);
      }
    });
    const random = new Random(77);
    const normal = () => Array.from({ length: 12 }, () => random.unit()).reduce((a, b) => a + b, -6);
    const samples = 20_000;
    let within = 0;
    for (let s = 0; s < samples; s++) {
      const z = units.map(normal);
      const c = [0, 0, 0, 0];
      units.forEach(({ name }, i) => (c[Number(name[1])] += 1 + lower[i].reduce((sum, v, k) => sum + v * z[k], 0)));
      const inl = exactInl(c, [1, 2, 4, 8]);
      const dnl = inl.slice(1).map((value, i) => value - inl[i]);
      if (Math.max(...inl.map(Math.abs)) <= 0.2 && Math.max(...dnl.map(Math.abs)) <= 0.3) within++;
    }
    const { share, low, high, method } = yields();
    const sigma = Math.sqrt((2 * share * (1 - share)) / samples);
    // Irwin-Hall of twelve has lighter tails: a little goes on its account.
    expect(Math.abs(share - within / samples)).toBeLessThan(4 * sigma + 0.003);
    expect(method).toBe('counted');
    expect(low < share && share < high).toBe(true);
  });

  it('takes the gradient in its own direction, else in the worst', () => {
    const steep = { linear_ppm_per_um: 12_000 };
    const uneven = plan(['A B B A', 'A B B B'], { A: 3, B: 5 }, [7, 6]);
    const of = (gradient: object) =>
      analyseYield({
        ...uneven,
        gradient,
        covariances: analyseMismatch(uneven, mismatch),
        limits: { inl_lsb: 0.13 },
        samples: 4000,
        seed: 1,
      }).share;
    const all = Array.from({ length: 36 }, (_, i) => of({ ...steep, direction_deg: 10 * i }));
    const worst = of(steep);
    expect(Math.abs(worst - Math.min(...all))).toBeLessThan(0.01);
    expect(Math.max(...all)).toBeGreaterThan(worst + 0.05);
  });

  it('turns to the tail where hardly an array is lost, and says so', () => {
    const tail = yields({ covariances: analyseMismatch(placed, { ...mismatch, localSigma_percent: 2.2, correlatedSigma_percent: 0 }) }); // prettier-ignore
    expect(tail.method).toBe('tail');
    expect(tail.share).toBeLessThan(1);
    expect(tail.low <= tail.share && tail.share <= tail.high).toBe(true);
    expect(tail.randomOnly).toBeCloseTo(tail.share, 12);
    expect(tail).not.toHaveProperty('withoutWiring');
  });

  it('knows the wires where they are known', () => {
    const wired = yields({ coupling: new Map([['C3', 0.4]]) });
    expect(wired.withoutWiring).toBeCloseTo(yields().share, 12);
    expect(wired.share).toBeLessThan(wired.withoutWiring ?? 0);
    // In proportion to the weights it is gain.
    const even = new Map([['C0', 0.05], ['C1', 0.1], ['C2', 0.2], ['C3', 0.4]]); // prettier-ignore
    expect(yields({ coupling: even }).share).toBeGreaterThanOrEqual(yields().share);
  });
});
