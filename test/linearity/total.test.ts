import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { analyseMismatch } from '../../src/linearity/mismatch.js';
import { totalFigures } from '../../src/linearity/total.js';
import type { Gradient } from '../../src/spec/technology.js';
import { anyPlan, anyWeights, binaryWeights, bitsOf, capacitances, codes, exactInl, isOn } from './brute-force.js';
import type { Plan } from './brute-force.js';

const noMismatch = { localSigma_percent: 0, correlatedSigma_percent: 0, correlationLength_um: 0 };
const someMismatch = { localSigma_percent: 0.4, correlatedSigma_percent: 0.3, correlationLength_um: 4 };

/** sigma INL of each code and of each difference of codes, from the covariance of all pairs of units. */
function sigmas(given: Plan, m: typeof noMismatch) {
  const bits = bitsOf(given);
  const [px, py] = given.core.pitch_um;
  const units = given.cells.flatMap((line, row) =>
    line.flatMap((cell, column) => {
      const bit = bits.findIndex(({ name }) => name === cell);
      return bit < 0 ? [] : [{ bit, x: column * px, y: row * py }];
    }),
  );
  const all = bits.reduce((sum, { weight }) => sum + weight, 0);
  const factors = codes(bits.length).map((code) => {
    const level = bits.reduce((sum, { weight }, k) => sum + (isOn(code, k) ? weight : 0), 0);
    return units.map(({ bit }) => (isOn(code, bit) ? 1 : 0) - level / all);
  });
  const covariance = units.map((a, i) =>
    units.map((b, j) => {
      const rho = m.correlationLength_um > 0 ? Math.exp(-Math.hypot(a.x - b.x, a.y - b.y) / m.correlationLength_um) : 0;
      return (i === j ? (m.localSigma_percent / 100) ** 2 : 0) + (m.correlatedSigma_percent / 100) ** 2 * rho;
    }),
  );
  return (to: number, from?: number): number => {
    const f = factors[to].map((factor, i) => factor - (from === undefined ? 0 : factors[from][i]));
    return Math.sqrt(
      Math.max(
        0,
        f.reduce((sum, a, i) => sum + a * f.reduce((s, b, j) => s + b * covariance[i][j], 0), 0),
      ),
    );
  };
}

/** Everything by its definition: every code, every direction of a fine fan, the exact formula. */
function bruteForce(given: Plan, gradient: Gradient, extra: readonly number[], m: typeof noMismatch) {
  const bits = bitsOf(given);
  const weights = bits.map(({ weight }) => weight);
  const sigma = sigmas(given, m);
  const q = gradient.quadratic_ppm_per_um2 ?? 0;
  const shape = typeof q === 'number' ? { xx: q, xy: 0, yy: q } : q;
  const g = gradient.linear_ppm_per_um ?? 0;
  const fan =
    gradient.direction_deg === undefined ? Array.from({ length: 720 }, (_, i) => i / 2) : [gradient.direction_deg];
  const level = codes(weights.length).map((code) => weights.reduce((sum, w, k) => sum + (isOn(code, k) ? w : 0), 0));
  const distinct = [...new Set(level)].sort((a, b) => a - b);
  const next = codes(weights.length).map((a) =>
    codes(weights.length).filter((b) => level[b] === distinct[distinct.indexOf(level[a]) + 1]),
  );
  const largest = { inl: 0, dnl: 0 };
  for (const degrees of fan) {
    const [ux, uy] = [Math.cos((degrees * Math.PI) / 180), Math.sin((degrees * Math.PI) / 180)];
    const unit = (x: number, y: number) =>
      1 + 1e-6 * (g * (ux * x + uy * y) + shape.xx * x * x + 2 * shape.xy * x * y + shape.yy * y * y);
    const c = capacitances(given, unit).map((value, k) => value + extra[k]);
    const inl = exactInl(c, weights);
    inl.forEach((value, code) => {
      largest.inl = Math.max(largest.inl, Math.abs(value) + 3 * sigma(code));
      for (const to of next[code]) largest.dnl = Math.max(largest.dnl, Math.abs(inl[to] - value) + 3 * sigma(to, code));
    });
  }
  return largest;
}

