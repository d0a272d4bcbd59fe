import { describe, expect, it } from 'vitest';
import { Random } from '../../src/core/random.js';
import { circuitOf } from '../../src/extraction/circuit.js';
import type { Coupling } from '../../src/extraction/coupling.js';
import { elmore_ps } from '../../src/extraction/delay.js';
import { nodeLoads } from '../../src/extraction/loads.js';
import { netsOf } from '../../src/extraction/net.js';
import type { Net } from '../../src/extraction/net.js';
import { withLast } from '../../src/extraction/timing.js';
import { reducedNet } from '../../src/extraction/reduce.js';
import { wireNetwork } from '../../src/extraction/wire-network.js';
import type { Technology } from '../../src/spec/technology.js';
import { drawn, parallelPlate } from '../pipeline/drawn.js';
import { wiresOn } from './wires.js';

const plain = { units: [], stretches: [], unstated: [] };

describe('loads of a wire', () => {
  // 100 um by 0.5 um at 0.08 ohm per square: 16 ohm, with 1000 fF on it.
  const p = wiresOn({ 'lower-metal': [[0, 0, 100_000, 500]] }, [
    ['B0', 0, 250],
    ['far', 100_000, 250],
    ['middle', 50_000, 250],
  ]);
  const network = wireNetwork(p);
  const [net] = netsOf(network, ['B0']);
  const node = (name: string) => netsOf(network, [name])[0].pins[0];
  const delays = (wires: Coupling['wires'], fF = 1000) => {
    const pairs = [
      { a: 'B0', b: 'TOP', fF: fF / 4, error_fF: 0 },
      { a: 'B0', b: 'VSS', fF: (fF * 3) / 4, error_fF: 0 },
    ];
    const [loads] = nodeLoads({ nets: ['B0', 'TOP', 'VSS'], pairs, wires }, network, [net]);
    const all = loads.top.map((top, i) => top + loads.rest[i]);
    expect(loads.top.reduce((a, b) => a + b, 0)).toBeCloseTo(fF / 4, 9);
    expect(all.reduce((a, b) => a + b, 0)).toBeCloseTo(fF, 9);
    return elmore_ps(net, all, 0);
  };
  const wire = { net: 'B0', layer: 'lower-metal', y0: 0, y1: 500, top_fF: 250, load_fF: 750 };

  it('spread over a line make its delay RC / 2', () => {
    // The limit of RC (n + 1) / (2 n) for many sections (D): 8 ps. To the middle: the near half as a line, the far half in one: 6 ps.
    const found = delays([{ ...wire, x0: 0, x1: 100_000 }]);
    expect(found[node('far')]).toBeCloseTo(8, 9);
    expect(found[node('middle')]).toBeCloseTo(6, 9);
  });

  it('on a part of it act where they are', () => {
    const found = delays([{ ...wire, x0: 10_000, x1: 30_000 }]);
    expect(found[node('far')]).toBeCloseTo(16 * 0.2, 9);
    expect(found[node('middle')]).toBeCloseTo(16 * 0.2, 9);
  });

  it('may overlap, and lie on another net or layer without effect', () => {
    const halves = [
      { ...wire, x0: 0, x1: 60_000, top_fF: 125, load_fF: 375 },
      { ...wire, x0: 40_000, x1: 100_000, top_fF: 125, load_fF: 375 },
    ];
    const others = [
      { ...wire, x0: 0, x1: 100_000, net: 'B1' },
      { ...wire, x0: 0, x1: 100_000, layer: 'plate-metal', top_fF: 0, load_fF: 0 },
    ];
    expect(delays([...halves, ...others])[node('far')]).toBeCloseTo((16 * (0.3 + 0.7)) / 2, 9);
  });

  it('that the wires do not hold are at the pin of a net without units', () => {
    expect(Math.max(...delays([]))).toBe(0);
  });
});

