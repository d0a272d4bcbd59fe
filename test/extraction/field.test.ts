import { describe, expect, test } from 'vitest';
import { EPSILON0, SectionGrid, type Conductor, type Dielectric, type Window } from '../../src/extraction/field.js';
import { betweenNeighbours, overPlane } from '../../src/extraction/wire-formulas.js';

const nm = (um: number): number => Math.round(1000 * um);

type Size = Pick<Window, 'sides' | 'least' | 'split'>;

/** Conductors by electrode: lists of [x0, x1, z0, z1] in um. */
function solve(
  [width, height]: readonly [number, number],
  permittivity: number,
  electrodes: readonly (readonly (readonly [number, number, number, number])[])[],
  inserts: readonly (readonly [number, number, number, number, number])[],
  size: Size,
) {
  const conductors = electrodes.flatMap((bars, i) =>
    bars.map(([x0, x1, z0, z1]): Conductor => {
      return { x0: nm(x0), x1: nm(x1), z0: nm(z0), z1: nm(z1), electrode: i + 1, part: i + 1 };
    }),
  );
  const dielectrics = inserts.map(([x0, x1, z0, z1, eps]): Dielectric => {
    return { x0: nm(x0), x1: nm(x1), z0: nm(z0), z1: nm(z1), permittivity: eps };
  });
  const bars = [...conductors, ...dielectrics];
  const grid = new SectionGrid({
    width: nm(width),
    height: nm(height),
    x: bars.flatMap(({ x0, x1 }) => [x0, x1]),
    z: bars.flatMap(({ z0, z1 }) => [z0, z1]),
    ...size,
  });
  const count = electrodes.length + 1;
  const found = grid.capacitance({ permittivity, inserts: dielectrics, conductors, electrodes: count, parts: count });
  return (i: number, j: number) => found[i * count + j];
}

/** From three nested grids: the finest, and as error what Richardson's extrapolation would still add, for errors that fall as h^(4/3). */
function threeGrids(at: (split: number) => number): { value: number; error: number } {
  const [coarse, middle, fine] = [1, 2, 4].map(at);
  // The field at a right-angled edge of a conductor is singular as r^(-1/3): the energy converges with h^(4/3), a factor of 2.52 a halving.
  expect((coarse - middle) / (middle - fine)).toBeGreaterThan(1.3);
  return { value: fine, error: Math.abs(middle - fine) / 1.52 };
}

describe('closed forms', () => {
  test('plates that fill the window: two dielectrics in series (D)', () => {
    const c = solve([3, 10], 4.1, [[[0, 3, 2, 2.5]], [[0, 3, 2.54, 2.6]]], [[0, 3, 2.5, 2.52, 9]], {
      sides: 'reflecting',
      least: 100,
      split: 1,
    });
    expect(c(1, 2)).toBeCloseTo((EPSILON0 * 3) / (0.02 / 9 + 0.02 / 4.1), 6);
    expect(c(1, 0)).toBeCloseTo((EPSILON0 * 4.1 * 3) / 2, 6);
    expect(c(2, 1)).toBeCloseTo(c(1, 2), 6);
    expect(c(2, 0)).toBeCloseTo(0, 9);
  });

  test('a square in a square of twice its side: 10.2341 (conformal mapping, M)', () => {
    // One quarter of it: the walls are the window's top and right side; the axes reflect.
    const at = (split: number) =>
      4 *
      solve(
        [2.2, 2.4],
        1,
        [
          [[0, 1, 0.2, 1.2]],
          [
            [0, 2.2, 2.2, 2.3],
            [2, 2.2, 0.2, 2.3],
          ],
        ],
        // No field below the axis, but for what a vanishing permittivity lets through.
        [[0, 2.2, 0, 0.2, 1e-12]],
        { sides: 'reflecting', least: 100, split },
      )(1, 2);
    const { value, error } = threeGrids(at);
    expect(Math.abs(value / EPSILON0 - 10.2341)).toBeLessThan((2 * error) / EPSILON0);
    expect(error / value).toBeLessThan(0.005);
  });
});

describe('Sakurai and Tamaru 1983', () => {
  test('their values (S coefficients, D values)', () => {
    expect(overPlane(1, 1, 1, 3.9)).toBeCloseTo(136.399, 3);
    expect(betweenNeighbours(1, 1, 1, 1, 1) / EPSILON0).toBeCloseTo(0.79, 9);
    expect(betweenNeighbours(1, 1, 1, 2, 1) / EPSILON0).toBeCloseTo(0.312066, 6);
  });

  test('a line over a plane, solved: within the 6 % that they state', () => {
    for (const [width, thickness] of [
      [1, 1],
      [3, 1],
      [1, 0.5],
    ]) {
      // The window is wide and high enough for the rest of the plane to matter little; half of it, the line's middle reflects.
      const half = solve([30, 40], 3.9, [[[0, width / 2, 1, 1 + thickness]]], [], {
        sides: 'reflecting',
        least: 100,
        split: 2,
      });
      expect((2 * half(1, 0)) / overPlane(width, thickness, 1, 3.9)).toBeGreaterThan(0.94);
      expect((2 * half(1, 0)) / overPlane(width, thickness, 1, 3.9)).toBeLessThan(1.06);
    }
  });
});

/** The stack and channel of check-values: a period of two half columns and the channel between them. */
function channel(shield: boolean, split: number) {
  const plates = { bottom: [2.3, 2.7], thin: [2.7, 2.74], top: [2.74, 2.86] } as const;
  const c = solve(
    [7.2, 12],
    4.1,
    [
      [
        [0, 2.6, ...plates.bottom],
        [4.6, 7.2, ...plates.bottom],
      ],
      [
        [0, 2.2, ...plates.top],
        [5, 7.2, ...plates.top],
        [0, 0.2, 3.6, 4.5],
        [7, 7.2, 3.6, 4.5],
      ],
      [[3.1, 3.46, 1.4, 1.7]],
      [[3.74, 4.1, 1.4, 1.7]],
      ...(shield ? [[[3.1, 4.1, 2.3, 2.7]] as const] : []),
    ],
    [
      [0, 2.2, ...plates.thin, 4.52],
      [5, 7.2, ...plates.thin, 4.52],
    ],
    { sides: 'periodic', least: 200, split },
  );
  return { trunk: c(3, 2), other: c(4, 2), back: c(2, 3) };
}

describe('a trunk between two columns of plates and TOP (D: finite volumes on three grids, 5 %)', () => {
  test('open channel: 4.27 aF/um', () => {
    const { value, error } = threeGrids((split) => channel(false, split).trunk);
    expect(Math.abs(value / 4.27 - 1)).toBeLessThan(0.05);
    expect(error / value).toBeLessThan(0.01);
  });

  test('below a VSS strip: 0.100 aF/um', () => {
    const { trunk, other, back } = channel(true, 2);
    expect(Math.abs(trunk / 0.1 - 1)).toBeLessThan(0.05);
    expect(other).toBeCloseTo(trunk, 9);
    expect(back).toBeCloseTo(trunk, 9);
  });
});
