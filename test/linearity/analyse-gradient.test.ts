import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { analyseGradient } from '../../src/linearity/analyse-gradient.js';
import {
  anyPlan,
  anyWeights,
  binaryWeights,
  bitsOf,
  codes,
  endPointErrors,
  farthest,
  isOn,
  largest,
  length,
  lineErrors,
  nuclearNorm,
  plan,
  stepErrors,
  underGradient,
} from './brute-force.js';
import type { Plan, Sums } from './brute-force.js';

const near = (found: number | undefined, wanted: number): void => {
  expect(found).toBeDefined();
  expect(Math.abs((found ?? 0) - wanted)).toBeLessThanOrEqual(1e-10 * Math.abs(wanted) + 1e-16);
};

const anyGradient = fc.record(
  {
    linear_ppm_per_um: fc.integer({ min: -20, max: 20 }),
    quadratic_ppm_per_um2: fc.oneof(
      fc.integer({ min: -5, max: 5 }),
      fc.record({
        xx: fc.integer({ min: -5, max: 5 }),
        xy: fc.integer({ min: -5, max: 5 }),
        yy: fc.integer({ min: -5, max: 5 }),
      }),
    ),
    direction_deg: fc.integer({ min: -360, max: 360 }),
  },
  { requiredKeys: [] },
);

const plans = fc.oneof(anyPlan(anyWeights), anyPlan(binaryWeights));

describe('gradient figures against plain loops over all codes', () => {
  it('first and second order, INL and DNL, normalised and absolute', () => {
    fc.assert(
      fc.property(plans, (given) => {
        const { first, second } = analyseGradient(given);
        const errors = endPointErrors(given);
        const steps = stepErrors(given);
        const far = farthest(given.core);
        const [a, b] = [largest(errors, length), largest(errors, nuclearNorm)];
        near(first.inl_lsb_per_ppm_per_um, 1e-6 * a);
        near(second.inl_lsb_per_ppm_per_um2, 1e-6 * b);
        near(first.inl_lsb, far && (0.01 * a) / far);
        near(second.inl_lsb, far && (0.01 * b) / far / far);
        const [c, d] = [largest(steps, length), largest(steps, nuclearNorm)];
        near(first.dnl_lsb_per_ppm_per_um, 1e-6 * c);
        near(second.dnl_lsb_per_ppm_per_um2, 1e-6 * d);
        near(first.dnl_lsb, far && (0.01 * c) / far);
        near(second.dnl_lsb, far && (0.01 * d) / far / far);
      }),
      { numRuns: 400 },
    );
  });

  it('the least-squares line through all codes', () => {
    fc.assert(
      fc.property(plans, (given) => {
        const { leastSquares } = analyseGradient(given);
        const errors = lineErrors(given);
        const far = farthest(given.core);
        const wanted1 = far && (0.01 * largest(errors, length)) / far;
        const wanted2 = far && (0.01 * largest(errors, nuclearNorm)) / far / far;
        expect(Math.abs(leastSquares.firstInl_lsb - wanted1)).toBeLessThanOrEqual(1e-12);
        expect(Math.abs(leastSquares.secondInl_lsb - wanted2)).toBeLessThanOrEqual(1e-12);
      }),
      { numRuns: 300 },
    );
  });

  it('a gradient of one’s own, with and without a direction', () => {
    fc.assert(
      fc.property(plans, anyGradient, (given, gradient) => {
        const { own } = analyseGradient({ ...given, gradient });
        const measure = (sums: Sums): number => underGradient(gradient, sums);
        near(own?.inl_lsb, largest(endPointErrors(given), measure));
        near(own?.dnl_lsb, largest(stepErrors(given), measure));
      }),
      { numRuns: 600 },
    );
  });

  it('the worst code is the smallest of the worst ones, and feels the worst direction and shape in full', () => {
    fc.assert(
      fc.property(plans, (given) => {
        const { first, second } = analyseGradient(given);
        const errors = endPointErrors(given);
        const names = bitsOf(given).map(({ name }) => name);
        const smallest = (measure: (sums: Sums) => number): number => {
          const most = largest(errors, measure);
          return errors.findIndex((error) => measure(error) >= most * (1 - 1e-11));
        };
        const on = (code: number): string[] => names.filter((_, k) => isOn(code, k));
        if (first.inl_lsb > 0) {
          const code = smallest(length);
          expect(first.worstCode).toEqual(on(code));
          const angle = ((first.worstDirection_deg ?? NaN) * Math.PI) / 180;
          const felt = Math.cos(angle) * errors[code][0] + Math.sin(angle) * errors[code][1];
          near(first.inl_lsb_per_ppm_per_um, 1e-6 * Math.abs(felt));
          expect(first.worstDirection_deg).toBeGreaterThanOrEqual(0);
          expect(first.worstDirection_deg).toBeLessThan(180);
        } else expect(Object.keys(first)).not.toContain('worstCode');
        if (second.inl_lsb > 0) {
          const code = smallest(nuclearNorm);
          expect(second.worstCode).toEqual(on(code));
          const shape = second.worstShape ?? { xx: NaN, xy: NaN, yy: NaN };
          const felt = shape.xx * errors[code][2] + 2 * shape.xy * errors[code][3] + shape.yy * errors[code][4];
          near(second.inl_lsb_per_ppm_per_um2, 1e-6 * Math.abs(felt));
          const eigenvalue = Math.abs(shape.xx + shape.yy) / 2 + Math.hypot((shape.xx - shape.yy) / 2, shape.xy);
          near(eigenvalue, 1);
          expect([shape.xx, shape.xy, shape.yy].find((entry) => entry !== 0)).toBeGreaterThan(0);
        } else expect(Object.keys(second)).not.toContain('worstShape');
      }),
      { numRuns: 400 },
    );
  });
});

