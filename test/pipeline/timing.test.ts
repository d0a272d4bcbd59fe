import { describe, expect, it } from 'vitest';
import { summaryOf } from '../../src/cli/summary.js';
import { compare } from '../../src/comparison/compare.js';
import { analyseMismatch } from '../../src/linearity/mismatch.js';
import { totalFigures } from '../../src/linearity/total.js';
import { drawFloorplan } from '../../src/pipeline.js';
import { drawn, parallelPlate } from './drawn.js';

const summary = (placed: ReturnType<typeof drawn>, label: string) =>
  summaryOf(placed, [], { columns: 80, colour: false }).find((line) => line.startsWith(label));

const bare = drawn({ bits: 4, effort: 'quick' });

describe('delays in the metrics', () => {
  const driven = drawn({ bits: 4, effort: 'quick', drive: { switch_ohm: [800, 400, 200, 100], reference_ohm: 10 } });

  it('count the wires alone where there is no drive', () => {
    const bits = bare.metrics.parasitic!.bits;
    for (const { elmore_ps, settling_ps } of bits) {
      expect(elmore_ps).toBeGreaterThan(0);
      expect(settling_ps).toBeUndefined();
    }
    expect(summary(bare, 'delay')).toMatch(
      /^delay {9}Elmore [\d.]+ ps through the wires of B3, the slowest, with TOP held$/,
    );
    expect(summary(bare, 'settling')).toBeUndefined();
  });

  it('count switches and reference, each with all that hangs on its bit', () => {
    const { bits } = driven.metrics.parasitic!;
    const { pairs } = driven.extraction!.coupling;
    bits.forEach(({ name, elmore_ps = 0, settling_ps = 0 }, bit) => {
      const load = pairs.reduce((sum, { a, b, fF }) => (a === name || b === name ? sum + fF : sum), 0);
      const alone = bare.metrics.parasitic!.bits[bit].elmore_ps!;
      expect(elmore_ps).toBeCloseTo(alone + ((800 / 2 ** bit + 10) * load) / 1000, 9);
      expect(settling_ps / elmore_ps).toBeCloseTo((bit + 1) * Math.LN2, 12);
    });
    expect(summary(driven, 'settling')).toMatch(
      /^settling {6}[\d.]+ ps for B3, the slowest, Elmore delay [\d.]+ ps with TOP held$/,
    );
    expect(summary(driven, 'delay')).toBeUndefined();
  });

  it('are not there without wires, nor where resistances are not stated', () => {
    const { metrics, circuit } = drawn({ bits: 4, effort: 'quick' }, [7.2, 5.7]);
    expect(metrics).not.toHaveProperty('parasitic');
    expect(metrics).not.toHaveProperty('total');
    expect(circuit).toBeUndefined();
    const layers = parallelPlate.layers.map(({ sheetResistance_ohm: _, ...layer }) => layer);
    const unstated = drawFloorplan(bare.floorplan, { ...parallelPlate, layers }, { keepHookup: true });
    for (const bit of unstated.metrics.parasitic!.bits) expect(bit).not.toHaveProperty('elmore_ps');
    expect(summary(unstated, 'delay')).toBeUndefined();
  });
});

describe('all errors together in the metrics', () => {
  it('are those of the placement with its coupling', () => {
    const { floorplan, metrics, parasitics } = bare;
    const gradient = floorplan.array!.gradient!;
    const mismatch = analyseMismatch(floorplan, floorplan.array!.mismatch!);
    expect(metrics.total).toEqual(totalFigures({ ...floorplan, gradient, coupling: parasitics!.excess, mismatch }));
    const without = totalFigures({ ...floorplan, gradient, coupling: new Map(), mismatch });
    expect(metrics.total!.inl3Sigma_lsb).toBeGreaterThan(without.inl3Sigma_lsb);
    expect(metrics.total!.inl3Sigma_lsb).toBeLessThanOrEqual(without.inl3Sigma_lsb + metrics.parasitic!.inl_lsb + 1e-9);
    expect(summary(bare, 'together')).toMatch(/^together {6}INL [\d.]+ LSB, DNL [\d.]+ LSB at the worst code: /);
  });

  it('are a figure of the comparison where wires are drawn', () => {
    const { floorplan, metrics } = bare;
    const { floorplans, best } = compare([{ floorplan }, { floorplan, drawn: metrics }]);
    expect(floorplans.map(({ total }) => total?.inl3Sigma_lsb)).toEqual([
      undefined,
      expect.closeTo(metrics.total!.inl3Sigma_lsb, 10),
    ]);
    expect(best['total.inl3Sigma_lsb']).toBe(floorplans[1].name);
  });
});