describe('a reduced net', () => {
  const random = new Random(3);
  const real = () => (1 + random.below(1000)) / 100;
  const cases = Array.from({ length: 40 }, (_, run) => {
    const nodes = 2 + random.below(80);
    const from: number[] = [];
    const to: number[] = [];
    for (let node = 1; node < nodes; node++) {
      from.push(node);
      to.push(Math.max(0, node - 1 - random.below(3)));
    }
    const tree = run % 2 === 0;
    // Two vias side by side: ways that part and meet again at once.
    if (!tree)
      for (let node = 3; node < nodes; node += 9) {
        from.push(node);
        to.push(node - 1);
      }
    const net: Net = {
      ...plain,
      name: 'B0',
      nodes,
      a: Int32Array.from(from),
      b: Int32Array.from(to),
      ohm: Float64Array.from(from, real),
      pins: [0],
    };
    const loads = { top: new Float64Array(nodes).map(real), rest: new Float64Array(nodes).map(real) };
    return { net, loads, last: random.below(nodes), tree };
  });

  it('has its delay and its capacitances, and is small', () => {
    for (const { net, loads, last, tree } of cases) {
      const small = reducedNet({ ...withLast(net, loads), last }, 6);
      const nodes = small.top.length;
      if (tree) {
        expect(nodes).toBe(Math.min(net.nodes, 7));
        expect(small.resistors).toHaveLength(nodes - 1);
      } else expect(nodes).toBeLessThanOrEqual(net.nodes);
      const sum = (list: Iterable<number>) => [...list].reduce((a, b) => a + b, 0);
      expect(sum(small.top)).toBeCloseTo(sum(loads.top), 9);
      expect(sum(small.rest)).toBeCloseTo(sum(loads.rest), 9);
      const again: Net = {
        ...plain,
        name: 'B0',
        nodes,
        a: Int32Array.from(small.resistors, ({ a }) => a),
        b: Int32Array.from(small.resistors, ({ b }) => b),
        ohm: Float64Array.from(small.resistors, ({ ohm }) => ohm),
        pins: [0],
      };
      const all = (of: { readonly top: ArrayLike<number>; readonly rest: ArrayLike<number> }) =>
        Float64Array.from(of.top, (top, i) => top + of.rest[i]);
      const before = elmore_ps(net, all(loads), 30)[last];
      expect(elmore_ps(again, all(small), 30)[small.last] / before).toBeCloseTo(1, 9);
    }
  });
});

describe('the timing of the bits', () => {
  const p = drawn({ bits: 4, effort: 'quick' }).polygons!;
  const bits = p.capacitors.filter(({ role }) => role === 'bit');
  const coupling: Coupling = {
    nets: [...p.capacitors.map(({ name }) => name), 'TOP', 'VSS'],
    pairs: p.capacitors.flatMap(({ name, units }) => [
      { a: name, b: 'TOP', fF: 20 * units, error_fF: 0 },
      { a: name, b: 'VSS', fF: 1.5 * units, error_fF: 0 },
    ]),
    wires: [],
  };
  const timings = (drive?: Parameters<typeof circuitOf>[2], technology: Technology = parallelPlate) =>
    circuitOf({ ...p, technology }, coupling, drive).timings;
  const wires = timings();

  it('adds switch and reference to the wires', () => {
    wires.forEach(({ elmore_ps = 0, settling_ps }, bit) => {
      const load = 21.5 * bits[bit].units;
      const with50 = timings({ switch_ohm: 1000, reference_ohm: 50 })[bit];
      expect(with50.elmore_ps).toBeCloseTo(elmore_ps + ((1000 / bits[bit].weight + 50) * load) / 1000, 9);
      expect(with50.settling_ps! / with50.elmore_ps!).toBeCloseTo(Math.log(2 * bits[bit].weight), 12);
      const listed = timings({ switch_ohm: [10, 20, 30, 40] })[bit];
      expect(listed.elmore_ps).toBeCloseTo(elmore_ps + (10 * (bit + 1) * load) / 1000, 9);
      expect(settling_ps).toBeUndefined();
      expect(elmore_ps).toBeGreaterThan(0);
    });
  });

  it('is not there where a resistance of the wires is not stated, and does not ask for others', () => {
    const bare = (name: string): Technology => ({
      ...parallelPlate,
      layers: parallelPlate.layers.map(({ sheetResistance_ohm, ...layer }) =>
        layer.name === name || sheetResistance_ohm === undefined ? layer : { ...layer, sheetResistance_ohm },
      ),
      vias: parallelPlate.vias.map(({ resistance_ohm, ...via }) =>
        via.name === name || resistance_ohm === undefined ? via : { ...via, resistance_ohm },
      ),
    });
    for (const name of ['lower-metal', 'plate-metal', 'lower-plate'])
      expect(timings({ switch_ohm: 1 }, bare(name))).toEqual(bits.map((bit) => ({ name: bit.name })));
    for (const name of ['top-plate', 'upper-metal', 'top-plate-upper'])
      expect(timings(undefined, bare(name))).toEqual(wires);
  });
});