const turned: Record<string, { cells: (cells: Plan['cells']) => string[][]; swap: boolean; handed: boolean }> = {
  'left and right': { cells: (cells) => cells.map((line) => [...line].reverse()), swap: false, handed: true },
  'top and bottom': { cells: (cells) => [...cells].reverse().map((line) => [...line]), swap: false, handed: true },
  'half a turn': {
    cells: (cells) => [...cells].reverse().map((line) => [...line].reverse()),
    swap: false,
    handed: false,
  },
  // Row r of the turned core is column r from the right of the given one.
  'a quarter turn': {
    cells: ([...cells]) => cells[0].map((_, r) => cells.map((line) => line[line.length - 1 - r])),
    swap: true,
    handed: false,
  },
};

describe('mirrored and turned', () => {
  it.each(Object.entries(turned))('%s: the same figures and codes, direction and shape turn along', (_, turn) => {
    fc.assert(
      fc.property(plans, (given) => {
        const { rows, columns, pitch_um } = given.core;
        const core = turn.swap
          ? { rows: columns, columns: rows, pitch_um: [pitch_um[1], pitch_um[0]] as [number, number] }
          : given.core;
        expect(core.rows * core.columns).toBe(rows * columns);
        const gradient = { linear_ppm_per_um: 10, quadratic_ppm_per_um2: 0.5 };
        const before = analyseGradient({ ...given, gradient });
        const after = analyseGradient({ core, capacitors: given.capacitors, cells: turn.cells(given.cells), gradient });
        for (const order of ['first', 'second', 'own', 'leastSquares'] as const) {
          for (const [key, value] of Object.entries(before[order] ?? {})) {
            const other = (after[order] as Record<string, unknown>)[key];
            if (typeof value === 'number' && key !== 'worstDirection_deg') near(other as number, value);
          }
        }
        expect(after.first.worstCode).toEqual(before.first.worstCode);
        expect(after.second.worstCode).toEqual(before.second.worstCode);
        if (before.first.worstDirection_deg !== undefined) {
          const angle = before.first.worstDirection_deg;
          const wanted = turn.handed ? 180 - angle : turn.swap ? angle + 90 : angle;
          const apart = Math.abs((after.first.worstDirection_deg ?? NaN) - (wanted % 180));
          expect(Math.min(apart, 180 - apart)).toBeLessThan(1e-9);
        }
        if (before.second.worstShape) {
          const { xx, xy, yy } = before.second.worstShape;
          const shape = [turn.swap ? yy : xx, turn.swap || turn.handed ? -xy : xy, turn.swap ? xx : yy];
          const sign = Math.sign(shape.find((entry) => entry !== 0) ?? 1);
          const found = after.second.worstShape ?? { xx: NaN, xy: NaN, yy: NaN };
          [found.xx, found.xy, found.yy].forEach((entry, i) => expect(entry).toBeCloseTo(sign * shape[i], 10));
        }
      }),
      { numRuns: 150 },
    );
  });
});

