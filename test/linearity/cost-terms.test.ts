import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import type { Deal } from '../../src/array/cost-term.js';
import { analyseGradient } from '../../src/linearity/analyse-gradient.js';
import { firstOrderTerm, secondOrderTerm } from '../../src/linearity/cost-terms.js';
import { secondOrderInl } from '../../src/linearity/exact-inl.js';
import { endPointErrors, length, nuclearNorm } from './brute-force.js';
import type { Plan } from './brute-force.js';

interface Case {
  readonly deal: Deal;
  readonly pitch: [number, number];
  readonly swaps: readonly (readonly [number, number])[];
}

/** Blocks of a cell and its reflection, or of single cells; bits, a termination and the fill among them at random. */
const cases: fc.Arbitrary<Case> = fc
  .record({
    rows: fc.integer({ min: 1, max: 6 }),
    columns: fc.integer({ min: 2, max: 6 }),
    paired: fc.boolean(),
    weights: fc.array(fc.integer({ min: 1, max: 8 }), { minLength: 1, maxLength: 4 }),
    termination: fc.boolean(),
    pitch: fc.tuple(fc.constantFrom(1, 5.7, 7.2), fc.constantFrom(1, 5.7, 7.2)),
  })
  .chain(({ rows, columns, paired, weights, termination, pitch }) => {
    const count = rows * columns;
    const half = Math.floor(count / 2);
    const groups = paired
      ? Array.from({ length: half }, (_, i) => [i, count - 1 - i])
      : Array.from({ length: count }, (_, i) => [i]);
    if (paired && count % 2 === 1) groups.push([half]);
    const weight = Float64Array.from([...weights, ...(termination ? [0] : []), 0]);
    const block = fc.nat({ max: groups.length - 1 });
    return fc
      .record({
        netOfBlock: fc.array(fc.nat({ max: weight.length - 1 }), {
          minLength: groups.length,
          maxLength: groups.length,
        }),
        swaps: fc.array(fc.tuple(block, block), { maxLength: 20 }),
      })
      .map(({ netOfBlock, swaps }) => {
        const start = Int32Array.from([0, ...groups.map((_, i) => groups.slice(0, i + 1).flat().length)]);
        const deal: Deal = {
          rows,
          columns,
          nets: weight.length,
          weight,
          start,
          cells: Int32Array.from(groups.flat()),
          netOfBlock: Uint8Array.from(netOfBlock),
        };
        return { deal, pitch, swaps: swaps.filter(([a, b]) => groups[a].length === groups[b].length) };
      });
  });

/** The deal as a floorplan; nets without weight are dummies. */
function planOf(deal: Deal, pitch_um: [number, number]): Plan {
  const { rows, columns, weight } = deal;
  const cells = Array.from({ length: rows }, () => new Array<string>(columns).fill('-'));
  deal.netOfBlock.forEach((net, block) => {
    for (const cell of deal.cells.subarray(deal.start[block], deal.start[block + 1])) {
      if (weight[net] > 0) cells[Math.floor(cell / columns)][cell % columns] = `N${net}`;
    }
  });
  const units = (name: string): number => cells.flat().filter((cell) => cell === name).length;
  const capacitors = Array.from(weight).flatMap((w, net) =>
    w > 0 ? [{ name: `N${net}`, role: 'bit' as const, weight: w, units: units(`N${net}`) }] : [],
  );
  return { core: { rows, columns, pitch_um }, capacitors, cells };
}

/** The largest over all codes, LSB per ppm/um or ppm/um^2. */
const worst = (given: Plan, measure: typeof length): number =>
  1e-6 * Math.max(...endPointErrors(given).map((error) => measure(error)));

/** Twelve angles over half a turn see at least the cosine of half a step of the largest; a twentieth of a mean comes on top. */
const SEEN = Math.cos(Math.PI / 24);
const SURPLUS = 1.05;

const exchange = ({ netOfBlock }: Deal, a: number, b: number): void => {
  [netOfBlock[a], netOfBlock[b]] = [netOfBlock[b], netOfBlock[a]];
};

describe.each([
  ['first order', firstOrderTerm, length],
  ['second order', secondOrderTerm, nuclearNorm],
] as const)('%s term', (name, term, measure) => {
  it('follows swaps: value by brute force, delta its difference', () => {
    fc.assert(
      fc.property(cases, ({ deal, pitch, swaps }) => {
        const kernel = term(deal, pitch);
        expect(kernel.name).toBe(name);
        const size = kernel.value() + 1e-6;
        for (const [a, b] of swaps) {
          const before = kernel.value();
          const delta = kernel.delta(a, b);
          expect(kernel.value()).toBe(before);
          kernel.apply(a, b);
          exchange(deal, a, b);
          expect(Math.abs(kernel.value() - before - delta)).toBeLessThanOrEqual(1e-12 * (size + kernel.value()));
          const largest = worst(planOf(deal, pitch), measure);
          const slack = 1e-12 * (size + kernel.value());
          expect(kernel.value()).toBeGreaterThanOrEqual(SEEN * largest - slack);
          expect(kernel.value()).toBeLessThanOrEqual(SURPLUS * largest + slack);
        }
        // What was followed is what would have been found afresh, bit for bit.
        expect(kernel.value()).toBe(term(deal, pitch).value());
      }),
      { numRuns: 300 },
    );
  });

  it('a swap and the same swap again leave nothing behind', () => {
    fc.assert(
      fc.property(cases, ({ deal, pitch, swaps }) => {
        const kernel = term(deal, pitch);
        const before = kernel.value();
        for (const [a, b] of [...swaps, ...[...swaps].reverse()]) {
          kernel.apply(a, b);
          exchange(deal, a, b);
        }
        expect(kernel.value()).toBe(before);
      }),
    );
  });
});

describe('terms and figures', () => {
  it('stay within what the probes see of the exact figures; the first order is 0 with its figure', () => {
    fc.assert(
      fc.property(cases, ({ deal, pitch }) => {
        const { first, second } = analyseGradient(planOf(deal, pitch));
        for (const [term, exact] of [
          [firstOrderTerm(deal, pitch), first.inl_lsb_per_ppm_per_um],
          [secondOrderTerm(deal, pitch), second.inl_lsb_per_ppm_per_um2],
        ] as const) {
          expect(term.value()).toBeGreaterThanOrEqual(SEEN * exact * (1 - 1e-12));
          expect(term.value()).toBeLessThanOrEqual(SURPLUS * exact * (1 + 1e-12));
          expect(term.value() === 0).toBe(exact === 0);
        }
      }),
      { numRuns: 200 },
    );
  });

  it('the exact second order of a deal is that of its floorplan, and its square a whole number', () => {
    fc.assert(
      fc.property(cases, ({ deal, pitch }) => {
        const { squared, inl_lsb_per_ppm_per_um2: inl } = secondOrderInl(deal, pitch);
        expect(inl).toBe(analyseGradient(planOf(deal, pitch)).second.inl_lsb_per_ppm_per_um2);
        const total = deal.weight.reduce((a, b) => a + b, 0);
        // 1e-6 per ppm, 0.0005 um a half-nanometre, twice the total of the weights.
        expect((1e-6 * 0.0005 * 0.0005 * Math.sqrt(Number(squared))) / (2 * total)).toBeCloseTo(inl, 12);
      }),
      { numRuns: 100 },
    );
  });
});