const gradients = fc.record(
  {
    // Far beyond what is small, so that the linear model would not do.
    linear_ppm_per_um: fc.integer({ min: -20_000, max: 20_000 }),
    quadratic_ppm_per_um2: fc.oneof(
      fc.integer({ min: -2000, max: 2000 }),
      fc.record({
        xx: fc.integer({ min: -2000, max: 2000 }),
        xy: fc.integer({ min: -2000, max: 2000 }),
        yy: fc.integer({ min: -2000, max: 2000 }),
      }),
    ),
    direction_deg: fc.integer({ min: -90, max: 360 }),
  },
  { requiredKeys: [] },
);

describe('all errors together', () => {
  it('are the largest over codes and directions of the exact formula and 3 sigma', () => {
    fc.assert(
      fc.property(
        fc.oneof(anyPlan(binaryWeights), anyPlan(anyWeights)),
        gradients,
        fc.array(fc.double({ min: -0.1, max: 0.3, noNaN: true }), { minLength: 5, maxLength: 5 }),
        fc.constantFrom(noMismatch, someMismatch),
        (given, gradient, extra, m) => {
          const bits = bitsOf(given);
          fc.pre(bits.some(({ units }) => units > 0));
          const found = totalFigures({
            ...given,
            gradient,
            coupling: new Map(bits.map(({ name }, k) => [name, extra[k]])),
            mismatch: analyseMismatch(given, m),
          });
          const wanted = bruteForce(given, gradient, extra, m);
          // A fan of half a degree misses the worst direction by a quarter of one at most: 1e-5 of the sloped part.
          const near = gradient.direction_deg === undefined ? 2e-5 : 1e-9;
          for (const [value, least] of [
            [found.inl3Sigma_lsb, wanted.inl],
            [found.dnl3Sigma_lsb!, wanted.dnl],
          ]) {
            expect(value).toBeGreaterThanOrEqual(least - 1e-9 * (1 + least));
            expect(value).toBeLessThanOrEqual(least * (1 + near) + 1e-9);
          }
        },
      ),
      { numRuns: 60 },
    );
  });

  it('are exactly 0 where nothing is wrong', () => {
    const cells = ['B2 B1 B2', 'B2 B0 B2', 'B2 B1 B2'].map((row) => row.split(' '));
    const given: Plan = {
      core: { rows: 3, columns: 3, pitch_um: [7, 5] },
      capacitors: [1, 2, 6].map((units, k) => ({ name: `B${k}`, role: 'bit', weight: units, units })),
      cells,
    };
    const mismatch = analyseMismatch(given, noMismatch);
    const figures = totalFigures({ ...given, gradient: { linear_ppm_per_um: 50 }, coupling: new Map(), mismatch });
    expect(figures).toEqual({ inl3Sigma_lsb: 0, dnl3Sigma_lsb: 0 });
  });

  it('have the closed form of equal coupling on every bit', () => {
    // DNL at mid-code (1 - (N - 2) c) / (1 + N c / (2^N - 1)) - 1, N = 10: -0.080090 for c = 0.01, -0.800195 for 0.1 (D).
    const bits = Array.from({ length: 10 }, (_, k) => ({
      name: `B${k}`,
      role: 'bit' as const,
      weight: 2 ** k,
      units: 2 ** k,
    }));
    const cells = [bits.flatMap(({ name, units }) => Array.from({ length: units }, () => name))];
    const given: Plan = { core: { rows: 1, columns: 1023, pitch_um: [1, 1] }, capacitors: bits, cells };
    for (const [c, dnl] of [
      [0.01, 0.08009],
      [0.1, 0.800195],
    ]) {
      const coupling = new Map(bits.map(({ name }) => [name, c]));
      const figures = totalFigures({ ...given, gradient: {}, coupling, mismatch: analyseMismatch(given, noMismatch) });
      expect(figures.dnl3Sigma_lsb).toBeCloseTo(dnl, 6);
    }
  });
});
