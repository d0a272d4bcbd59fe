import fc from 'fast-check';
import { expect, test } from 'vitest';
import { linearityOf } from '../../src/linearity/capacitances.js';

const binary = (bits: number): number[] => Array.from({ length: bits }, (_, k) => 1 << k);

/** INL(D) of every code, straight from the definition of the end-point fit. */
function everyInl(weight: readonly number[], c: readonly number[]): number[] {
  const [W, S] = [weight, c].map((values) => values.reduce((a, b) => a + b, 0));
  return Array.from({ length: 1 << weight.length }, (_, code) => {
    let [drawn, meant] = [0, 0];
    for (let k = 0; k < weight.length; k++) if ((code >> k) & 1) [drawn, meant] = [drawn + c[k], meant + weight[k]];
    return (drawn * W) / S - meant;
  });
}

test('INL and DNL are those of the worst of all codes', () => {
  const arrays = fc
    .integer({ min: 2, max: 7 })
    .chain((bits) => fc.array(fc.double({ min: 0.8, max: 1.2, noNaN: true }), { minLength: bits, maxLength: bits }));
  fc.assert(
    fc.property(arrays, (ratios) => {
      const weight = binary(ratios.length);
      const c = weight.map((w, k) => w * ratios[k]);
      const inl = everyInl(weight, c);
      const { inl_lsb, dnl_lsb } = linearityOf(weight, c);
      expect(inl_lsb).toBeCloseTo(Math.max(...inl.map(Math.abs)), 9);
      expect(dnl_lsb).toBeCloseTo(Math.max(...inl.slice(1).map((v, i) => Math.abs(v - inl[i]))), 9);
    }),
  );
});

test('equal coupling c from every bit, 10 bits: the step at mid-code (D), and none in proportion to the weights', () => {
  const weight = binary(10);
  for (const [c, dnl] of [
    [0.01, -0.08009],
    [0.1, -0.800195],
  ])
    expect(
      linearityOf(
        weight,
        weight.map((w) => w + c),
      ).dnl_lsb,
    ).toBeCloseTo(-dnl, 6);
  expect(
    linearityOf(
      weight,
      weight.map((w) => 1.25 * w),
    ),
  ).toEqual({ inl_lsb: 0, dnl_lsb: 0 });
});

test('the order of the bits is of no account', () => {
  expect(linearityOf([4, 1, 2], [4.1, 1, 2.05])).toEqual(linearityOf([1, 2, 4], [1, 2.05, 4.1]));
});
