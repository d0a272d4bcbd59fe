import { describe, expect, it } from 'vitest';
import { undominated } from '../../src/comparison/candidates.js';
import { compare } from '../../src/comparison/compare.js';
import { drawKept, startCandidates } from '../../src/pipeline.js';
import { placeByRule, publishedRules } from '../../src/placement/published-rules.js';
import type { Floorplan } from '../../src/spec/floorplan.js';
import { resolveArray } from '../../src/spec/resolve.js';
import { bitsOf, codes, endPointErrors, isOn, largest, length, nuclearNorm } from '../linearity/brute-force.js';
import { drawFloorplan } from '../../src/pipeline.js';
import { parallelPlate } from '../pipeline/drawn.js';

/** The placement-only sigma of INL and of DNL, by pairs of units and by codes; one pitch has a correlation of 0.9. */
function sigmas(floorplan: Floorplan): [inl: number, dnl: number] {
  const [px, py] = floorplan.core.pitch_um;
  const bits = bitsOf(floorplan);
  const places = bits.map(({ name }) =>
    floorplan.cells.flatMap((line, row) =>
      line.flatMap((cell, column) => (cell === name ? [[column * px, row * py] as const] : [])),
    ),
  );
  const one = Math.sqrt(px * py);
  const covariance = places.map((a) =>
    places.map((b) =>
      a.reduce((sum, [x, y]) => sum + b.reduce((s, [u, v]) => s + Math.pow(0.9, Math.hypot(x - u, y - v) / one), 0), 0),
    ),
  );
  const total = bits.reduce((sum, { weight }) => sum + weight, 0);
  const factors = codes(bits.length).map((code) => {
    const on = bits.reduce((sum, { weight }, k) => sum + (isOn(code, k) ? weight : 0), 0);
    return { on, of: bits.map((_, k) => (isOn(code, k) ? 1 : 0) - on / total) };
  });
  const sigma = (of: readonly number[]): number =>
    Math.sqrt(of.reduce((sum, a, k) => sum + of.reduce((s, b, l) => s + a * b * covariance[k][l], 0), 0));
  factors.sort((a, b) => a.on - b.on);
  const steps = factors.slice(1).map(({ of }, i) => of.map((value, k) => value - factors[i].of[k]));
  return [Math.max(...factors.map(({ of }) => sigma(of))), Math.max(...steps.map(sigma))];
}

/** All that decides, by brute force; the area is the drawing's. */
function figuresOf(floorplan: Floorplan, area_um2: number): number[] {
  const errors = endPointErrors(floorplan);
  const columns = Array.from(
    { length: floorplan.core.columns },
    (_, c) => new Set(floorplan.cells.map((row) => row[c])),
  );
  const names = new Set(bitsOf(floorplan).map(({ name }) => name));
  const nets = columns.reduce((sum, column) => sum + [...column].filter((name) => names.has(name)).length, 0);
  const [inl, dnl] = sigmas(floorplan);
  return [largest(errors, length), largest(errors, nuclearNorm), inl, dnl, nets, area_um2];
}

/** No further off than brute force and the tool may be from each other. */
const atMost = (a: number, b: number): boolean => a <= b + 1e-9 * Math.abs(b);

describe('candidates', () => {
  const array = resolveArray({ format: 'steelyard/array', version: 1, bits: 6, effort: 'quick' }, parallelPlate);
  if (!array.ok) throw new Error('unexpected');
  const run = startCandidates({ array: array.value }, 7);
  while (run.step(1e6));
  const drawn = run.best().map((kept) => drawKept(kept, parallelPlate));

  it('are as many as asked for, clean, in the order of their second order', () => {
    expect(drawn.length).toBe(7);
    expect(drawn.flatMap(({ findings }) => findings)).toEqual([]);
    const second = drawn.map(({ metrics }) => metrics.gradient.second.inl_lsb_per_ppm_per_um2);
    expect(second).toEqual([...second].sort((a, b) => a - b));
  });

  it('none is dominated by another, counted by brute force', () => {
    const figures = drawn.map(({ floorplan, metrics }) => figuresOf(floorplan, metrics.area_um2 ?? NaN));
    drawn.forEach(({ metrics }, i) => {
      const { gradient, mismatch, hookup } = metrics;
      expect(1e-6 * figures[i][1]).toBeCloseTo(gradient.second.inl_lsb_per_ppm_per_um2, 12);
      expect(figures[i][2]).toBeCloseTo(mismatch?.placement.inlSigma_perUnitSigma ?? NaN, 9);
      expect(figures[i][3]).toBeCloseTo(mismatch?.placement.dnlSigma_perUnitSigma ?? NaN, 9);
      expect(figures[i][4]).toBe(hookup.columnNets);
    });
    figures.forEach((a, i) =>
      figures.forEach((b, j) => {
        if (i !== j) expect([i, j, a.every((value, k) => atMost(value, b[k]))]).toEqual([i, j, false]);
      }),
    );
  });

  it('none is dominated when the tool compares them, each on its own pitch or all on that of the first', () => {
    const measured = drawn.map(({ floorplan, metrics }) => ({ floorplan, drawn: metrics }));
    expect(compare(measured).dominates).toEqual([]);
    expect(compare(measured, { pitch: 'own' }).dominates).toEqual([]);
  });
});

describe('of given placements', () => {
  const measured = publishedRules.map(({ name }) => {
    const { floorplan, metrics } = drawFloorplan(placeByRule(name, 6, [1, 1]), parallelPlate, { wired: false });
    return { kept: name, floorplan, metrics };
  });
  const names = (count: number, all = measured) => undominated(all, count).map(({ kept }) => kept);

  it('those stay that none dominates, by second order', () => {
    const figures = new Map(measured.map(({ kept, floorplan }) => [kept, figuresOf(floorplan, 0)]));
    const isWorse = (a: number[], b: number[]) =>
      b.every((value, k) => atMost(value, a[k])) && b.some((value, k) => !atMost(a[k], value));
    const wanted = [...figures]
      .filter(([, a]) => ![...figures.values()].some((b) => isWorse(a, b)))
      .sort(([, a], [, b]) => a[1] - b[1])
      .map(([name]) => name);
    expect(wanted.length).toBeGreaterThan(1);
    expect(wanted.length).toBeLessThan(publishedRules.length);
    expect(names(16)).toEqual(wanted);
  });

  it('of too many the best of single figures stay, and twins are one', () => {
    const all = names(16);
    const two = names(2);
    expect(two.length).toBe(2);
    for (const name of two) expect(all).toContain(name);
    expect(names(16, [...measured, ...measured])).toEqual(all);
    expect(names(1).length).toBe(1);
  });
});
