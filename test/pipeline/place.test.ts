import { describe, expect, it } from 'vitest';
import { checkPolygons } from '../../src/check/polygons.js';
import { Infeasible } from '../../src/core/problem.js';
import { Random } from '../../src/core/random.js';
import { drawFloorplan, startPlacement } from '../../src/pipeline.js';
import { formatFloorplan, formatPolygons } from '../../src/spec/format.js';
import type { Floorplan } from '../../src/spec/floorplan.js';
import { resolveArray } from '../../src/spec/resolve.js';
import { faults, names } from '../check/plant-faults.js';
import { drawn, type Given, parallelPlate } from './drawn.js';

/** First moments of every bit about the core's centre, in half-pitches, straight from the cells. */
function firstMoments({ cells, capacitors }: Floorplan): number[] {
  return capacitors
    .filter(({ role }) => role === 'bit')
    .flatMap(({ name }) => {
      let x = 0;
      let y = 0;
      cells.forEach((row, r) =>
        row.forEach((cell, c) => {
          if (cell !== name) return;
          x += 2 * c - (row.length - 1);
          y += 2 * r - (cells.length - 1);
        }),
      );
      return [x, y];
    });
}

const isClean = (given: Given) => {
  const { floorplan, metrics, findings } = drawn(given);
  expect(findings).toEqual([]);
  expect(metrics.hookup.sameMetalCrossings).toBe(0);
  for (const { name, units } of floorplan.capacitors) {
    const inCore = floorplan.cells.flat().filter((cell) => cell === name).length;
    const inRing = (floorplan.ringUnits ?? []).filter(({ capacitor }) => capacitor === name).length;
    expect(inCore + inRing).toBe(units);
  }
  return { floorplan, metrics };
};

describe('an array of any bit count', () => {
  for (const bits of [2, 3, 4, 5, 6, 7, 8, 9, 10, 11, 12])
    it(`${bits} bits: clean, first order exactly 0`, () => {
      const { floorplan, metrics } = isClean({ bits, effort: 'quick' });
      expect(metrics.gradient.first.inl_lsb).toBe(0);
      expect(metrics.gradient.first).not.toHaveProperty('worstDirection_deg');
      expect(firstMoments(floorplan).every((moment) => moment === 0)).toBe(true);
    });

  for (const bits of [13, 14])
    it(`${bits} bits: first order exactly 0`, () => {
      const { floorplan, metrics } = drawn({ bits, effort: 'quick', emphasis: 'gradient' }, [1, 1]);
      expect(metrics.gradient.first.inl_lsb).toBe(0);
      expect(firstMoments(floorplan).every((moment) => moment === 0)).toBe(true);
    });

  for (const bits of [6, 8, 10, 12])
    for (const emphasis of ['gradient', 'balanced', 'wiring'] as const)
      it(`${bits} bits, ${emphasis}: second order within 1.5 times the bound at square pitch`, () => {
        const { second } = drawn({ bits, emphasis }, [1, 1]).metrics.gradient;
        expect(second.lowerBound_inl_lsb).toBeGreaterThan(0);
        expect(second.inl_lsb).toBeLessThanOrEqual(1.5 * second.lowerBound_inl_lsb!);
      });
});

describe('every surrounding', () => {
  for (const rings of [0, 1, 2, 3])
    for (const fillTop of ['TOP', 'VSS'] as const)
      for (const bits of [3, 5])
        it(`${bits} bits, ${rings} rings, fill on ${fillTop}`, () => {
          isClean({ bits, rings, fillTop, effort: 'quick' });
        });

  for (const given of [
    { bits: 6, termination: 'core' },
    { bits: 6, termination: 'none' },
    { bits: 7, termination: 'core', fillTop: 'VSS' },
    { bits: 5, core: { rows: 9, columns: 9 }, fillTop: 'VSS' },
    { bits: 4, tracksPerChannel: 9 },
    { bits: 6, core: { rows: 3, columns: 21 } },
    { bits: 6, core: { rows: 63, columns: 1 } },
    { bits: 6, core: { rows: 1, columns: 63 } },
    { weights: [3, 3, 3, 7] },
    { weights: Array.from({ length: 20 }, (_, i) => i + 1) },
  ] satisfies Given[])
    it(JSON.stringify(given), () => {
      isClean({ ...given, effort: 'quick' });
    });
});

