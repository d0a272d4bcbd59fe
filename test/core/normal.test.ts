import { errorFunction, kernelDensityEstimation, mean, quantile, standardDeviation } from 'simple-statistics';
import { describe, expect, it } from 'vitest';
import { normal, normalAbove, normalTail } from '../../src/core/normal.js';
import { Random } from '../../src/core/random.js';

const drawn = (count: number, seed: number): number[] => {
  const random = new Random(seed);
  return Array.from({ length: count }, () => normal(random));
};

describe('shares of the normal distribution', () => {
  // Within 1, 2, 3, 4 sigma (common tables; M).
  it.each([
    [1, 0.682689],
    [2, 0.9545],
    [3, 0.9973],
    [4, 0.999937],
  ])('within %d sigma: %d', (sigma, share) => {
    expect(Math.abs(1 - 2 * normalTail(sigma) - share)).toBeLessThan(6e-7);
  });

  it('are the integral of the density', () => {
    for (const x of [-3, -0.7, 0.3, 1.9, 2.4999, 2.5, 2.6, 4, 7]) {
      // Simpson's rule over twelve sigma.
      const steps = 20000;
      const end = Math.max(x, 0) + 12;
      const h = (end - x) / steps;
      let sum = 0;
      for (let i = 0; i <= steps; i++)
        sum += (i === 0 || i === steps ? 1 : i % 2 ? 4 : 2) * Math.exp(-((x + i * h) ** 2) / 2);
      expect(normalTail(x) / ((sum * h) / 3 / Math.sqrt(2 * Math.PI))).toBeCloseTo(1, 10);
    }
  });

  it('agree with a statistics library', () => {
    for (const x of [-2, -0.5, 0, 0.25, 1, 2, 3])
      expect(Math.abs(normalTail(x) - (1 - errorFunction(x / Math.SQRT2)) / 2)).toBeLessThan(1e-6);
  });
});

describe('normal numbers', () => {
  const count = 200_000;
  const numbers = drawn(count, 5);

  it('have mean 0 and variance 1', () => {
    expect(Math.abs(mean(numbers)) * Math.sqrt(count)).toBeLessThan(4);
    expect(Math.abs(standardDeviation(numbers) ** 2 - 1) * Math.sqrt(count / 2)).toBeLessThan(4);
  });

  it('have the quantiles of the distribution, as a statistics library finds them', () => {
    const shares = [0.001, 0.01, 0.1, 0.25, 0.5, 0.75, 0.9, 0.99, 0.999];
    const found = quantile(numbers, shares);
    shares.forEach((share, i) => {
      // How many lie below the place where the share of all should: binomial.
      const z = (1 - normalTail(found[i]) - share) / Math.sqrt((share * (1 - share)) / count);
      expect(Math.abs(z)).toBeLessThan(4);
    });
  });

  it('have the density of the distribution between the edges of the method, too', () => {
    // 40 bins: chi-square of 39 degrees has mean 39 and sigma 8.8.
    const bins = new Array<number>(40).fill(0);
    for (const x of numbers) bins[Math.min(39, Math.floor(40 * (1 - normalTail(x))))]++;
    const square = bins.reduce((sum, n) => sum + (n - count / 40) ** 2 / (count / 40), 0);
    expect((square - 39) / Math.sqrt(78)).toBeLessThan(4);
    expect(kernelDensityEstimation(numbers.slice(0, 4000))(0)).toBeCloseTo(1 / Math.sqrt(2 * Math.PI), 1);
  });

  it('are the same for the same seed, and not for another', () => {
    expect(drawn(5, 5)).toEqual(numbers.slice(0, 5));
    expect(drawn(5, 6)).not.toEqual(numbers.slice(0, 5));
  });

  it('above a limit follow the distribution cut off there', () => {
    for (const limit of [-1, 0.5, 2, 5]) {
      const random = new Random(9);
      const above = Array.from({ length: 20_000 }, () => normalAbove(limit, random));
      expect(Math.min(...above)).toBeGreaterThanOrEqual(limit);
      // Share of the tail beyond each number: equally likely anywhere in (0, 1).
      const shares = above.map((x) => normalTail(x) / normalTail(limit));
      expect(Math.abs(mean(shares) - 0.5) * Math.sqrt(12 * 20_000)).toBeLessThan(4);
      expect(quantile(shares, 0.1)).toBeCloseTo(0.1, 1);
    }
  });
});
