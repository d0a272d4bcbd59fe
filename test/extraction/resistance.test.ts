import fc from 'fast-check';
import { Matrix, solve } from 'ml-matrix';
import { describe, expect, it } from 'vitest';
import { rectanglesOf } from '../../src/core/flatten.js';
import type { Polygon } from '../../src/core/layout.js';
import { Random } from '../../src/core/random.js';
import { elmore_ps } from '../../src/extraction/delay.js';
import type { Net } from '../../src/extraction/net.js';
import { netsOf } from '../../src/extraction/net.js';
import { Nodal } from '../../src/extraction/nodal.js';
import { straightPieces } from '../../src/extraction/straight-pieces.js';
import { wireNetwork } from '../../src/extraction/wire-network.js';
import type { Polygons } from '../../src/spec/polygons.js';
import { covers, randomBoxes } from '../core/boxes.js';
import { drawn, parallelPlate, template } from '../pipeline/drawn.js';
import { type Box, type Label, wiresOn } from './wires.js';

/** Resistance between the pins A and B. */
function ohmsBetween(p: Polygons): number {
  const network = wireNetwork(p);
  const [net] = netsOf(network, ['A']);
  const [other] = netsOf(network, ['B']);
  expect(other.nodes).toBe(net.nodes);
  const amperes = new Float64Array(net.nodes);
  amperes[other.pins[0]] = 1;
  return new Nodal(net, net.pins).solve(amperes)[other.pins[0]];
}

const lower = 0.08;
const plate = 0.06;
const via = 4;