describe('weights of any kind', () => {
  it('three odd capacitors have their centroids at the centre of 5 x 13', () => {
    const { floorplan, metrics } = isClean({ weights: [1, 2, 3, 5, 9, 16, 29], core: { rows: 5, columns: 13 } });
    expect(metrics.gradient.first.inl_lsb).toBe(0);
    expect(firstMoments(floorplan).every((moment) => moment === 0)).toBe(true);
  });

  it('two single units cannot both have theirs there: the warning says so, with a bound', () => {
    const { metrics, warnings } = drawn({ weights: [1, 1, 2] });
    expect(metrics.gradient.first.inl_lsb).toBeGreaterThan(0);
    expect(warnings.join(' ')).toMatch(/B0 and B1 have one unit each.*No placement on this core comes below/);
  });

  it('an even core of one’s own is honoured, with the reason why the first order is not 0', () => {
    const { floorplan, metrics, warnings, findings } = drawn({
      bits: 6,
      core: { rows: 8, columns: 8 },
      effort: 'quick',
    });
    expect(findings).toEqual([]);
    expect([floorplan.core.rows, floorplan.core.columns]).toEqual([8, 8]);
    expect(metrics.gradient.first.inl_lsb).toBeGreaterThan(0);
    expect(warnings.join(' ')).toMatch(/even side/);
  });
});

describe('a run', () => {
  it('depends on the request alone: not on the steps that its work is cut into', () => {
    const [a, b] = [
      drawn({ bits: 7, effort: 'quick' }, undefined, 1e9),
      drawn({ bits: 7, effort: 'quick' }, undefined, 777),
    ];
    expect(formatFloorplan(a.floorplan)).toBe(formatFloorplan(b.floorplan));
    expect(formatPolygons(a.polygons!)).toBe(formatPolygons(b.polygons!));
  });

  it('can be ended at any moment after its first step', () => {
    const array = resolveArray({ format: 'steelyard/array', version: 1, bits: 6 }, parallelPlate);
    if (!array.ok) throw new Error('unexpected');
    for (const steps of [1, 5, 40, 400]) {
      const run = startPlacement({ array: array.value });
      for (let i = 0; i < steps && run.step(5000); i++);
      const { floorplan, findings, metrics } = run.finish(true);
      expect(findings).toEqual([]);
      expect(floorplan.placement?.status).toBe('interrupted');
      expect(metrics.gradient.first.inl_lsb).toBe(0);
    }
  });

  it('refuses fewer tracks than the wires need, and says how many they need', () => {
    expect(() => drawn({ bits: 6, tracksPerChannel: 1, effort: 'quick' })).toThrow(Infeasible);
    expect(() => drawn({ bits: 6, tracksPerChannel: 1, effort: 'quick' })).toThrow(/Allow \d/);
  });
});

describe('a floorplan that others made', () => {
  const chessboard: Floorplan = {
    format: 'steelyard/floorplan',
    version: 1,
    core: { rows: 4, columns: 4, pitch_um: [1, 1] },
    capacitors: [1, 2, 4, 8].map((units, i) => ({ name: `C${i}`, role: 'bit', weight: units, units })),
    cells: [
      ['C3', 'C2', 'C3', 'C2'],
      ['C1', 'C3', '-', 'C3'],
      ['C3', 'C2', 'C3', 'C2'],
      ['C0', 'C3', 'C1', 'C3'],
    ],
  };

  it('is analysed and drawn with its cells untouched', () => {
    const { floorplan, findings, metrics } = drawFloorplan(chessboard, parallelPlate);
    expect(findings).toEqual([]);
    expect(floorplan.cells).toEqual(chessboard.cells);
    expect(metrics.gradient.first.inl_lsb).toBeGreaterThan(0);
    expect(drawFloorplan(chessboard, parallelPlate, { wired: false }).metrics.core.pitch_um).toEqual([1, 1]);
  });

  it('keeps wires that fit, and is routed anew where they do not', () => {
    const once = drawFloorplan(chessboard, parallelPlate).floorplan;
    const again = drawFloorplan(once, parallelPlate, { keepHookup: true });
    expect(again.notes).toEqual([]);
    expect(formatFloorplan(again.floorplan)).toBe(formatFloorplan(once));
    const cells = once.cells.map((row) => [...row].reverse());
    const edited = drawFloorplan({ ...once, cells }, parallelPlate, { keepHookup: true });
    expect(edited.notes.join(' ')).toMatch(/routed anew/);
    expect(edited.findings).toEqual([]);
  });
});

describe('faults planted in the drawing of a 6-bit array are found, by kind and within a pitch', () => {
  const { polygons } = drawn({ bits: 6, effort: 'quick' });
  for (const [kind, plant] of Object.entries(faults))
    it(kind, () => {
      for (let seed = 1; seed <= 20; seed++) {
        const planted = plant(polygons!, new Random(seed));
        expect(planted, `seed ${seed}`).toBeDefined();
        const findings = checkPolygons(planted!.polygons);
        expect(
          findings.some((finding) => names(finding, planted!)),
          `seed ${seed}: ${JSON.stringify({ ...planted, polygons: 0 })} ${JSON.stringify(findings.slice(0, 5))}`,
        ).toBe(true);
      }
    });
});
