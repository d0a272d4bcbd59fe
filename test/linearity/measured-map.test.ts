import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { InputError } from '../../src/core/problem.js';
import { analyseGradient } from '../../src/linearity/analyse-gradient.js';
import { fieldOf } from '../../src/linearity/map-field.js';
import { underMap } from '../../src/linearity/measured-map.js';
import type { GradientMap } from '../../src/spec/gradient-map.js';
import { bitsOf, capacitances, exactInl, plan } from './brute-force.js';
import type { Plan } from './brute-force.js';

const given = plan(['C3 C2 C3 C1 C3', 'C2 C3 C0 C3 C2', 'C3 C1 C3 C3 C2'], { C0: 1, C1: 2, C2: 4, C3: 8 }, [7.2, 5.7]);
const under = (map: GradientMap, of: Plan = given) => underMap(map, of.core, of.capacitors, of.cells);

/** A map with a point in every cell's centre. */
const atCells = ({ core: { rows, columns, pitch_um } }: Plan, ppm: (x: number, y: number) => number): GradientMap =>
  Array.from({ length: rows * columns }, (_, i) => {
    const x_um = ((i % columns) - (columns - 1) / 2) * pitch_um[0];
    const y_um = ((rows - 1) / 2 - Math.floor(i / columns)) * pitch_um[1];
    return { x_um, y_um, ppm: ppm(x_um, y_um) };
  });

const slope = (x: number, y: number): number => 30 + 12 * x - 7 * y;

describe('INL and DNL under a measured map', () => {
  it('are those of every code by the end-point formula, whatever was measured', () => {
    fc.assert(
      fc.property(fc.array(fc.integer({ min: -2e5, max: 2e5 }), { minLength: 15, maxLength: 15 }), (values) => {
        let next = 0;
        const map = atCells(given, () => values[next++]);
        const valueAt = new Map(map.map(({ x_um, y_um, ppm }) => [`${x_um.toFixed(3)} ${y_um.toFixed(3)}`, ppm]));
        const units = capacitances(given, (x, y) => 1 + 1e-6 * (valueAt.get(`${x.toFixed(3)} ${y.toFixed(3)}`) ?? NaN));
        const inl = exactInl(units, [1, 2, 4, 8]);
        const figures = under(map);
        expect(figures.inl_lsb).toBeCloseTo(Math.max(...inl.map(Math.abs)), 12);
        expect(figures.dnl_lsb).toBeCloseTo(Math.max(...inl.slice(1).map((e, i) => Math.abs(e - inl[i]))), 12);
        if (figures.worstCode === undefined) return;
        const code = bitsOf(given).reduce(
          (sum, { name }, k) => sum + (figures.worstCode?.includes(name) ? 2 ** k : 0),
          0,
        );
        expect(Math.abs(inl[code])).toBeCloseTo(figures.inl_lsb, 12);
        expect(code).toBeLessThan(8);
      }),
    );
  });

  it('of a slope are those of the linear model, to second order in it', () => {
    const uneven = plan(['C2 C2 C0', 'C1 C2 C2', 'C1 - C3', 'C3 C3 C3', 'C3 C3 C3', 'C3 TERM -'], {
      C0: 1,
      C1: 2,
      C2: 4,
      C3: 8,
    });
    const { own } = analyseGradient({ ...uneven, gradient: { linear_ppm_per_um: 5, direction_deg: 90 } });
    const figures = under(
      atCells(uneven, (_, y) => 5 * y),
      uneven,
    );
    expect(figures.inl_lsb / (own?.inl_lsb ?? NaN)).toBeCloseTo(1, 4);
    expect((figures.dnl_lsb ?? NaN) / (own?.dnl_lsb ?? NaN)).toBeCloseTo(1, 4);
  });

  it('are 0 without a deviation and where all units deviate alike', () => {
    expect(under(atCells(given, () => 0))).toEqual({ inl_lsb: 0, dnl_lsb: 0 });
    expect(under(atCells(given, () => -1234))).toEqual({ inl_lsb: 0, dnl_lsb: 0 });
  });

  it('take steps between neighbouring levels where weights are not binary, and no DNL beyond 14 capacitors', () => {
    const equal = plan(['A B C'], { A: 1, B: 1, C: 1 });
    // e = -1000, 0, 1000 ppm: a step changes one capacitor, or exchanges two and adds one.
    const figures = under(
      atCells(equal, (x) => 1000 * x),
      equal,
    );
    expect(figures.inl_lsb).toBeCloseTo(1e-3, 15);
    expect(figures.dnl_lsb).toBeCloseTo(2e-3, 15);
    const names = Array.from({ length: 15 }, (_, k) => `C${k}`);
    const many = plan([names.join(' ')], Object.fromEntries(names.map((name) => [name, 1])));
    expect(
      under(
        atCells(many, (x) => x),
        many,
      ),
    ).not.toHaveProperty('dnl_lsb');
  });
});