describe('resistance of drawn wires', () => {
  it('is sheet resistance times length over width', () => {
    // R = Rs L/W, 0.1 ohm per square, 100 um by 0.5 um: 20 ohm (D).
    const p = wiresOn({ 'lower-metal': [[0, 0, 100_000, 500]] }, [
      ['A', 0, 250],
      ['B', 100_000, 250],
    ]);
    const layers = parallelPlate.layers.map((l) => (l.name === 'lower-metal' ? { ...l, sheetResistance_ohm: 0.1 } : l));
    expect(ohmsBetween({ ...p, technology: { ...parallelPlate, layers } })).toBeCloseTo(20, 12);
  });

  it('does not depend on how the metal was drawn', () => {
    const ends: Label[] = [
      ['A', 0, 250],
      ['B', 100_000, 250],
    ];
    fc.assert(
      fc.property(
        fc.array(fc.tuple(fc.nat(99_999), fc.integer({ min: 1, max: 30_000 }), fc.boolean()), { maxLength: 8 }),
        (parts) => {
          const more = parts.map(([x, length, low]): Box => {
            const to = Math.min(x + length, 100_000);
            return [x, low ? 0 : 200, to, low ? 300 : 500];
          });
          const one: Box[] = [
            [0, 0, 60_000, 500],
            [55_000, 0, 100_000, 500],
          ];
          expect(ohmsBetween(wiresOn({ 'lower-metal': [...one, ...more] }, ends))).toBeCloseTo(lower * 200, 9);
        },
      ),
      { numRuns: 50 },
    );
  });

  it('adds up over vias, bends and changes of width', () => {
    // Along the lower metal, up, along the plates' metal, there twice as wide from the middle on, around a corner, down again.
    const p = wiresOn(
      {
        'lower-metal': [
          [0, 0, 10_000, 400],
          [20_000, 9_600, 20_400, 12_000],
        ],
        'lower-plate': [
          [9_600, 70, 9_860, 330],
          [20_070, 9_670, 20_330, 9_930],
        ],
        'plate-metal': [
          [9_000, 0, 15_000, 400],
          [15_000, -200, 20_400, 600],
          [20_000, 600, 20_400, 10_000],
        ],
      },
      [
        ['A', 100, 200],
        ['B', 20_200, 11_900],
      ],
    );
    const along = (lower * (9_730 - 100)) / 400 + (plate * (15_000 - 9_730)) / 400 + (plate * (20_200 - 15_000)) / 800;
    // From the wide wire's centre line half its height up to the upright one, as wide as that.
    const up = (plate * 400) / 400 + (plate * (9_800 - 600)) / 400;
    expect(ohmsBetween(p)).toBeCloseTo(along + via + up + via + (lower * (11_900 - 9_800)) / 400, 9);
  });

  it('takes vias side by side as what they are', () => {
    // Two ways from the one wire to the other, each with a via: the wires between the vias carry what goes either way.
    const p = wiresOn(
      {
        'lower-metal': [[0, 0, 5_000, 400]],
        'plate-metal': [[3_000, 0, 9_000, 400]],
        'lower-plate': [
          [3_070, 70, 3_330, 330],
          [4_070, 70, 4_330, 330],
        ],
      },
      [
        ['A', 0, 200],
        ['B', 0, 200],
      ],
    );
    const { a, b, ohm, nodes, pins } = netsOf(wireNetwork(p), ['A'])[0];
    expect(pins).toHaveLength(1);
    const [first, second] = [(lower * 1_000) / 400 + via, via + (plate * 1_000) / 400];
    // Seen from the pin: up to the second via on the plates' metal.
    const far = (lower * 3_200) / 400 + (first * second) / (first + second);
    const amperes = Array.from({ length: nodes }, (_, node) => node).map((node) => {
      const into = new Float64Array(nodes);
      into[node] = 1;
      return new Nodal({ nodes, a, b, ohm }, pins).solve(into)[node];
    });
    expect(Math.max(...amperes)).toBeCloseTo(far, 9);
  });

  it('goes around a loop both ways', () => {
    const p = wiresOn(
      {
        'lower-metal': [
          [0, 0, 20_000, 400],
          [0, 9_600, 20_000, 10_000],
          [0, 400, 400, 9_600],
          [19_600, 400, 20_000, 9_600],
        ],
      },
      [
        ['A', 200, 5_000],
        ['B', 19_800, 5_000],
      ],
    );
    const way = lower * ((4_800 + 19_600 + 4_800) / 400);
    expect(ohmsBetween(p)).toBeCloseTo(way / 2, 9);
  });

  it('names what has no resistance stated', () => {
    const bare = ({ sheetResistance_ohm: _, ...layer }: Polygons['technology']['layers'][number]) => layer;
    const p = wiresOn({ 'lower-metal': [[0, 0, 1_000, 400]] }, [['A', 0, 200]]);
    const technology = { ...parallelPlate, layers: parallelPlate.layers.map(bare) };
    expect(netsOf(wireNetwork({ ...p, technology }), ['A'])[0].unstated).toEqual(['lower-metal']);
    expect(netsOf(wireNetwork(p), ['A'])[0].unstated).toEqual([]);
  });
});

describe('straight pieces', () => {
  it('cover what the boxes cover, each place once', () => {
    const random = new Random(5);
    for (let run = 0; run < 100; run++) {
      const side = 12;
      const boxes = randomBoxes(random, 1 + random.below(8), side);
      const pieces = straightPieces(boxes);
      for (let x = 0; x < side; x++)
        for (let y = 0; y < side; y++) {
          const count = (b: typeof boxes) => Array.from(b.x0, (_, i) => covers(b, i, x, y)).filter(Boolean).length;
          expect(count(pieces)).toBe(count(boxes) > 0 ? 1 : 0);
        }
    }
  });
});

/** Dense nodal analysis by a general library: resistance from node 0 to every other, and the voltages under given currents. */
function dense(nodes: number, resistors: readonly (readonly [a: number, b: number, ohm: number])[], held: number[]) {
  const free = Array.from({ length: nodes }, (_, i) => i).filter((i) => !held.includes(i));
  const row = new Map(free.map((node, i) => [node, i]));
  const g = Matrix.zeros(free.length, free.length);
  const add = (i: number | undefined, j: number | undefined, value: number) => {
    if (i !== undefined && j !== undefined) g.set(i, j, g.get(i, j) + value);
  };
  for (const [a, b, ohm] of resistors) {
    const [i, j] = [row.get(a), row.get(b)];
    add(i, i, 1 / ohm);
    add(j, j, 1 / ohm);
    add(i, j, -1 / ohm);
    add(j, i, -1 / ohm);
  }
  return (amperes: readonly number[]): number[] => {
    const solution = solve(g, Matrix.columnVector(free.map((node) => amperes[node])));
    return amperes.map((_, node) => (row.has(node) ? solution.get(row.get(node)!, 0) : 0));
  };
}

