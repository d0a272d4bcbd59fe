import { describe, expect, it } from 'vitest';
import type { CostTerm, Deal } from '../../src/array/cost-term.js';
import { candidateCores } from '../../src/array/core-grid.js';
import { Random } from '../../src/core/random.js';
import { analyseGradient } from '../../src/linearity/analyse-gradient.js';
import { firstOrderTerm, secondOrderTerm } from '../../src/linearity/cost-terms.js';
import type { DealtNet } from '../../src/placement/dealing.js';
import { dealBlocks } from '../../src/placement/dealing.js';
import { workFor } from '../../src/placement/effort.js';
import type { Best, SearchOptions } from '../../src/placement/search.js';
import { Search, SearchStart } from '../../src/placement/search.js';
import { binaryNets, columnNets, firstOrder, leastFirstOrder, netsOfBlocks, recounted, weightedNets } from './brute.js';

const SQUARE = [1, 1] as const;

function optionsFor(rows: number, columns: number, nets: DealtNet[], more: Partial<SearchOptions> = {}): SearchOptions {
  return {
    deals: (start) => dealBlocks({ rows, columns, nets, random: new Random(5, start) }),
    terms: (deal) => [{ term: secondOrderTerm(deal, SQUARE), weight: 1 }],
    starts: 3,
    workPerStart: 20_000,
    seed: 5,
    ...more,
  };
}

function finished(options: SearchOptions, step = 100_000): Search {
  const search = new Search(options);
  while (search.step(step));
  return search;
}

/** Second order over its lower bound, as the metrics count them. */
function secondOverBound(
  rows: number,
  columns: number,
  nets: DealtNet[],
  best: Best,
): { ratio: number; first: number } {
  const names = [...nets.map(({ name }) => name), '-'];
  const cells = Array.from({ length: rows }, (_, row) =>
    Array.from(best.netOfCell.subarray(row * columns, (row + 1) * columns), (net) => names[net]),
  );
  const capacitors = nets.map((net) => ({ ...net, role: 'bit' as const }));
  const { first, second } = analyseGradient({ core: { rows, columns, pitch_um: SQUARE }, capacitors, cells });
  return { ratio: second.inl_lsb / (second.lowerBound_inl_lsb ?? NaN), first: first.inl_lsb };
}

