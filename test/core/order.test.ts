import { expect, it } from 'vitest';
import { orderBy } from '../../src/core/order.js';
import { Random } from '../../src/core/random.js';

it('orders by the first key, then the second, as a comparison does', () => {
  const extremes = [-0x8000_0000, 0x7fff_ffff, 0, -1, 1];
  for (let seed = 1; seed <= 60; seed++) {
    const random = new Random(seed);
    const range = [3, 2000, 5000, 0x4000_0000][seed % 4];
    const key = () =>
      Int32Array.from({ length: seed * 3 }, () =>
        seed % 5 === 0 ? extremes[random.below(5)] : random.below(range) - (range >> 1),
      );
    const [first, second] = [key(), key()];
    const wanted = Array.from(first, (_, i) => i).sort((a, b) => first[a] - first[b] || second[a] - second[b] || a - b);
    expect(Array.from(orderBy(first, second))).toEqual(wanted);
  }
});
