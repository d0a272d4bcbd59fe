import { describe, expect, it } from 'vitest';
import { Random } from '../../src/core/random.js';
import { drawFloorplan, startPlacement } from '../../src/pipeline.js';
import { resolveArray } from '../../src/spec/resolve.js';
import { drawn, parallelPlate } from './drawn.js';

describe('second order proved', () => {
  // Zero first order is enough where the bound is met, or where four capacitors are all there are.
  it.each([
    [2, undefined, 'zero-first-order'],
    [3, undefined, 'zero-first-order'],
    [4, [1, 1], 'zero-first-order'],
    [5, [1, 1], 'point-reflected'],
    [5, undefined, 'point-reflected'],
    [6, [1, 1], 'point-reflected'],
    [6, [7.2, 5.7], 'point-reflected'],
    [6, undefined, 'point-reflected'],
  ] as const)('%d bits, pitch %o, emphasis gradient: of all %s placements', (bits, pitch, wanted) => {
    const { floorplan, metrics, findings } = drawn({ bits, emphasis: 'gradient' }, pitch && [...pitch]);
    expect(metrics.status).toBe('proved');
    expect(floorplan.placement).toMatchObject({ status: 'proved', proof: { class: wanted } });
    expect(findings).toEqual([]);
    if (bits === 6 && pitch?.[0] === 1) expect(metrics.gradient.second.inl_lsb).toBeCloseTo(0.005769, 6);
  });

  it('not what was searched for something else, nor on another pitch, nor with two pairs exchanged', () => {
    const balanced = drawn({ bits: 6, emphasis: 'balanced', effort: 'quick' });
    expect(balanced.floorplan.placement?.proof).toBeUndefined();
    const { floorplan } = drawn({ bits: 6, emphasis: 'gradient' }, [1, 1]);
    const { proof: _, ...placement } = floorplan.placement!;
    const again = { ...floorplan, placement: { ...placement, status: 'effort-spent' as const } };
    const known = { core: floorplan.core, squared: 52835328000000000000n };
    const class_ = (of: typeof again) =>
      drawFloorplan(of, parallelPlate, { wired: false, known }).floorplan.placement?.proof?.class;
    expect(class_(again)).toBe('point-reflected');
    expect(class_({ ...again, core: { ...again.core, pitch_um: [1, 1.001] } })).toBeUndefined();
    // B3 and B5 trade pairs.
    const flat = again.cells.flat();
    const [a, b] = [flat.indexOf('B3'), flat.indexOf('B5')];
    for (const [cell, name] of [[a, 'B5'], [b, 'B3']] as const) flat[cell] = flat[flat.length - 1 - cell] = name; // prettier-ignore
    const { columns } = again.core;
    const cells = again.cells.map((_, row) => flat.slice(row * columns, (row + 1) * columns));
    expect(class_({ ...again, cells })).toBeUndefined();
  });

  it('the same however the work is cut; an interrupted run has a placement and proves nothing', () => {
    const array = resolveArray({ format: 'steelyard/array', version: 1, bits: 6, emphasis: 'gradient' }, parallelPlate);
    if (!array.ok) throw new Error('an array');
    const request = { array: array.value, floorplanOnly: { pitch_um: [1, 1] as const } };
    const whole = drawn({ bits: 6, emphasis: 'gradient' }, [1, 1], 1e12);
    const random = new Random(3, 0);
    const run = startPlacement(request);
    for (let more = true; more;) {
      const { placement } = run.finish(true).floorplan;
      expect(placement).toMatchObject({ status: 'interrupted' });
      expect(placement?.proof).toBeUndefined();
      const progress = run.progress;
      more = run.step(1 + random.below(40_000));
      expect(run.progress).toBeGreaterThanOrEqual(progress);
    }
    expect(run.finish(false).floorplan).toEqual(whole.floorplan);
  });
});
