import { describe, expect, it } from 'vitest';
import { Infeasible } from '../../src/core/problem.js';
import { Random } from '../../src/core/random.js';
import { placeOnPitch } from '../../src/hookup/pin-row.js';
import type { Leaving } from '../../src/hookup/pins.js';

function permutations<T>(items: readonly T[]): T[][] {
  if (items.length === 0) return [[]];
  return items.flatMap((item, i) =>
    permutations([...items.slice(0, i), ...items.slice(i + 1)]).map((rest) => [item, ...rest]),
  );
}

const wire = 3;
const size = { first: 2, last: 60, pitch: 5, grid: 1 };

/** Vertical wires as intervals of levels: the ring is level 0, the edge `nets + 1`. Two of them nearer than the pitch must not overlap. */
function fits(nets: readonly Leaving[], drops: readonly number[], buses: readonly number[]): boolean {
  const edge = nets.length + 1;
  const verticals = nets.flatMap(({ trunks }, net) => {
    const level = buses.includes(net) ? buses.indexOf(net) + 1 : edge;
    const down = trunks.map((x) => ({ net, x, from: 0, to: level }));
    return level === edge ? down : [...down, { net, x: drops[net], from: level, to: edge }];
  });
  if (nets.some(({ trunks }, net) => !buses.includes(net) && (trunks.length !== 1 || trunks[0] !== drops[net])))
    return false;
  return verticals.every((a, i) =>
    verticals.slice(i + 1).every((b) => {
      const apart = Math.abs(a.x - b.x);
      if (apart >= size.pitch) return true;
      // A drop may be a trunk of its own net carried on, but not stand beside it.
      if (a.net === b.net) return apart === 0;
      return a.to < b.from || b.to < a.from;
    }),
  );
}

const lengthOf = (nets: readonly Leaving[], drops: readonly number[], buses: readonly number[]): number =>
  buses.reduce((sum, i) => {
    const ends = [...nets[i].trunks, drops[i]];
    return sum + Math.max(...ends) - Math.min(...ends);
  }, 0);

/** Every place of the row, every set of buses, every order of them. */
function bruteForce(
  nets: readonly Leaving[],
  step: number,
  last: number,
): { buses: number; length: number } | undefined {
  let best: { buses: number; length: number } | undefined;
  const all = nets.map((_, i) => i);
  for (let x0 = size.first; x0 + (nets.length - 1) * step <= last; x0++) {
    const drops = all.map((i) => x0 + i * step);
    for (let set = 0; set < 1 << nets.length; set++)
      for (const buses of permutations(all.filter((i) => (set >> i) & 1))) {
        const length = lengthOf(nets, drops, buses);
        if (best && (best.buses - buses.length || best.length - length) <= 0) continue;
        if (fits(nets, drops, buses)) best = { buses: buses.length, length };
      }
  }
  return best;
}

/** Trunks at random places, no two nearer than the pitch. */
function randomNets(random: Random): Leaving[] {
  const places: number[] = [];
  for (let x = 2 + random.below(4); x <= 60; x += 5 + random.below(3)) places.push(x);
  const nets = Array.from({ length: 2 + random.below(3) }, (_, i) => ({ net: `B${i}`, trunks: [] as number[] }));
  for (const x of places) if (random.below(6) > 0) nets[random.below(nets.length)].trunks.push(x);
  return nets.filter(({ trunks }) => trunks.length > 0);
}

describe('pins on a pitch', () => {
  it('are where brute force finds the fewest and shortest buses, or nowhere', () => {
    let none = 0;
    for (let seed = 1; seed <= 150; seed++) {
      const random = new Random(seed);
      const nets = randomNets(random);
      const step = 5 + random.below(9);
      const last = 30 + random.below(31);
      const wanted = bruteForce(nets, step, last);
      if (wanted === undefined) {
        none++;
        expect(() => placeOnPitch(nets, step / 1000, { ...size, last }, undefined)).toThrow(Infeasible);
        continue;
      }
      const { x, buses } = placeOnPitch(nets, step / 1000, { ...size, last }, undefined);
      const order = buses.map((net) => nets.findIndex((one) => one.net === net));
      expect(fits(nets, x, order)).toBe(true);
      expect({ buses: buses.length, length: lengthOf(nets, x, order) }).toEqual(wanted);
      x.forEach((at, i) => i > 0 && expect(at - x[i - 1]).toBe(step));
      // What a file says of them leads to the same place.
      expect(placeOnPitch(nets, step / 1000, { ...size, last }, buses)).toEqual({ x, buses });
    }
    expect(none).toBeGreaterThan(3);
    expect(none).toBeLessThan(100);
  });

  it('are refused with the rule and a way out', () => {
    const nets = [
      { net: 'B0', trunks: [10] },
      { net: 'B1', trunks: [20, 40] },
    ];
    const at =
      (step: number, grid = 1) =>
      () =>
        placeOnPitch(nets, step / 1000, { ...size, grid }, undefined);
    expect(at(wire)).toThrow('nearer than their wires may: 0.005 um. Ask for a pitch of 0.005 um or more.');
    expect(at(7, 2)).toThrow('multiple of the technology');
    expect(at(7, 2)).toThrow('Ask for a pitch of 0.008 um.');
    expect(at(59)).toThrow('2 pins at a pitch of 0.059 um take 0.059 um; the block leaves 0.058 um');
  });

  it('goes on with other buses where those of a file cannot be', () => {
    // The drop of B0 stands in the way of the trunk of B1 unless that ends above it.
    const nets = [
      { net: 'B0', trunks: [4, 50] },
      { net: 'B1', trunks: [20, 30, 40] },
    ];
    const free = placeOnPitch(nets, 0.01, { ...size, first: 20, last: 30 }, undefined);
    expect(free.buses).toEqual(['B1', 'B0']);
    expect(placeOnPitch(nets, 0.01, { ...size, first: 20, last: 30 }, ['B0', 'B1'])).toEqual(free);
  });
});