describe('nodal analysis', () => {
  it('agrees with a dense solution on trees and on networks with loops', () => {
    const random = new Random(11);
    const real = () => (1 + random.below(1000)) / 100;
    for (let run = 0; run < 60; run++) {
      const nodes = 2 + random.below(30);
      const resistors: [number, number, number][] = [];
      for (let node = 1; node < nodes; node++) resistors.push([node, random.below(node), real()]);
      for (let loop = random.below(2) * random.below(nodes); loop > 0; loop--)
        resistors.push([random.below(nodes), random.below(nodes), real()]);
      const held = random.below(2) === 0 ? [0] : [0, random.below(nodes)];
      const amperes = Array.from({ length: nodes }, real);
      const own = new Nodal(
        {
          nodes,
          a: Int32Array.from(resistors, ([a]) => a),
          b: Int32Array.from(resistors, ([, b]) => b),
          ohm: Float64Array.from(resistors, ([, , ohm]) => ohm),
        },
        held,
      ).solve(Float64Array.from(amperes));
      const loopless = resistors.filter(([a, b]) => a !== b);
      dense(
        nodes,
        loopless,
        held,
      )(amperes).forEach((volts, node) =>
        expect(Math.abs(own[node] - volts)).toBeLessThan(1e-9 * (1 + Math.abs(volts))),
      );
    }
  });

  it('refuses a part that hangs on nothing', () => {
    const lone = { nodes: 3, a: Int32Array.of(0), b: Int32Array.of(1), ohm: Float64Array.of(1) };
    expect(() => new Nodal(lone, [0])).toThrow(RangeError);
  });
});

describe('Elmore delay', () => {
  const chain = (n: number, ohm: number): Net => ({
    name: 'B0',
    nodes: n + 1,
    a: Int32Array.from({ length: n }, (_, i) => i),
    b: Int32Array.from({ length: n }, (_, i) => i + 1),
    ohm: new Float64Array(n).fill(ohm / n),
    pins: [0],
    units: [],
    stretches: [],
    unstated: [],
  });

  it.each([
    [1, 1],
    [2, 0.75],
    [5, 0.6],
    [10, 0.55],
  ])('of %i equal sections is RC times %f', (n, factor) => {
    // RC (n + 1) / (2 n) (D). 1000 ohm and 1000 fF are 1 ns.
    const load = new Float64Array(n + 1).fill(1000 / n);
    load[0] = 0;
    expect(elmore_ps(chain(n, 1000), load, 0)[n] / 1000).toBeCloseTo(factor, 12);
    expect(elmore_ps(chain(n, 1000), load, 500)[n] / 1000).toBeCloseTo(factor + 0.5, 12);
  });
});

/**
 * The same resistances from what each polygon says it is there for: wires with their vias and ends, joined by a dense solution. It takes no
 * unions and no touching shapes, and knows nothing of the network above.
 */
