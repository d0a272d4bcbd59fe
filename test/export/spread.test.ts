import fc from 'fast-check';
import { expect, it } from 'vitest';
import { spread } from '../../src/export/spread.js';

const labels = fc
  .array(
    fc.record({ at: fc.integer({ min: 0, max: 2000 }), width: fc.integer({ min: 1, max: 60 }).map((n) => 2 * n) }),
    {
      minLength: 1,
      maxLength: 12,
    },
  )
  .map((list) => list.sort((a, b) => a.at - b.at));

it('leaves labels alone that have room', () => {
  expect(spread([100, 200, 300], [50, 50, 50], 0, 400)).toEqual([100, 200, 300]);
});

it('parts those that meet about their common mean', () => {
  expect(spread([100, 100], [40, 40], 0, 400)).toEqual([80, 120]);
});

it('keeps order, room and bounds', () => {
  fc.assert(
    fc.property(labels, (list) => {
      const widths = list.map((l) => l.width);
      const room = widths.reduce((sum, width) => sum + width, 0);
      const centres = spread(
        list.map((l) => l.at),
        widths,
        -100,
        2100 + room,
      );
      centres.forEach((centre, i) => {
        const left = i === 0 ? -100 : centres[i - 1] + widths[i - 1] / 2;
        // Both centres are rounded.
        expect(centre - widths[i] / 2).toBeGreaterThanOrEqual(left - 1);
        expect(centre + widths[i] / 2).toBeLessThanOrEqual(2100 + room);
      });
    }),
  );
});

it('moves as little as possible: no single shift of a run of labels does better', () => {
  const cost = (centres: readonly number[], list: readonly { at: number }[]) =>
    centres.reduce((sum, centre, i) => sum + (centre - list[i].at) ** 2, 0);
  fc.assert(
    fc.property(labels, fc.nat(11), fc.nat(11), fc.constantFrom(-4, 4), (list, a, b, shift) => {
      const widths = list.map((l) => l.width);
      const centres = spread(
        list.map((l) => l.at),
        widths,
        -10_000,
        20_000,
      );
      const moved = centres.map((centre, i) => (i >= Math.min(a, b) && i <= Math.max(a, b) ? centre + shift : centre));
      const legal = moved.every((centre, i) => i === 0 || centre - moved[i - 1] >= (widths[i] + widths[i - 1]) / 2);
      // Rounding costs each label half a unit at most, against a shift of four.
      if (legal) expect(cost(moved, list)).toBeGreaterThanOrEqual(cost(centres, list) - 1);
    }),
  );
});
