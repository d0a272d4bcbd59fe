import fc from 'fast-check';
import { CholeskyDecomposition, Matrix } from 'ml-matrix';
import { sampleCovariance, standardDeviation } from 'simple-statistics';
import { describe, expect, it } from 'vitest';
import { Random } from '../../src/core/random.js';
import { comparisonLength, correlationOf } from '../../src/linearity/correlation.js';
import { GRAIN, pairSums } from '../../src/linearity/covariance.js';
import { analyseMismatch, placementSigma } from '../../src/linearity/mismatch.js';
import { anyPlan, anyWeights, binaryWeights, bitsOf, codes, isOn, plan } from './brute-force.js';
import type { Plan } from './brute-force.js';
import { unitCovariance, units } from './random-units.js';

/** What each unit's error does to each code: rows of factors, from the line through both ends. */
const endPointFactors = (given: Plan): number[][] => {
  const bits = bitsOf(given);
  const total = bits.reduce((sum, { weight }) => sum + weight, 0);
  return codes(bits.length).map((code) => {
    const level = bits.reduce((sum, { weight }, k) => sum + (isOn(code, k) ? weight : 0), 0);
    return units(given).map(({ bit }) => (isOn(code, bit) ? 1 : 0) - level / total);
  });
};

const variance = (factors: readonly number[], covariance: readonly (readonly number[])[]): number =>
  factors.reduce((sum, a, i) => sum + a * factors.reduce((inner, b, j) => inner + b * covariance[i][j], 0), 0);

const bruteForce = (given: Plan, covariance: readonly (readonly number[])[]) => {
  const bits = bitsOf(given);
  const level = (code: number): number => bits.reduce((sum, { weight }, k) => sum + (isOn(code, k) ? weight : 0), 0);
  const factors = endPointFactors(given);
  const inl = Math.max(0, ...factors.map((f) => variance(f, covariance)));
  const levels = [...new Set(codes(bits.length).map(level))].sort((a, b) => a - b);
  const steps = factors.flatMap((from, a) =>
    factors
      .filter((_, b) => level(b) === levels[levels.indexOf(level(a)) + 1])
      .map((to) => to.map((factor, i) => factor - from[i])),
  );
  const dnl = Math.max(0, ...steps.map((f) => variance(f, covariance)));
  // The least-squares line through all codes takes its share of every unit's error: fitted unit by unit.
  const all = codes(bits.length);
  const mean = all.reduce((sum, code) => sum + level(code), 0) / all.length;
  const square = all.reduce((sum, code) => sum + (level(code) - mean) ** 2, 0);
  const offLine = units(given).map(({ bit }) => {
    const output = all.map((code) => (isOn(code, bit) ? 1 : 0));
    const slope = all.reduce((sum, code) => sum + (level(code) - mean) * output[code], 0) / square;
    const middle = output.reduce<number>((a, b) => a + b, 0) / all.length;
    return all.map((code) => output[code] - middle - slope * (level(code) - mean));
  });
  const leastSquares = Math.max(
    0,
    ...all.map((code) =>
      variance(
        offLine.map((unit) => unit[code]),
        covariance,
      ),
    ),
  );
  return { inl: Math.sqrt(inl), dnl: Math.sqrt(dnl), leastSquares: Math.sqrt(leastSquares) };
};

const close = (found: number | undefined, wanted: number) =>
  expect(Math.abs((found ?? NaN) - wanted)).toBeLessThan(1e-7 + 1e-9 * wanted);

describe('sums over pairs of units', () => {
  it('are the plain double sum', () => {
    fc.assert(
      fc.property(anyPlan(anyWeights), fc.constantFrom(0.3, 2, 40), (given, length_um) => {
        const names = bitsOf(given).map(({ name }) => name);
        const { rows, columns, pitch_um } = given.core;
        const sums = pairSums(names, given.cells, correlationOf(rows, columns, pitch_um, length_um));
        const covariance = unitCovariance(given, 0, 1, length_um);
        const all = units(given);
        names.forEach((_, k) =>
          names.forEach((__, l) => {
            let sum = 0;
            all.forEach((a, i) => all.forEach((b, j) => (sum += a.bit === k && b.bit === l ? covariance[i][j] : 0)));
            expect(Number(sums[k][l]) / Number(GRAIN)).toBeCloseTo(sum, 11);
          }),
        );
      }),
    );
  });
});

