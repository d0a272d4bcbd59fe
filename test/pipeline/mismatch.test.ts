import { describe, expect, it } from 'vitest';
import { summaryOf } from '../../src/cli/summary.js';
import { analyseMismatch } from '../../src/linearity/mismatch.js';
import { drawFloorplan } from '../../src/pipeline.js';
import { placeByRule } from '../../src/placement/published-rules.js';
import { drawn, parallelPlate } from './drawn.js';

describe('random mismatch in the metrics', () => {
  const own = { localSigma_percent: 0.3, correlatedSigma_percent: 0.2, correlationLength_um: 25 };

  it("is the array's own, in its files and its summary", () => {
    const placed = drawn({ bits: 4, effort: 'quick', mismatch: own });
    const { floorplan, metrics } = placed;
    expect(floorplan.array?.mismatch).toEqual(own);
    expect(metrics.mismatch).toEqual(analyseMismatch(floorplan, own).figures);
    const line = summaryOf(placed, [], { columns: 80, colour: false }).find((each) => each.startsWith('mismatch'));
    expect(line).toMatch(
      /^mismatch {6}sigma INL 0\.00\d+ LSB, DNL 0\.0\d+ LSB at the worst code; the placement alone: /,
    );
  });

  it("is the technology's where the array says nothing, whatever the placement came from", () => {
    // 0.44 % um over the root of 4.4 x 4.4 um.
    const expected = { localSigma_percent: 0.1, correlatedSigma_percent: 0.05, correlationLength_um: 60 };
    const { floorplan, metrics } = drawn({ bits: 4, effort: 'quick' });
    expect(metrics.mismatch).toEqual(analyseMismatch(floorplan, expected).figures);
    const spiral = placeByRule('spiral', 4, [1, 1]);
    const { metrics: ofRule } = drawFloorplan(spiral, parallelPlate, { wired: false });
    expect(ofRule.mismatch).toEqual(analyseMismatch(spiral, expected).figures);
    expect(ofRule).not.toHaveProperty('status');
  });

  it('grows with the root of the units where units are independent', () => {
    const alone = { localSigma_percent: 1, correlatedSigma_percent: 0, correlationLength_um: 0 };
    const { mismatch } = drawn({ bits: 6, effort: 'quick', mismatch: alone }, [7.2, 5.7]).metrics;
    expect(mismatch?.dnlSigma_lsb).toBeCloseTo(0.01 * Math.sqrt(63 - 1 / 63), 12);
    expect(mismatch?.inlSigma_lsb).toBeCloseTo(0.01 * Math.sqrt((31 * 32) / 63), 12);
  });
});
