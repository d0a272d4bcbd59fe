import fc from 'fast-check';
import { expect, it } from 'vitest';
import { Random } from '../../src/core/random.js';
import { columnLimitTerm } from '../../src/hookup/column-limit.js';
import { dealBlocks, netsOfCells } from '../../src/placement/dealing.js';

const nets = [1, 2, 4, 8, 10].map((units, k) => ({ name: `B${k}`, weight: units, units }));
const [rows, columns] = [5, 7];

const asked = fc.record({
  seed: fc.integer({ min: 0, max: 1e6 }),
  most: fc.integer({ min: 1, max: 5 }),
  forFill: fc.integer({ min: 1, max: 2 }),
  spare: fc.boolean(),
});

it('counts what is beyond the limit as the cells have it, and the same swap again undoes it', () => {
  fc.assert(
    fc.property(asked, ({ seed, ...limit }) => {
      const random = new Random(seed);
      const dealing = dealBlocks({ rows, columns, nets, random });
      const { deal, group } = dealing;
      const term = columnLimitTerm(deal, limit);
      const recount = () => {
        const net = netsOfCells(dealing, deal.netOfBlock);
        const trunks = Array.from({ length: columns }, (_, c) => {
          const held = new Set(Array.from({ length: rows }, (_, r) => net[r * columns + c]));
          return held.size + (held.has(nets.length) ? limit.forFill - 1 : 0);
        });
        const over = trunks.reduce((sum, count) => sum + Math.max(0, count - limit.most), 0);
        return over + (limit.spare && trunks.every((count) => count >= limit.most) ? 1 : 0);
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