describe('particular floorplans', () => {
  it('a 4-bit array worked out beforehand, to 12 digits', () => {
    const given = plan(
      ['B2 B3 B3', 'B3 B3 B2', 'B1 B0 B1', 'B3 B2 B3', 'B3 B2 B3'],
      { B0: 1, B1: 2, B2: 4, B3: 8 },
      [7.2, 5.7],
    );
    const { first, second, own } = analyseGradient({
      ...given,
      gradient: { linear_ppm_per_um: 10, quadratic_ppm_per_um2: 0.05 },
    });
    expect(first).toStrictEqual({ inl_lsb: 0, dnl_lsb: 0, inl_lsb_per_ppm_per_um: 0, dnl_lsb_per_ppm_per_um: 0 });
    const digits = (value: number | undefined): number => Number(value?.toPrecision(12));
    expect(digits(second.inl_lsb)).toBe(0.0107227722772);
    expect(digits(second.dnl_lsb)).toBe(0.018099009901);
    expect(digits(second.inl_lsb_per_ppm_per_um2)).toBe(0.00019494);
    expect(digits(second.dnl_lsb_per_ppm_per_um2)).toBe(0.00032904);
    expect(digits(second.lowerBound_inl_lsb)).toBe(0.0107227722772);
    expect(second.worstShape).toStrictEqual({ xx: 1, xy: 0, yy: 1 });
    expect(second.worstCode).toStrictEqual(['B0', 'B1']);
    // A bowl is the worst shape here: 0.05 times the figure per ppm/um^2.
    expect(digits(own?.inl_lsb)).toBe(0.000009747);
  });

  it('straight binary weights have one step a bit, and all pairs of levels say the same', () => {
    fc.assert(
      fc.property(anyPlan(binaryWeights), (given) => {
        const bits = bitsOf(given).length;
        const errors = endPointErrors(given);
        const steps = codes(bits).slice(1).map((code) => errors[code].map((e, i) => e - errors[code - 1][i]) as Sums); // prettier-ignore
        near(analyseGradient(given).first.dnl_lsb_per_ppm_per_um, 1e-6 * largest(steps, length));
      }),
    );
  });

  it('no DNL beyond 14 capacitors that are not straight binary, everything else as ever', () => {
    const line = Array.from({ length: 15 }, (_, k) => `C${k}`);
    const weights = Object.fromEntries(line.map((name) => [name, 1]));
    const given = plan([line.join(' ')], weights);
    const { first, second, own } = analyseGradient({ ...given, gradient: { linear_ppm_per_um: 1 } });
    expect(Object.keys({ ...first, ...second, ...own }).filter((key) => key.startsWith('dnl'))).toEqual([]);
    // The seven on one side: 1 + 2 + ... + 7 pitches.
    near(first.inl_lsb_per_ppm_per_um, 28e-6);
    near(own?.inl_lsb, 28e-6);
    expect(first.worstDirection_deg).toBe(0);
    expect(first.worstCode).toEqual(line.slice(0, 7));
  });

  it('a core of one cell, and one capacitor alone', () => {
    const { first, second } = analyseGradient(plan(['A'], { A: 1 }));
    expect(first).toStrictEqual({ inl_lsb: 0, dnl_lsb: 0, inl_lsb_per_ppm_per_um: 0, dnl_lsb_per_ppm_per_um: 0 });
    expect(second.inl_lsb).toBe(0);
    expect(analyseGradient(plan(['A A -'], { A: 2 })).first.inl_lsb).toBe(0);
  });

  it('a pitch between nanometres is refused', () => {
    expect(() => analyseGradient(plan(['A B'], { A: 1, B: 1 }, [1.00005, 1]))).toThrow(RangeError);
  });
});