describe('sigma of the worst code', () => {
  const mismatch = fc.record({
    localSigma_percent: fc.constantFrom(0, 20, 100),
    correlatedSigma_percent: fc.constantFrom(0, 50, 100),
    correlationLength_um: fc.constantFrom(0, 1, 30),
  });
  it.each([
    ['any weights', anyWeights],
    ['binary weights', binaryWeights],
  ])('is that of all codes one by one, for %s', (_, weights) => {
    fc.assert(
      fc.property(anyPlan(weights), mismatch, (given, m) => {
        const figures = analyseMismatch(given, m).figures;
        const local = m.localSigma_percent / 100;
        const own = bruteForce(
          given,
          unitCovariance(given, local, m.correlatedSigma_percent / 100, m.correlationLength_um),
        );
        close(figures.inlSigma_lsb, own.inl);
        close(figures.dnlSigma_lsb, own.dnl);
        close(figures.inlSigmaLeastSquares_lsb, own.leastSquares);
        const placed = bruteForce(given, unitCovariance(given, 0, 1, comparisonLength(given.core.pitch_um)));
        close(figures.placement.inlSigma_perUnitSigma, placed.inl);
        close(figures.placement.dnlSigma_perUnitSigma, placed.dnl);
      }),
      { numRuns: 60 },
    );
  });

  it('is the same to the last bit for a mirrored and for a turned floorplan', () => {
    fc.assert(
      fc.property(anyPlan(anyWeights), (given) => {
        const { rows, columns, pitch_um } = given.core;
        const mirrored = { ...given, cells: given.cells.map((line) => [...line].reverse()) };
        const turned = {
          ...given,
          core: { rows: columns, columns: rows, pitch_um: [pitch_um[1], pitch_um[0]] as const },
          cells: Array.from({ length: columns }, (_, row) => given.cells.map((line) => line[columns - 1 - row])),
        };
        const m = { localSigma_percent: 0.1, correlatedSigma_percent: 0.2, correlationLength_um: 9 };
        const figures = analyseMismatch(given, m).figures;
        expect(analyseMismatch(mirrored, m).figures).toEqual(figures);
        expect(analyseMismatch(turned, m).figures).toEqual(figures);
      }),
    );
  });

  it('has no DNL beyond 14 capacitors that are not straight binary', () => {
    const names = Array.from({ length: 15 }, (_, k) => `C${k}`);
    const given = plan([names.join(' ')], Object.fromEntries(names.map((name) => [name, 1])));
    const figures = analyseMismatch(given, {
      localSigma_percent: 1,
      correlatedSigma_percent: 0,
      correlationLength_um: 0,
    }).figures;
    expect(figures).not.toHaveProperty('dnlSigma_lsb');
    expect(figures.placement).not.toHaveProperty('dnlSigma_perUnitSigma');
    // The middle of n equal ones: sqrt(m (n - m) / n), as of a random walk tied at both ends.
    expect(figures.inlSigma_lsb).toBeCloseTo(0.01 * Math.sqrt((7 * 8) / 15), 14);
  });
});

describe('independent units', () => {
  const binary = (bits: number, rows: number, shuffle: number): Plan => {
    const names = Array.from({ length: bits }, (_, b) => new Array<string>(2 ** b).fill(`B${b}`)).flat();
    const random = new Random(shuffle);
    for (let i = names.length - 1; i > 0; i--) {
      const j = random.below(i + 1);
      [names[i], names[j]] = [names[j], names[i]];
    }
    const columns = names.length / rows;
    const lines = Array.from({ length: rows }, (_, row) => names.slice(row * columns, (row + 1) * columns).join(' '));
    return plan(lines, Object.fromEntries(Array.from({ length: bits }, (_, b) => [`B${b}`, 2 ** b])));
  };

  // Straight binary, end-point line (D): variance k (T - 1 - k) / (T - 1) of INL at code k, 2^N - 1 - 1 / (T - 1) of DNL at the middle.
  it.each([
    [8, 15, 7.9843, 7.96877],
    [10, 31, 15.99218, 15.98438],
  ])('%d bits have the handbook figures', (bits, rows, inl, leastSquares) => {
    const figures = analyseMismatch(binary(bits, rows, 1), {
      localSigma_percent: 100,
      correlatedSigma_percent: 0,
      correlationLength_um: 0,
    }).figures;
    const last = 2 ** bits - 1;
    expect(figures.dnlSigma_lsb).toBeCloseTo(Math.sqrt(last - 1 / last), 11);
    expect(figures.inlSigma_lsb).toBeCloseTo(inl, 5);
    expect(figures.inlSigmaLeastSquares_lsb).toBeCloseTo(leastSquares, 5);
  });

  it('make all placements equal, whether the sigma is called local or correlated over no distance', () => {
    const local = { localSigma_percent: 3, correlatedSigma_percent: 0, correlationLength_um: 50 };
    const alone = { localSigma_percent: 0, correlatedSigma_percent: 3, correlationLength_um: 0 };
    const all = [1, 2, 3].flatMap((shuffle) =>
      [3, 7, 9, 21].flatMap((rows) => [local, alone].map((m) => analyseMismatch(binary(6, rows, shuffle), m).figures)),
    );
    for (const figures of all) {
      expect(Math.abs((figures.inlSigma_lsb ?? NaN) - (all[0].inlSigma_lsb ?? NaN))).toBeLessThan(1e-12);
      expect(Math.abs((figures.dnlSigma_lsb ?? NaN) - (all[0].dnlSigma_lsb ?? NaN))).toBeLessThan(1e-12);
    }
  });
});

