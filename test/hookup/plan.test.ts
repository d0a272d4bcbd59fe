import { describe, expect, it } from 'vitest';
import { Infeasible } from '../../src/core/problem.js';
import { misfit } from '../../src/hookup/misfit.js';
import { type Placed, planHookup } from '../../src/hookup/plan.js';
import { bestOfAll, costOf, lengths } from './every-hookup.js';
import { bestByProgramme, loadSolver } from './integer-programme.js';
import { placed, smallPlacement } from './small-placements.js';

const planOrNothing = (placement: Placed, tracks?: number) => {
  try {
    return planHookup(placement, lengths, tracks);
  } catch (error) {
    if (error instanceof Infeasible) return null;
    throw error;
  }
};

describe('planHookup', () => {
  it('is the best of all hookups, each unit on either side, on as few tracks as can be or on as many as asked for', () => {
    let refused = 0;
    for (let seed = 0; seed < 160; seed++) {
      const placement = smallPlacement(seed, { rows: 4, columns: 4, nets: 4, units: 10 });
      const tracks = seed % 2 === 0 ? 1 + ((seed / 2) % 3) : undefined;
      const plan = planOrNothing(placement, tracks);
      expect(plan && costOf(placement, plan)).toEqual(bestOfAll(placement, tracks));
      if (plan === null) refused++;
      else {
        const { trunks, crossovers } = costOf(placement, plan);
        const others = placement.capacitors.length - placement.capacitors.filter(({ role }) => role === 'bit').length;
        expect(plan.proved).toBe(true);
        expect(plan.bound).toEqual({ tracks: plan.channels[0].length, trunks: trunks - others, crossovers });
      }
    }
    expect(refused).toBeGreaterThan(5);
  });

  it('is what an integer programme finds, and none fits fewer tracks', async () => {
    const highs = await loadSolver();
    for (let seed = 0; seed < 40; seed++) {
      const placement = smallPlacement(seed, { rows: 5, columns: 4, nets: 5, units: 16 });
      const plan = planHookup(placement, lengths);
      const { tracks, ...cost } = costOf(placement, plan);
      expect(plan.proved).toBe(true);
      expect(cost).toEqual(bestByProgramme(highs, placement, tracks));
      if (tracks > 1) expect(bestByProgramme(highs, placement, tracks - 1)).toBeNull();
    }
  });

  it('fits its own cells, and says why another placement does not', () => {
    for (let seed = 0; seed < 100; seed++) {
      const placement = smallPlacement(seed, { rows: 5, columns: 5, nets: 5, units: 25 });
      const { cells, capacitors } = placement;
      const { sides, channels } = planHookup(placement, lengths);
      const buses = capacitors.map(({ name }) => name);
      expect(misfit(placement, { sides, channels, buses })).toBeUndefined();
      if (!cells.flat().includes('B0')) continue;
      const renamed = cells.map((row) => row.map((name) => (name === 'B0' ? 'B9' : name)));
      expect(misfit({ ...placement, cells: renamed }, { sides, channels, buses })).toMatch(/B0|B9/);
    }
  });

  it('gives a fill dummy a VSS line, with one more track where every track is a trunk', () => {
    const cells = [
      ['B0', 'B1', 'B0'],
      ['B1', '-', 'B1'],
      ['B0', 'B1', 'B0'],
    ];
    const { sides, channels } = planHookup(placed(cells), lengths);
    expect(misfit(placed(cells), { sides, channels, buses: ['B0', 'B1'] })).toBeUndefined();
  });

  it('refuses too few tracks with the number that suffices', () => {
    const cells = [['B0'], ['B1'], ['B2']];
    expect(planHookup(placed(cells), lengths).channels[0]).toHaveLength(2);
    expect(() => planHookup(placed(cells), lengths, 1)).toThrow(Infeasible);
    expect(() => planHookup(placed(cells), lengths, 1)).toThrow(/Allow 2/);
    expect(planHookup(placed(cells), lengths, 5).channels[0]).toHaveLength(5);
  });

  it('hooks a net up on both sides of a column where that saves crossovers', async () => {
    const highs = await loadSolver();
    const placement = smallPlacement(251, { rows: 5, columns: 5, nets: 3, units: 20 });
    const plan = planHookup(placement, lengths);
    const { cells } = placement;
    const split = cells[0].some((_, c) =>
      cells.some((row, r) =>
        cells.some(
          (other, s) => row[c] !== '-' && other[c] === row[c] && plan.sides[r][c] === 'L' && plan.sides[s][c] === 'R',
        ),
      ),
    );
    expect(split).toBe(true);
    const { tracks, ...cost } = costOf(placement, plan);
    expect(cost).toEqual(bestByProgramme(highs, placement, tracks));
  });

  it('claims no proof where a column has too many nets, and still serves all of them', () => {
    const nets = 17;
    const cells = Array.from({ length: nets + 1 }, (_, r) =>
      Array.from({ length: 4 }, (_, c) => (r === nets ? '-' : `B${(r * (c + 3)) % nets}`)),
    );
    const placement = placed(cells);
    const { sides, channels, proved, bound } = planHookup(placement, lengths);
    const buses = placement.capacitors.map(({ name }) => name);
    expect(misfit(placement, { sides, channels, buses })).toBeUndefined();
    expect(proved).toBe(false);
    // Every net stands in all four columns: two channels each, nine nets a channel at least.
    expect(bound).toEqual({ tracks: 9, trunks: 2 * nets, crossovers: 0 });
    expect(channels[0].length).toBeLessThanOrEqual(18);
    expect(() => planHookup(placement, lengths, 8)).toThrow(/needs more than the 8 tracks/);
  });
});
