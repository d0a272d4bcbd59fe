import { describe, expect, it } from 'vitest';
import { etchResidue, nonUnitPlate } from '../../src/sizing/non-unit.js';

const FINE = 1e-3;
const perimeterOverArea = ([x, y]: readonly [number, number]): number => (2 * (x + y)) / (x * y);

describe('a plate that is no whole number of units', () => {
  // Johns, Martin, Analog Integrated Circuit Design, capacitor layout example (M; values D).
  it('4 : 2.314 with a unit of 10 um: one unit and 19.56336 x 6.71664 um, perimeter over area 0.4 (M, D)', () => {
    const { wholeUnits, ratio, sides_um } = nonUnitPlate([10, 10], 2.314, FINE);
    expect(wholeUnits).toBe(1);
    expect(ratio).toBeCloseTo(1.314, 12);
    expect(sides_um[0]).toBeCloseTo(19.56336, 5);
    expect(sides_um[1]).toBeCloseTo(6.71664, 5);
    expect(perimeterOverArea(sides_um)).toBeCloseTo(0.4, 12);
  });

  it('an undercut of 0.1 um leaves -9.953e-5 of its ratio (D)', () => {
    expect(Math.abs(etchResidue([10, 10], 1.314, 0.1) - -9.953e-5)).toBeLessThan(6e-9);
  });

  it.each([
    [[4.4, 4.4], 1.5],
    [[10, 10], 3.99],
    [[5.2, 3.8], 7.25],
    [[2, 9], 1.01],
    [[12, 7], 100.6],
  ] as const)('a unit of %j um, %d of them: area and perimeter add up', (unit, units) => {
    const { wholeUnits, ratio, sides_um } = nonUnitPlate(unit, units, FINE);
    expect(wholeUnits + ratio).toBeCloseTo(units, 12);
    expect(ratio).toBeGreaterThanOrEqual(1);
    expect(ratio).toBeLessThan(2);
    const [w, h] = unit;
    expect(wholeUnits * w * h + sides_um[0] * sides_um[1]).toBeCloseTo(units * w * h, 9);
    expect(wholeUnits * (w + h) + sides_um[0] + sides_um[1]).toBeCloseTo(units * (w + h), 9);
  });

  it.each([
    [[10, 10], 1.7, 0.05],
    [[4.4, 4.4], 1.314, 0.02],
    [[6, 3], 1.2, 0.1],
    [[5, 8], 1.999, 0.25],
  ] as const)('a unit of %j um, K = %d, %d um off every edge: as the plates come out', (unit, units, undercut) => {
    const { ratio, sides_um } = nonUnitPlate(unit, units, FINE);
    const left = ([x, y]: readonly [number, number]): number => (x - 2 * undercut) * (y - 2 * undercut);
    expect(etchResidue(unit, ratio, undercut)).toBeCloseTo(left(sides_um) / left(unit) / ratio - 1, 12);
  });

  it('on a grid tells what the grid makes of the ratio', () => {
    const { drawn_um, drawnRatio, sides_um } = nonUnitPlate([4.4, 4.4], 1.314, 0.005);
    expect(drawn_um.map((side) => Math.round(side * 1e6) % 5000)).toEqual([0, 0]);
    expect(Math.abs(drawn_um[0] - sides_um[0])).toBeLessThanOrEqual(0.0025 + 1e-9);
    expect(drawnRatio).toBeCloseTo((drawn_um[0] * drawn_um[1]) / (4.4 * 4.4), 12);
  });

  it('of one unit is the unit', () => {
    expect(nonUnitPlate([4.4, 4.4], 1, FINE)).toMatchObject({ wholeUnits: 0, ratio: 1, sides_um: [4.4, 4.4] });
    expect(etchResidue([4.4, 4.4], 1, 0.1)).toBe(0);
  });
});
