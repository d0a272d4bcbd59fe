import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { Infeasible } from '../../src/core/problem.js';
import { misfit } from '../../src/hookup/misfit.js';
import { type Placed, planHookup, type Plan } from '../../src/hookup/plan.js';
import { placeOnTracks } from '../../src/hookup/track-order.js';
import type { Capacitor } from '../../src/spec/floorplan.js';

type Cells = readonly (readonly string[])[];

const named = (cells: Cells): Capacitor[] =>
  [...new Set(cells.flat())]
    .filter((name) => name !== '-')
    .sort()
    .map((name) => {
      const units = cells.flat().filter((cell) => cell === name).length;
      return { name, role: 'bit', weight: units, units };
    });

const placed = (cells: Cells): Placed => ({ cells, capacitors: named(cells), ringUnits: [], rings: 1 });

interface Cost {
  tracks: number;
  trunks: number;
  crossovers: number;
}
const difference = (a: Cost, b: Cost) => a.tracks - b.tracks || a.trunks - b.trunks || a.crossovers - b.crossovers;

function permutations<T>(items: readonly T[]): T[][] {
  if (items.length === 0) return [[]];
  return items.flatMap((item, i) =>
    permutations([...items.slice(0, i), ...items.slice(i + 1)]).map((rest) => [item, ...rest]),
  );
}

/** Stub by stub from the picture: a stub passes a foreign track on its way, and the trunk there has begun above its level. */
function countCrossovers(cells: Cells, side: (row: number, column: number) => string, channels: Cells) {
  interface Stub {
    net: string;
    channel: number;
    level: number;
    fromLeft: boolean;
  }
  const stubs: Stub[] = [];
  cells.forEach((row, r) =>
    row.forEach((net, c) => {
      if (net === '-') return;
      const right = side(r, c) === 'R';
      stubs.push({ net, channel: right ? c + 1 : c, level: 10 * r + (right ? 7 : 3), fromLeft: right });
    }),
  );
  let count = 0;
  for (const stub of stubs) {
    const list = channels[stub.channel];
    const own = list.indexOf(stub.net);
    list.forEach((net, track) => {
      if (net === stub.net || net === 'VSS') return;
      const passes = stub.fromLeft ? track < own : track > own;
      const begins = Math.min(...stubs.filter((s) => s.channel === stub.channel && s.net === net).map((s) => s.level));
      if (passes && begins < stub.level) count++;
    });
  }
  return count;
}

function costOf(cells: Cells, plan: Plan): Cost {
  const lists = plan.channels.map((list) => list.filter((net) => net !== 'VSS'));
  return {
    tracks: Math.max(1, ...lists.map((list) => list.length)),
    trunks: lists.flat().length,
    crossovers: countCrossovers(cells, (r, c) => plan.sides[r][c], plan.channels),
  };
}

/** Every side for every (column, net), every order in every channel. */
function bruteForce(cells: Cells): Cost {
  const columns = cells[0].length;
  const pairs = [...new Set(cells.flatMap((row) => row.map((net, c) => `${c} ${net}`)))];
  let best: Cost = { tracks: Infinity, trunks: Infinity, crossovers: Infinity };
  for (let code = 0; code < 1 << pairs.length; code++) {
    const sideOf = new Map(pairs.map((pair, i) => [pair, (code >> i) & 1 ? 'R' : 'L']));
    const side = (r: number, c: number) => sideOf.get(`${c} ${cells[r][c]}`) ?? 'L';
    const nets = Array.from({ length: columns + 1 }, () => new Set<string>());
    for (const [pair, s] of sideOf) nets[Number(pair.split(' ')[0]) + (s === 'R' ? 1 : 0)].add(pair.split(' ')[1]);
    const tracks = Math.max(1, ...nets.map((set) => set.size));
    const trunks = nets.reduce((sum, set) => sum + set.size, 0);
    if (tracks > best.tracks || (tracks === best.tracks && trunks > best.trunks)) continue;
    let crossovers = 0;
    for (let j = 0; j <= columns; j++) {
      const here = cells.map((row, r) => row.map((net, c) => (c + (side(r, c) === 'R' ? 1 : 0) === j ? net : '-')));
      const orders = permutations([...nets[j]]);
      crossovers += Math.min(
        ...orders.map((order) =>
          countCrossovers(
            here,
            side,
            nets.map((_, i) => (i === j ? order : [])),
          ),
        ),
      );
    }
    const cost = { tracks, trunks, crossovers };
    if (difference(cost, best) < 0) best = cost;
  }
  return best;
}

const smallCells = fc
  .record({
    rows: fc.integer({ min: 1, max: 4 }),
    columns: fc.integer({ min: 1, max: 3 }),
    nets: fc.integer({ min: 1, max: 4 }),
  })
  .chain(({ rows, columns, nets }) => {
    const cell = fc.integer({ min: 0, max: nets - 1 }).map((net) => `B${net}`);
    return fc.array(fc.array(cell, { minLength: columns, maxLength: columns }), { minLength: rows, maxLength: rows });
  });

describe('planHookup', () => {
  it('reaches the optimum of plain enumeration, and claims a proof only there', () => {
    let proofs = 0;
    fc.assert(
      fc.property(smallCells, (cells) => {
        const plan = planHookup(placed(cells));
        const cost = costOf(cells, plan);
        const least = bruteForce(cells);
        expect([cost.tracks, cost.trunks]).toEqual([least.tracks, least.trunks]);
        expect(cost.crossovers).toBeGreaterThanOrEqual(least.crossovers);
        if (!plan.proved) return;
        expect(cost.crossovers).toBe(least.crossovers);
        proofs++;
      }),
      { numRuns: 120, seed: 7 },
    );
    expect(proofs).toBeGreaterThan(60);
  });

  it('fits its own cells, and says why another placement does not', () => {
    fc.assert(
      fc.property(smallCells, (cells) => {
        const { sides, channels } = planHookup(placed(cells));
        const buses = named(cells).map(({ name }) => name);
        expect(misfit(placed(cells), { sides, channels, buses })).toBeUndefined();
        const renamed = cells.map((row) => row.map((name) => (name === 'B0' ? 'B9' : name)));
        if (cells.flat().includes('B0')) expect(misfit(placed(renamed), { sides, channels, buses })).toMatch(/B0/);
      }),
      { numRuns: 100, seed: 3 },
    );
  });

  it('gives a fill dummy a VSS line, with one more track where every track is a trunk', () => {
    const cells = [
      ['B0', 'B1', 'B0'],
      ['B1', '-', 'B1'],
      ['B0', 'B1', 'B0'],
    ];
    const { sides, channels } = planHookup(placed(cells));
    expect(misfit(placed(cells), { sides, channels, buses: ['B0', 'B1'] })).toBeUndefined();
  });

  it('refuses too few tracks with the number that suffices', () => {
    const cells = [['B0'], ['B1'], ['B2']];
    expect(planHookup(placed(cells)).channels[0]).toHaveLength(2);
    expect(() => planHookup(placed(cells), 1)).toThrow(Infeasible);
    expect(() => planHookup(placed(cells), 1)).toThrow(/Allow 2/);
    expect(planHookup(placed(cells), 5).channels[0]).toHaveLength(5);
  });

  it('uses the near tracks', () => {
    const left = { net: 'a', fromLeft: [1, 3], fromRight: [] };
    const right = { net: 'b', fromLeft: [], fromRight: [2] };
    expect(placeOnTracks([left, right], 4)).toEqual([0, 3]);
    expect(() => placeOnTracks([left, right], 1)).toThrow(RangeError);
  });
});