describe('Search', () => {
  it('does not depend on how the work is cut into steps, nor on questions in between', () => {
    const options = optionsFor(7, 9, binaryNets(6), {
      terms: (deal) => [
        { term: secondOrderTerm(deal, SQUARE), weight: 1 },
        { term: recounted('column nets', deal, columnNets), weight: 1e-7 },
      ],
      workPerStart: 3000,
    });
    const whole = finished(options).best();
    for (const step of [1, 7, 1000]) {
      const search = new Search(options);
      let n = 0;
      while (search.step(step)) if (++n % 5 === 0) search.best();
      const best = search.best();
      expect([best.start, best.cost]).toEqual([whole.start, whole.cost]);
      expect([...best.netOfCell]).toEqual([...whole.netOfCell]);
    }
  });

  it('another seed gives another placement', () => {
    const placed = (seed: number): number[] => [
      ...finished(optionsFor(7, 9, binaryNets(6), { seed })).best().netOfCell,
    ];
    expect(placed(1)).not.toEqual(placed(2));
  });

  it('has an answer from the beginning, which never gets worse, and tells its progress', () => {
    const search = new Search(optionsFor(7, 9, binaryNets(6)));
    let cost = search.best().cost;
    let progress = search.progress;
    expect(progress).toBe(0);
    while (search.step(10_000)) {
      expect(search.status).toBe('running');
      expect(search.progress).toBeGreaterThanOrEqual(progress);
      progress = search.progress;
    }
    expect(search.best().cost).toBeLessThanOrEqual(cost);
    cost = search.best().cost;
    expect(search.status).toBe('effort-spent');
    expect(search.progress).toBe(1);
    expect(search.work).toBeGreaterThan(3 * 17_000);
    expect(search.work).toBeLessThanOrEqual(3 * 20_000);
    expect(search.step(1000)).toBe(false);
    expect(search.best().cost).toBe(cost);
  });

  it('takes the least cost, of equal ones the lower start', () => {
    const constant = (deal: Deal): CostTerm => recounted('constant', deal, () => 1);
    const options = optionsFor(3, 5, binaryNets(4), {
      terms: (deal) => [{ term: constant(deal), weight: 1 }],
      workPerStart: 200,
    });
    expect(finished(options).best().start).toBe(0);
    const falling = optionsFor(3, 5, binaryNets(4), { workPerStart: 200, starts: 6 });
    const each = Array.from({ length: 6 }, (_, n) => finished({ ...falling, starts: n + 1 }).best());
    const costs = each.map(({ cost }) => cost);
    expect(costs).toEqual([...costs].sort((a, b) => b - a));
  });

  it('leaves out starts of higher numbers once it is told that nothing is better', () => {
    const asked: number[] = [];
    const search = finished(
      optionsFor(7, 9, binaryNets(6), {
        starts: 5,
        stopWhen: ({ start }) => {
          asked.push(start);
          return asked.length === 2;
        },
      }),
    );
    expect(asked.length).toBe(2);
    expect(search.status).toBe('stopped');
    expect(search.best().start).toBeLessThan(2);
  });

  it('is the same whoever runs its starts, and in whatever order they come back', () => {
    for (const stopAt of [Infinity, 2]) {
      const asked: number[] = [];
      const options = optionsFor(7, 9, binaryNets(6), {
        starts: 5,
        workPerStart: 3000,
        stopWhen: () => asked.push(0) > stopAt,
      });
      const alone = finished(options);
      for (const order of [
        [4, 3, 2, 1],
        [2, 4, 1, 3],
        [1, 2, 3, 4],
      ]) {
        asked.length = 0;
        const search = new Search(options);
        search.step(1);
        expect([0, 1, 2, 3, 4].map(() => search.take())).toEqual([1, 2, 3, 4, undefined]);
        expect(search.waiting).toBe(false);
        const elsewhere = order.map((start) => new SearchStart(options, start));
        for (const start of elsewhere) start.step(700);
        search.offer(elsewhere[0].result(), false);
        expect(search.best().cost).toBeLessThanOrEqual(elsewhere[0].result().cost);
        for (const start of elsewhere.slice(0, 2)) {
          while (!start.done) start.step(1e6);
          search.offer(start.result(), true);
        }
        while (search.step(1000) && !search.waiting);
        for (const start of elsewhere.slice(2)) {
          while (!start.done) start.step(1e6);
          search.offer(structuredClone(start.result()), true);
        }
        expect([search.status, search.step(1), search.waiting]).toEqual([alone.status, false, false]);
        expect(search.work).toBe(alone.work);
        expect(search.best()).toEqual(alone.best());
      }
    }
  });

  it('is done at once where there is nothing to exchange, or nothing to gain', () => {
    const line = finished(optionsFor(1, 3, binaryNets(2)));
    expect([line.status, line.work]).toEqual(['effort-spent', 0]);
    expect([...line.best().netOfCell]).toEqual([1, 0, 1]);
    const free = finished(
      optionsFor(7, 9, binaryNets(6), { terms: (deal) => [{ term: firstOrderTerm(deal, SQUARE), weight: 1 }] }),
    );
    expect([free.status, free.work]).toEqual(['stopped', 0]);
    expect(() => new Search(optionsFor(7, 9, binaryNets(6), { starts: 0 }))).toThrow(RangeError);
  });

  it('tells every term of every exchange: their values stay those of a recount', () => {
    const kept: { deal: Deal; term: CostTerm }[] = [];
    const search = finished(
      optionsFor(7, 9, binaryNets(6), {
        terms: (deal) => {
          const term = secondOrderTerm(deal, SQUARE);
          kept.push({ deal, term });
          return [{ term, weight: 1 }];
        },
      }),
    );
    expect(kept.length).toBe(3);
    for (const { deal, term } of kept) expect(term.value()).toBeCloseTo(secondOrderTerm(deal, SQUARE).value(), 12);
    const best = search.best();
    expect(best.cost).toBeLessThanOrEqual(Math.min(...kept.map(({ term }) => term.value())));
    expect(best.cost).toBe(secondOrderTerm(best.dealing.deal, SQUARE).value());
    expect([...best.netOfCell]).toEqual(netsOfBlocks(best.dealing.deal));
  });

  it('swapping twice is nothing', () => {
    const { deal, group } = dealBlocks({
      rows: 5,
      columns: 13,
      nets: weightedNets([1, 2, 3, 5, 9, 16, 29]),
      random: new Random(3),
    });
    const term = secondOrderTerm(deal, SQUARE);
    const { netOfBlock } = deal;
    const before = term.value();
    const nets = [...netOfBlock];
    const exchange = (a: number, b: number): void => {
      term.apply(a, b);
      [netOfBlock[a], netOfBlock[b]] = [netOfBlock[b], netOfBlock[a]];
    };
    for (let a = 0; a < nets.length; a++) {
      for (let b = 0; b < a; b++) {
        if (group[a] !== group[b]) continue;
        const delta = term.delta(a, b);
        exchange(a, b);
        expect(term.value()).toBeCloseTo(before + delta, 15);
        exchange(a, b);
        expect(term.value()).toBe(before);
      }
    }
    expect([...netOfBlock]).toEqual(nets);
  });

  it('comes near the lower bound of the second order with the first order exactly 0', () => {
    for (const bits of [6, 8, 10, 12]) {
      const nets = binaryNets(bits);
      const [{ rows, columns }] = candidateCores(
        nets.map(({ units }) => units),
        0,
        SQUARE,
      );
      const { starts, workPerStart } = workFor('quick', rows * columns);
      const best = finished(optionsFor(rows, columns, nets, { starts, workPerStart })).best();
      const { ratio, first } = secondOverBound(rows, columns, nets, best);
      expect(first).toBe(0);
      expect(ratio).toBeGreaterThanOrEqual(1 - 1e-12);
      expect(ratio).toBeLessThanOrEqual(1.25);
    }
  });

  it('finds the least first order where it cannot be 0', () => {
    for (const [rows, columns, weights] of [
      [2, 2, [1, 1, 2]],
      [3, 3, [1, 1, 2]],
      [2, 3, [1, 2, 3]],
      [2, 4, [1, 2, 4]],
      [3, 3, [1, 1, 1, 5]],
      [1, 5, [1, 3]],
    ] as const) {
      for (const pitch of [SQUARE, [3, 2]] as const) {
        const nets = weightedNets(weights);
        const search = finished({
          deals: (start) => dealBlocks({ rows, columns, nets, random: new Random(1, start) }),
          terms: (deal) => [{ term: recounted('first order', deal, (placed) => firstOrder(placed, pitch)), weight: 1 }],
          starts: 2,
          workPerStart: 3000,
          seed: 1,
        });
        expect(search.best().cost).toBeCloseTo(leastFirstOrder(rows, columns, nets, pitch), 15);
      }
    }
  });
});

describe('workFor', () => {
  it('grows with effort and with units', () => {
    const total = (effort: 'quick' | 'normal' | 'thorough', units: number): number => {
      const { starts, workPerStart } = workFor(effort, units);
      expect(Number.isInteger(starts) && Number.isInteger(workPerStart)).toBe(true);
      return starts * workPerStart;
    };
    expect(total('quick', 1023)).toBeLessThan(total('normal', 1023));
    expect(total('normal', 1023)).toBeLessThan(total('thorough', 1023));
    expect(total('normal', 255)).toBeLessThan(total('normal', 1023));
  });
});
