import { describe, expect, it } from 'vitest';
import { analyseGradient } from '../../src/linearity/analyse-gradient.js';
import { capacitances, exactInl, plan } from './brute-force.js';
import type { Plan } from './brute-force.js';

/** C_A / C_B - 1 of two equal capacitors, exactly, with units of capacitance `unit`. */
const ratioError = (given: Plan, unit: (x: number, y: number) => number): number => {
  const [a, b] = capacitances(given, unit);
  return a / b - 1;
};
const thinning = (gx: number, gy: number) => (x: number, y: number) => 1 / (1 + gx * x + gy * y);

// Two capacitors of two units: e_A = (delta_A - delta_B) / 2, which is C_A / C_B - 1 to first order. So INL is the leading term.
const two = { A: 2, B: 2 };
const row = (cells: string): Plan => plan([[...cells].join(' ')], two);

describe('ratio of two capacitors, units 1 / (1 + g.r): closed forms (D, recomputed exactly here)', () => {
  it.each([
    ['AABB', 2.002003004e-3, 2],
    ['ABAB', 1.000502252e-3, 1],
  ])('%s leads with a multiple of g', (cells, exact, multiple) => {
    expect(Math.abs(ratioError(row(cells), thinning(1e-3, 0)))).toBeCloseTo(exact, 12);
    const { first } = analyseGradient(row(cells));
    expect(1000 * first.inl_lsb_per_ppm_per_um).toBeCloseTo(multiple * 1e-3, 15);
    expect(first.worstDirection_deg).toBe(0);
  });

  it.each([
    [1e-3, 2.0000045e-6],
    [1e-2, 2.000450101e-4],
  ])('ABBA, g = %d: 2 g^2, no first order', (g, exact) => {
    expect(ratioError(row('ABBA'), thinning(g, 0)) / exact).toBeCloseTo(1, 8);
    // The second-order term of 1 / (1 + g x) is g^2 x^2.
    const gradient = { quadratic_ppm_per_um2: { xx: 1e6 * g * g, xy: 0, yy: 0 } };
    const { first, own } = analyseGradient({ ...row('ABBA'), gradient });
    expect(first.inl_lsb).toBe(0);
    expect(own?.inl_lsb).toBeCloseTo(2 * g * g, 15);
  });

  it('2x2 AB/BA: -gx gy', () => {
    const given = plan(['A B', 'B A'], two);
    const [gx, gy] = [0.01, 0.005];
    expect(ratioError(given, thinning(gx, gy))).toBeCloseTo(-5.00003125e-5, 13);
    const gradient = { quadratic_ppm_per_um2: { xx: 1e6 * gx * gx, xy: 1e6 * gx * gy, yy: 1e6 * gy * gy } };
    const { first, second, own } = analyseGradient({ ...given, gradient });
    expect(first.inl_lsb).toBe(0);
    expect(own?.inl_lsb).toBeCloseTo(gx * gy, 15);
    expect(second.worstShape).toEqual({ xx: 0, xy: 1, yy: 0 });
  });

  it('a bowl C0 (1 + q r^2) over ABBA: 2 q', () => {
    const { own } = analyseGradient({ ...row('ABBA'), gradient: { quadratic_ppm_per_um2: 7 } });
    expect(own?.inl_lsb).toBeCloseTo(14e-6, 18);
  });
});

describe('even core', () => {
  // The lone LSB unit at (1/2, 1/2), the termination at its reflection, every other bit in reflected pairs, dealt one after the other.
  const cells = Array.from({ length: 8 }, () => new Array<string>(8).fill(''));
  cells[3][4] = 'B0';
  cells[4][3] = 'TERM';
  let pair = 0;
  for (let cell = 0; cell < 32; cell++) {
    const [r, c] = [Math.floor(cell / 8), cell % 8];
    if (cells[r][c]) continue;
    pair++;
    // 1, 2, 4, 8 and 16 pairs make B1 to B5.
    cells[r][c] = cells[7 - r][7 - c] = `B${1 + Math.floor(Math.log2(pair))}`;
  }
  const given = plan(
    cells.map((line) => line.join(' ')),
    { B0: 1, B1: 2, B2: 4, B3: 8, B4: 16, B5: 32 },
  );

  it('LSB floor under 0.1 % a pitch along the diagonal: 0.000701 LSB, g / sqrt 2 leading (D)', () => {
    const g = 1e-3 / Math.SQRT2;
    const inl = exactInl(capacitances(given, thinning(g, g)), [1, 2, 4, 8, 16, 32]);
    expect(Math.abs(inl[1])).toBeCloseTo(0.000701, 6);
    const { first } = analyseGradient(given);
    expect(first.worstCode).toEqual(['B0']);
    expect(first.worstDirection_deg).toBeCloseTo(45, 12);
    // Less the LSB's share of the gain: 62/63.
    expect(1000 * first.inl_lsb_per_ppm_per_um).toBeCloseTo(((1e-3 / Math.SQRT2) * 62) / 63, 12);
  });

  it('the linear model with the second-order term follows the exact conversion', () => {
    const gradient = {
      linear_ppm_per_um: -1000,
      direction_deg: 45,
      quadratic_ppm_per_um2: { xx: 0.5, xy: 0.5, yy: 0.5 },
    };
    const g = 1e-3 / Math.SQRT2;
    const inl = exactInl(capacitances(given, thinning(g, g)), [1, 2, 4, 8, 16, 32]).map(Math.abs);
    const { own } = analyseGradient({ ...given, gradient });
    expect((own?.inl_lsb ?? 0) / Math.max(...inl)).toBeCloseTo(1, 3);
  });
});