describe('correlation rho^d: Var ln(C_A / C_B) of two capacitors in closed form (Luo et al. 2008, M; values D)', () => {
  const forms: [string, string[], (p: number) => number, number, number][] = [
    ['AABB', ['A A B B'], (p) => 1 + p - (p + 2 * p ** 2 + p ** 3) / 2, 0.2755, 0.0297505],
    ['ABAB', ['A B A B'], (p) => 1 + p ** 2 - (3 * p + p ** 3) / 2, 0.0955, 0.0099505],
    ['ABBA', ['A B B A'], (p) => 1 - p / 2 - p ** 2 + p ** 3 / 2, 0.1045, 0.0100495],
    ['2x2 AB/BA', ['A B', 'B A'], (p) => 1 + p ** Math.SQRT2 - 2 * p, 0.061567159, 0.005887211],
  ];
  it.each(forms)('%s', (_, rows, form, at09, at099) => {
    const given = plan(rows, { A: 2, B: 2 });
    for (const [p, value] of [
      [0.9, at09],
      [0.99, at099],
    ]) {
      // Of two equal capacitors of two units, INL of the code A is (delta_A - delta_B) / 2, which is ln(C_A / C_B) to first order.
      const sigma = placementSigma(given, -1 / Math.log(p)).inlSigma_perUnitSigma;
      expect(sigma ** 2).toBeCloseTo(form(p), 13);
      expect(sigma ** 2).toBeCloseTo(value, 9);
    }
  });
});

describe('sampled fields', () => {
  it('have the sigma that is computed, by statistics over 4,000 arrays', () => {
    const given = plan(
      ['C3 C2 C3 C1 C3', 'C2 C3 C0 C3 C2', 'C3 C1 C3 C2 C3'],
      { C0: 1, C1: 2, C2: 4, C3: 8 },
      [7.2, 5.7],
    );
    const covariance = unitCovariance(given, 0.5, 1, 20);
    const factor = new CholeskyDecomposition(new Matrix(covariance)).lowerTriangularMatrix;
    const random = new Random(4);
    // Irwin-Hall of twelve: variance 1.
    const normal = () => Array.from({ length: 12 }, () => random.unit()).reduce((a, b) => a + b, -6);
    const fields = Array.from({ length: 4000 }, () =>
      factor.mmul(Matrix.columnVector(covariance.map(normal))).to1DArray(),
    );
    expect(
      sampleCovariance(
        fields.map((f) => f[0]),
        fields.map((f) => f[1]),
      ),
    ).toBeCloseTo(covariance[0][1], 1);
    const inl = endPointFactors(given).map((factors) =>
      standardDeviation(fields.map((field) => field.reduce((sum, error, i) => sum + error * factors[i], 0))),
    );
    const figures = analyseMismatch(given, {
      localSigma_percent: 50,
      correlatedSigma_percent: 100,
      correlationLength_um: 20,
    }).figures;
    expect(Math.max(...inl) / (figures.inlSigma_lsb ?? NaN)).toBeCloseTo(1, 1);
    const steps = inl.slice(1).map((_, code) => {
      const [from, to] = [endPointFactors(given)[code], endPointFactors(given)[code + 1]];
      return standardDeviation(fields.map((field) => field.reduce((sum, e, i) => sum + e * (to[i] - from[i]), 0)));
    });
    expect(Math.max(...steps) / (figures.dnlSigma_lsb ?? NaN)).toBeCloseTo(1, 1);
  });
});
