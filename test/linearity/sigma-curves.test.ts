import { describe, expect, it } from 'vitest';
import { analyseMismatch } from '../../src/linearity/mismatch.js';
import type { Covariances } from '../../src/linearity/mismatch.js';
import { sigmaCurves } from '../../src/linearity/sigma-curves.js';
import { plan } from './brute-force.js';
import type { Plan } from './brute-force.js';
import { unitCovariance } from './random-units.js';

const line = (weight: readonly number[]): Plan => {
  const cells = weight.flatMap((w, k) => new Array<string>(w).fill(`C${k}`));
  return plan([cells.join(' ')], Object.fromEntries(weight.map((w, k) => [`C${k}`, w])), [3, 3]);
};
const unitSigma = { localSigma_percent: 100, correlatedSigma_percent: 0, correlationLength_um: 0 };
const binary = (bits: number): number[] => Array.from({ length: bits }, (_, k) => 2 ** k);

describe('sigma of every code, independent units', () => {
  // Straight binary, end-point line (D: linear algebra, all codes, N = 2..10): INL variance k (T - 1 - k) / (T - 1), DNL variance of the step
  // to k 2^(m + 1) - 1 - 1 / (T - 1), m the trailing zeros of k.
  it.each([2, 3, 4, 5, 6, 7, 8, 9, 10])('%d bits: the closed forms at every code (D)', (bits) => {
    const weight = binary(bits);
    const { level, inl, dnl } = sigmaCurves(weight, analyseMismatch(line(weight), unitSigma));
    const last = 2 ** bits - 1;
    expect([...level]).toEqual(Array.from({ length: last + 1 }, (_, k) => k));
    level.forEach((k) => {
      expect(inl[k] ** 2).toBeCloseTo((k * (last - k)) / last, 8);
      if (k === 0) return expect(dnl[k]).toBeNaN();
      expect(dnl[k] ** 2).toBeCloseTo(2 * (k & -k) - 1 - 1 / last, 8);
    });
  });

  // Least squares INL max (D).
  it.each([
    [8, 7.96877],
    [10, 15.98438],
  ])('%d bits: %d sigma from the least-squares line at most (D)', (bits, published) => {
    const weight = binary(bits);
    const { inlLeastSquares } = sigmaCurves(weight, analyseMismatch(line(weight), unitSigma));
    expect(Math.max(...inlLeastSquares)).toBeCloseTo(published, 5);
  });

  // Segmented, B binary bits (D): max sigma DNL sqrt(2^(B + 1) - 1), INL unchanged; N = 10, B = 6: 11.26943.
  it.each([
    [10, 6],
    [6, 2],
    [7, 4],
    [8, 3],
    [9, 6],
  ])('%d bits of which %d binary, the rest in equal segments', (bits, low) => {
    // prettier-ignore
    const weight = [...binary(low), ...new Array<number>(2 ** (bits - low) - 1).fill(2 ** low)];
    const W = 2 ** bits - 1;
    // Independent units: e = s - w sum s / W, of unit variance.
    const covariance = weight.map((w, k) => weight.map((v, l) => (k === l ? w : 0) - (w * v) / W));
    const on = (code: number): number[] =>
      weight.map((_, k) => (k < low ? (code >> k) & 1 : k - low < code >> low ? 1 : 0));
    const variance = (v: readonly number[]): number =>
      v.reduce((sum, a, k) => sum + a * v.reduce((inner, b, l) => inner + b * covariance[k][l], 0), 0);
    let [inl, dnl] = [0, 0];
    for (let code = 1; code <= W; code++) {
      inl = Math.max(inl, variance(on(code)));
      dnl = Math.max(dnl, variance(on(code).map((a, k) => a - on(code - 1)[k])));
    }
    expect(dnl).toBeCloseTo(2 ** (low + 1) - 1 - 1 / W, 9);
    if (bits === 10) expect(Math.sqrt(2 ** (low + 1) - 1)).toBeCloseTo(11.26943, 5);
    // The curve of the binary array, the tool's own, has the same worst INL.
    const curve = sigmaCurves(binary(bits), analyseMismatch(line(binary(bits)), unitSigma));
    expect(Math.max(...curve.inl) ** 2).toBeCloseTo(inl, 8);
  });
});

describe('sigma of every code, local and correlated', () => {
  const mismatch = { localSigma_percent: 20, correlatedSigma_percent: 60, correlationLength_um: 8 };
  const given = plan(['B3 B2 B3 B1 B3', 'B2 B3 B0 B3 B2', 'B3 B1 B3 B2 B3'], { B0: 1, B1: 2, B2: 4, B3: 8 }, [7, 6]);
  const weight = [1, 2, 4, 8];
  const curves = (covariances: Covariances) => sigmaCurves(weight, covariances);

  it('is what the units one by one give', () => {
    const { inl, dnl, inlLeastSquares } = curves(analyseMismatch(given, mismatch));
    const covariance = unitCovariance(given, 0.2, 0.6, 8);
    const bit = given.cells.flat().map((name) => Number(name[1]));
    const variance = (v: readonly number[]): number =>
      v.reduce((sum, a, i) => sum + a * v.reduce((inner, b, j) => inner + b * covariance[i][j], 0), 0);
    // Least squares: the line through all codes, fitted for the error of each unit.
    const codes = Array.from({ length: 16 }, (_, code) => code);
    const slope = bit.map((k) => codes.reduce((sum, code) => sum + (code - 7.5) * ((code >> k) & 1), 0) / 340);
    for (const code of codes) {
      const form = (of: number) => bit.map((k) => ((of >> k) & 1) - of / 15);
      expect(inl[code]).toBeCloseTo(Math.sqrt(variance(form(code))), 9);
      const fitted = bit.map((k, i) => ((code >> k) & 1) - 0.5 - slope[i] * (code - 7.5));
      expect(inlLeastSquares[code]).toBeCloseTo(Math.sqrt(variance(fitted)), 9);
      if (code > 0)
        expect(dnl[code]).toBeCloseTo(Math.sqrt(variance(form(code).map((a, i) => a - form(code - 1)[i]))), 9);
    }
  });

  it('is largest where the figures say', () => {
    const analysis = analyseMismatch(given, mismatch);
    const { inl, dnl, inlLeastSquares } = curves(analysis);
    expect(Math.max(...inl)).toBeCloseTo(analysis.figures.inlSigma_lsb ?? NaN, 12);
    expect(Math.max(...dnl.slice(1))).toBeCloseTo(analysis.figures.dnlSigma_lsb ?? NaN, 12);
    expect(Math.max(...inlLeastSquares)).toBeCloseTo(analysis.figures.inlSigmaLeastSquares_lsb ?? NaN, 12);
  });

  it('of weights with gaps has the levels that there are', () => {
    const sparse = [1, 4, 5];
    const { level, dnl } = sigmaCurves(sparse, analyseMismatch(line(sparse), unitSigma));
    expect([...level]).toEqual([0, 1, 4, 5, 6, 9, 10]);
    // From 4 (C1) to 5 (C2): nine units, and a tenth of nine for the gain.
    expect(dnl[3] ** 2).toBeCloseTo(9 - 1 / 10, 10);
  });
});