describe('Prouhet-Thue-Morse patterns (Prouhet 1851; D)', () => {
  it('{0,3,5,6} | {1,2,4,7}: equal sums 14/14 and 70/70, unlike cubes 368/416', () => {
    const power = (of: readonly number[], p: number): number => of.reduce((sum, i) => sum + i ** p, 0);
    const [even, odd] = [[0, 3, 5, 6], [1, 2, 4, 7]]; // prettier-ignore
    expect([1, 2, 3].map((p) => [power(even, p), power(odd, p)])).toEqual([[14, 14], [70, 70], [368, 416]]); // prettier-ignore
    const line = Array.from({ length: 8 }, (_, i) => (even.includes(i) ? 'A' : 'B')).join(' ');
    const { first, second } = analyseGradient(plan([line], { A: 4, B: 4 }));
    expect(first.inl_lsb).toBe(0);
    expect(second.inl_lsb).toBe(0);
    expect(second.worstCode).toBeUndefined();
    expect(second.worstShape).toBeUndefined();
  });

  it('sign patterns t_p x t_q cancel every monomial up to degree p + q - 1: ABBA/BAAB both orders, ABBA/ABBA only the first', () => {
    const both = analyseGradient(plan(['A B B A', 'B A A B'], { A: 4, B: 4 }, [7.2, 5.7]));
    expect([both.first.inl_lsb, both.second.inl_lsb]).toEqual([0, 0]);
    const one = analyseGradient(plan(['A B B A', 'A B B A'], { A: 4, B: 4 }, [7.2, 5.7]));
    expect(one.first.inl_lsb).toBe(0);
    expect(one.second.inl_lsb).toBeGreaterThan(0);
  });
});

it('weights with several odd capacitors: zero first order through triples of zero sum and their reflections', () => {
  // [1, 2, 3, 5, 9, 16, 29] on 5x13, places in pitches from the centre: C2 and C3, C4 and C6 share a mirrored triple each.
  const cells = Array.from({ length: 5 }, () => new Array<string>(13).fill(''));
  const put = (name: string, x: number, y: number): void => void (cells[2 - y][6 + x] = name);
  put('C0', 0, 0);
  const mirrored = (name: string, other: string, places: [number, number][]): void => {
    for (const [x, y] of places) {
      put(name, x, y);
      put(other, -x, -y);
    }
  };
  mirrored('C2', 'C3', [[1, 0], [2, 0], [-3, 0]]); // prettier-ignore
  mirrored('C4', 'C6', [[4, 0], [1, 1], [-5, -1]]); // prettier-ignore
  const pairs = [['C1', 1], ['C3', 1], ['C4', 3], ['C5', 8], ['C6', 13]].flatMap(([name, n]) => new Array(+n).fill(name)); // prettier-ignore
  for (let cell = 0; cell < 32; cell++) {
    const [r, c] = [Math.floor(cell / 13), cell % 13];
    if (!cells[r][c]) cells[r][c] = cells[4 - r][12 - c] = pairs.pop();
  }
  const lines = cells.map((line) => line.join(' '));
  const given = plan(lines, { C0: 1, C1: 2, C2: 3, C3: 5, C4: 9, C5: 16, C6: 29 }, [7.2, 5.7]);
  expect(given.capacitors.map(({ units }) => units)).toEqual([1, 2, 3, 5, 9, 16, 29]);
  const { first, second } = analyseGradient(given);
  expect([first.inl_lsb, first.dnl_lsb]).toEqual([0, 0]);
  expect(second.lowerBound_inl_lsb).toBeGreaterThan(0);
  expect(second.lowerBound_inl_lsb).toBeLessThanOrEqual(second.inl_lsb);
});