describe('between the points of a map', () => {
  const random = fc.integer({ min: -1999, max: 1999 }).map((hundredths) => hundredths / 100);
  const corners: [number, number][] = [[-20, -20], [-20, 20], [20, -20], [20, 20]]; // prettier-ignore

  it('a plane is found as it is: on an uneven grid and between scattered points', () => {
    fc.assert(
      fc.property(random, random, fc.array(fc.tuple(random, random), { minLength: 1, maxLength: 12 }), (x, y, more) => {
        const grid = [-20, -11, 0.5, 20].flatMap((x_um) =>
          [-20, 3, 20].map((y_um) => ({ x_um, y_um, ppm: slope(x_um, y_um) })),
        );
        expect(fieldOf(grid)(x, y)).toBeCloseTo(slope(x, y), 9);
        const scattered = [...corners, ...more].map(([x_um, y_um]) => ({ x_um, y_um, ppm: slope(x_um, y_um) }));
        expect(fieldOf(scattered)(x, y)).toBeCloseTo(slope(x, y), 5);
      }),
    );
  });

  it('a product of coordinates is found as it is on a grid, in whatever order its points stand', () => {
    const product = (x: number, y: number): number => 3 * x * y - x + 2;
    const grid = [4, -4, 1].flatMap((y_um) => [10, -10].map((x_um) => ({ x_um, y_um, ppm: product(x_um, y_um) })));
    for (const [x, y] of [[0, 0], [9, -3.5], [-10, 2], [3, 4]]) expect(fieldOf(grid)(x, y)).toBeCloseTo(product(x, y), 10); // prettier-ignore
  });

  it('a point is what was measured there, also among scattered ones', () => {
    const map = [...corners, [1, 2] as const, [-3, 5] as const].map(([x_um, y_um], i) => ({
      x_um,
      y_um,
      ppm: 10 ** i,
    }));
    for (const { x_um, y_um, ppm } of map) expect(fieldOf(map)(x_um + 1e-8, y_um - 1e-8)).toBe(ppm);
    // And the field runs into it without a jump.
    expect(fieldOf(map)(1.00001, 2)).toBeCloseTo(1e4, 0);
  });

  it('a line of points serves a core of one row', () => {
    const line = plan(['A B B A'], { A: 2, B: 2 });
    const map = [-2, -1, 0.5, 2].map((x_um) => ({ x_um, y_um: 0, ppm: 100 * x_um }));
    expect(under(map, line).inl_lsb).toBeLessThan(1e-15);
  });

  it('nothing is made up: neither beyond the points nor beside a slanted line of them', () => {
    const small = atCells(plan(['A B', 'B A'], {}, [7.2, 5.7]), slope);
    expect(() => under(small)).toThrow(InputError);
    expect(() => under(small)).toThrow('a cell at -14.4, 5.7');
    const slanted = [-20, 0, 20].map((t) => ({ x_um: t, y_um: t, ppm: t }));
    expect(fieldOf(slanted)(0, 0)).toBe(0);
    expect(() => fieldOf(slanted)(1, 2)).toThrow('points on one slanted line');
  });
});
