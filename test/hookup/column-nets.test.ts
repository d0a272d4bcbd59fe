import fc from 'fast-check';
import { expect, it } from 'vitest';
import { Random } from '../../src/core/random.js';
import { columnNets, columnNetsTerm } from '../../src/hookup/column-nets.js';
import { dealBlocks, netsOfCells } from '../../src/placement/dealing.js';

const nets = [1, 2, 4, 8, 16].map((units, k) => ({ name: `B${k}`, weight: units, units }));

it('follows swaps as a recount of the cells does, and the same swap again undoes it', () => {
  fc.assert(
    fc.property(fc.integer({ min: 0, max: 1e6 }), (seed) => {
      const random = new Random(seed);
      const dealing = dealBlocks({ rows: 5, columns: 7, nets, random });
      const { deal, group } = dealing;
      const term = columnNetsTerm(deal);
      const recount = () => {
        const net = netsOfCells(dealing, deal.netOfBlock);
        const cells = Array.from({ length: 5 }, (_, r) =>
          Array.from({ length: 7 }, (_, c) => nets[net[r * 7 + c]]?.name ?? '-'),
        );
        return columnNets(cells, new Set(nets.map(({ name }) => name)));
      };
      expect(term.value()).toBe(recount());
      for (let i = 0; i < 30; i++) {
        const a = random.below(group.length);
        const b = random.below(group.length);
        if (group[a] !== group[b]) continue;
        const before = term.value();
        const delta = term.delta(a, b);
        expect(term.value()).toBe(before);
        term.apply(a, b);
        [deal.netOfBlock[a], deal.netOfBlock[b]] = [deal.netOfBlock[b], deal.netOfBlock[a]];
        expect(term.value()).toBe(before + delta);
        expect(term.value()).toBe(recount());
        expect(term.delta(a, b)).toBe(0 - delta);
      }
    }),
    { numRuns: 60, seed: 11 },
  );
});