function byMeaning(p: Polygons, name: string): number[] {
  const top = p.structures.find((s) => s.name === p.topStructure)!;
  const layerOf = (polygon: Polygon) =>
    p.technology.layers.find(({ stream: s }) => s.layer === polygon.layer && s.datatype === polygon.datatype);
  const own = top.polygons.filter(({ net }) => net === name);
  const boxOf = (polygon: Polygon) => {
    const { x0, y0, x1, y1 } = rectanglesOf(polygon.xy);
    return { x0: x0[0], y0: y0[0], x1: x1[0], y1: y1[0] };
  };
  const middle = ({ x0, y0, x1, y1 }: ReturnType<typeof boxOf>) => [(x0 + x1) / 2, (y0 + y1) / 2] as const;
  const vias = own.filter(({ part }) => part === 'via').map((polygon) => middle(boxOf(polygon)));
  const pin = middle(boxOf(own.find(({ part }) => part === 'pin')!));
  const nodes = new Map<string, number>([[`${p.technology.roles.trunk} ${pin.join(' ')}`, 0]]);
  const node = (key: string) => nodes.get(key) ?? nodes.set(key, nodes.size).size - 1;
  const resistors: [number, number, number][] = [];
  const units: number[] = [];
  for (const polygon of own) {
    const layer = layerOf(polygon);
    if (layer?.kind === 'pin' || layer === undefined || polygon.part === 'tab') continue;
    const box = boxOf(polygon);
    const flat = box.x1 - box.x0 > box.y1 - box.y0;
    const inside = ([x, y]: readonly [number, number]) => x >= box.x0 && x <= box.x1 && y >= box.y0 && y <= box.y1;
    const at = vias.filter(inside);
    if (layer.name === p.technology.roles.trunk && inside(pin)) at.push(pin);
    if (polygon.part === 'stub') {
      const end = Math.abs(at[0][0] - box.x0) > Math.abs(at[0][0] - box.x1) ? box.x0 : box.x1;
      at.push([end, middle(box)[1]]);
      units.push(node(`${layer.name} ${end} ${middle(box)[1]}`));
    }
    at.sort((a, b) => (flat ? a[0] - b[0] : a[1] - b[1]));
    const width = flat ? box.y1 - box.y0 : box.x1 - box.x0;
    for (let i = 1; i < at.length; i++) {
      const length = at[i][0] - at[i - 1][0] + at[i][1] - at[i - 1][1];
      const ohm = (layer.sheetResistance_ohm! * length) / width;
      resistors.push([node(`${layer.name} ${at[i - 1].join(' ')}`), node(`${layer.name} ${at[i].join(' ')}`), ohm]);
    }
    if (at.length === 1) node(`${layer.name} ${at[0].join(' ')}`);
  }
  const { trunk, stub } = p.technology.roles;
  const ohm = p.technology.vias.find(({ lower, upper }) => lower === trunk && upper === stub)!.resistance_ohm!;
  for (const at of vias) resistors.push([node(`${trunk} ${at.join(' ')}`), node(`${stub} ${at.join(' ')}`), ohm]);
  const volts = dense(
    nodes.size,
    resistors.filter(([a, b]) => a !== b),
    [0],
  );
  return units.map((unit) => volts(Array.from({ length: nodes.size }, (_, i) => (i === unit ? 1 : 0)))[unit]);
}

describe.each(['parallel-plate', 'framed-fingers', 'named-cell'])('an array in %s', (name) => {
  const p = drawn({ bits: 5, effort: 'quick' }, undefined, 1e6, template(name)).polygons!;
  const network = wireNetwork(p);

  it('has the resistances from pin to every unit that its wires say', () => {
    for (const capacitor of p.capacitors.filter(({ role }) => role === 'bit')) {
      const [net] = netsOf(network, [capacitor.name]);
      expect(net.units).toHaveLength(capacitor.units);
      const nodal = new Nodal(net, net.pins);
      const found = net.units.map(({ node }) => {
        const amperes = new Float64Array(net.nodes);
        amperes[node] = 1;
        return nodal.solve(amperes)[node];
      });
      const wanted = byMeaning(p, capacitor.name);
      expect(wanted).toHaveLength(capacitor.units);
      const ascending = (a: number, b: number) => a - b;
      found.sort(ascending);
      wanted.sort(ascending).forEach((ohm, i) => expect(found[i]).toBeCloseTo(ohm, 9));
    }
  });

  it('has every unit on the nets that its cell says', () => {
    const cells = p.structures.flatMap((s) => s.references.flatMap((r) => r.cells ?? []));
    const nets = netsOf(network, [...p.capacitors.map((c) => c.name), 'VSS']);
    for (const net of nets)
      for (const { cell } of net.units) {
        const meant = cells[cell] === '-' || cells[cell] === '=' ? 'VSS' : cells[cell];
        expect(net.name).toBe(meant);
      }
    expect(nets.reduce((sum, { units }) => sum + units.length, 0)).toBe(cells.length);
  });
});
