import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { InputError } from '../../src/core/problem.js';
import { writeDeviceNetlist } from '../../src/export/spice-devices.js';
import { writeCapacitorNetlist } from '../../src/export/spice.js';
import type { PinMap } from '../../src/spec/pin-map.js';
import type { Polygons } from '../../src/spec/polygons.js';
import type { Technology } from '../../src/spec/technology.js';
import { expectGolden } from '../golden.js';
import { drawn } from '../pipeline/drawn.js';
import { kilnPolygons } from './arrays.js';

const pinMap = (names: Record<string, string>): PinMap => ({
  format: 'steelyard/pins',
  version: 1,
  pins: Object.entries(names).map(([pin, name]) => ({ pin, name })),
});

/** Lines with their continuations, comments gone, words parted: what the format says and no more. */
function statements(text: string): string[][] {
  const [title, ...lines] = text.trimEnd().split('\n');
  expect(title).toMatch(/^\* /);
  const joined: string[] = [];
  for (const line of lines) {
    expect(line.length).toBeLessThanOrEqual(140);
    if (line.startsWith('*')) continue;
    if (line.startsWith('+')) joined.push(`${joined.pop() ?? ''} ${line.slice(1)}`);
    else joined.push(line);
  }
  return joined.map((line) => line.trim().split(/\s+/));
}

/** Units by the nets of their two plates, counted from the lists of cells alone. */
function unitsByNets({ structures }: Polygons): Map<string, number> {
  const counts = new Map<string, number>();
  for (const cell of structures.flatMap((s) => s.references.flatMap((r) => r.cells ?? []))) {
    const nets = cell === '-' ? 'VSS VSS' : cell === '=' ? 'TOP VSS' : `TOP ${cell}`;
    counts.set(nets, (counts.get(nets) ?? 0) + 1);
  }
  return counts;
}

/** Devices by their nodes, each counted as often as its multiplicity says. */
function devicesByNodes(text: string, key = 'm'): Map<string, number> {
  const counts = new Map<string, number>();
  for (const [name, a, b, ...rest] of statements(text).slice(1, -1)) {
    expect(name).toMatch(/^[CX]/);
    const times = Number(rest.find((word) => word.startsWith(`${key}=`))?.slice(key.length + 1) ?? 1);
    counts.set(`${a} ${b}`, (counts.get(`${a} ${b}`) ?? 0) + times);
  }
  return counts;
}

const sorted = (map: ReadonlyMap<string, number>) => [...map].sort(([a], [b]) => (a < b ? -1 : 1));

/** Both plates of a dummy on VSS are nothing to a simulator, and all to a comparison: they are counted too. */
const drawings: [string, Polygons][] = [
  ['kiln4', kilnPolygons()],
  ...(
    [
      { bits: 5 },
      { bits: 5, fillTop: 'VSS' },
      { bits: 4, rings: 0 },
      { bits: 6, termination: 'core', rings: 2 },
      { weights: [1, 2, 3, 5, 8] },
    ] as const
  ).map((given): [string, Polygons] => [JSON.stringify(given), drawn({ ...given, effort: 'quick' }).polygons!]),
];

describe.each(drawings)('netlists of %s', (_, p) => {
  const units = unitsByNets(p);
  const capacitors = writeCapacitorNetlist(p);
  const devices = writeDeviceNetlist(p);

  it('count one device a unit', () => {
    expect(sorted(devicesByNodes(devices))).toEqual(sorted(units));
    expect(sorted(devicesByNodes(writeDeviceNetlist(p, { devices: 'merged' })))).toEqual(sorted(units));
    const names = statements(devices).map(([name]) => name.toLowerCase());
    expect(new Set(names).size).toBe(names.length);
  });

  it('hold one capacitor a bit, of its units', () => {
    const found = new Map(
      statements(capacitors)
        .slice(1, -1)
        .map(([, a, b, value]) => [`${a} ${b}`, Number(value.replace(/f$/, '')) / p.technology.unit.capacitance_fF]),
    );
    expect([...found.keys()].sort()).toEqual([...units.keys()].sort());
    for (const [nets, count] of units) expect(found.get(nets)! / count).toBeCloseTo(1, 11);
  });

  it('leave dummies out where they are asked to', () => {
    const own = sorted(units).filter(([nets]) => !nets.endsWith(' VSS'));
    expect(sorted(devicesByNodes(writeDeviceNetlist(p, { dummies: 'omit' })))).toEqual(own);
    expect(sorted(devicesByNodes(writeDeviceNetlist(p, { dummies: 'omit', devices: 'merged' })))).toEqual(own);
    expect(sorted(devicesByNodes(writeCapacitorNetlist(p, { dummies: 'omit' }))).map(([nets]) => nets)).toEqual(
      own.map(([nets]) => nets),
    );
    // A device keeps its number.
    const left = new Set(statements(writeDeviceNetlist(p, { dummies: 'omit' })).map((words) => words.join(' ')));
    const all = new Set(statements(devices).map((words) => words.join(' ')));
    expect([...left].filter((line) => !all.has(line))).toEqual([]);
  });

  it('have the pins in the order of the drawing', () => {
    const top = p.structures.find((s) => s.name === p.topStructure)!;
    const pins = top.polygons.filter((q) => q.part === 'pin');
    const left = (q: (typeof pins)[number]) => Math.min(...q.xy.map(([x]) => x));
    const below = pins.filter((q) => q.xy.some(([, y]) => y === 0)).sort((a, b) => left(a) - left(b));
    const others = pins.filter((q) => !below.includes(q)).sort((a, b) => left(a) - left(b));
    const nets = [...new Set([...below, ...others].map((q) => q.net))];
    expect(nets).toHaveLength(p.capacitors.length + 2);
    for (const text of [capacitors, devices]) {
      const [first] = statements(text);
      expect(first).toEqual(['.SUBCKT', p.topStructure, ...nets]);
      expect(statements(text).at(-1)).toEqual(['.ENDS', p.topStructure]);
    }
  });

  it('are the same on a second run', () => {
    expect(writeCapacitorNetlist(p)).toBe(capacitors);
    expect(writeDeviceNetlist(p)).toBe(devices);
  });
});

describe('golden netlists', () => {
  it('capacitors', () => expectGolden(writeCapacitorNetlist(kilnPolygons()), 'kiln4.cir'));
  it('devices', () => expectGolden(writeDeviceNetlist(kilnPolygons()), 'kiln4.lvs.cir'));
});

const withDevice = (device: Partial<Technology['device']>): Polygons => {
  const p = kilnPolygons();
  return { ...p, technology: { ...p.technology, device: { ...p.technology.device, ...device } } };
};
function problemsOf(action: () => unknown): string[] {
  try {
    action();
    return [];
  } catch (error) {
    if (error instanceof InputError) return error.problems.map(({ found, wanted }) => `${found} | ${wanted}`);
    throw error;
  }
}

describe('devices', () => {
  it('follow the technology: prefix, terminals, bulk, parameters, multiplicity', () => {
    const p = withDevice({
      model: 'plate_cap',
      prefix: 'X',
      terminals: ['bottom', 'top', 'well'],
      bulk: 'VSS',
      parameters: { lr: '4.4u', wr: '2.2u*2' },
      multiplicity: 'mult',
    });
    const merged = statements(writeDeviceNetlist(p, { devices: 'merged' }));
    expect(merged).toContainEqual('XB3 B3 TOP VSS plate_cap lr=4.4u wr=2.2u*2 mult=8'.split(' '));
    expect(merged).toContainEqual('XB0 B0 TOP VSS plate_cap lr=4.4u wr=2.2u*2'.split(' '));
    expect(statements(writeDeviceNetlist(p))).toContainEqual(
      'XTERM_2 TERM TOP VSS plate_cap lr=4.4u wr=2.2u*2'.split(' '),
    );
  });

  it('bring a bulk net that is not drawn out as the last pin', () => {
    const p = withDevice({ terminals: ['top', 'bottom', 'bulk'], bulk: 'SUB' });
    const [first, second] = statements(writeDeviceNetlist(p));
    expect(first).toEqual(['.SUBCKT', 'kiln4', 'TERM', 'B0', 'B1', 'B2', 'B3', 'VSS', 'TOP', 'SUB']);
    expect(second.slice(0, 5)).toEqual(['C_dummy_1', 'VSS', 'VSS', 'SUB', 'cpp']);
    expect(statements(writeCapacitorNetlist(p))[0]).not.toContain('SUB');
  });

  it('cannot be merged without a multiplicity key', () => {
    const { multiplicity: _, ...device } = kilnPolygons().technology.device;
    const p = { ...kilnPolygons(), technology: { ...kilnPolygons().technology, device } };
    expect(problemsOf(() => writeDeviceNetlist(p, { devices: 'merged' }))[0]).toMatch(/^no "multiplicity" \| /);
    expect(problemsOf(() => writeDeviceNetlist(p))).toEqual([]);
  });

  it('fold long lines', () => {
    const parameters = Object.fromEntries(Array.from({ length: 12 }, (_, i) => [`parameter${i}`, '4.4u']));
    const text = writeDeviceNetlist(withDevice({ parameters }));
    expect(Math.max(...text.split('\n').map((line) => line.length))).toBeLessThanOrEqual(100);
    expect(text).toMatch(/^\+ parameter/m);
    for (const words of statements(text).slice(1, -1)) expect(words).toHaveLength(4 + 12);
  });
});

describe('pin names of the user', () => {
  const pins = pinMap({ B0: 'sar_d[0]', TOP: 'vdac', VSS: 'agnd' });

  it('stand for the nets everywhere', () => {
    for (const text of [
      writeCapacitorNetlist(kilnPolygons(), { pins }),
      writeDeviceNetlist(kilnPolygons(), { pins }),
    ]) {
      expect(statements(text)[0]).toEqual(['.SUBCKT', 'kiln4', 'TERM', 'sar_d[0]', 'B1', 'B2', 'B3', 'agnd', 'vdac']);
      const nodes = new Set(
        statements(text)
          .slice(1, -1)
          .flatMap((words) => words.slice(1, 3)),
      );
      expect([...nodes].sort()).toEqual(['B1', 'B2', 'B3', 'TERM', 'agnd', 'sar_d[0]', 'vdac']);
    }
  });

  it('may change places', () => {
    const swapped = writeCapacitorNetlist(kilnPolygons(), { pins: pinMap({ B0: 'B3', B3: 'B0' }) });
    expect(statements(swapped)).toContainEqual(['CB3', 'TOP', 'B0', '160.512f']);
  });
});

describe('capacitances as they came out', () => {
  it('are written for those named', () => {
    const text = writeCapacitorNetlist(kilnPolygons(), { capacitances_fF: { B1: 40.000123456789, TERM: 1e-3 } });
    expect(statements(text)).toContainEqual(['CB1', 'TOP', 'B1', '40.0001234568f']);
    expect(statements(text)).toContainEqual(['CTERM', 'TOP', 'TERM', '0.001f']);
    expect(statements(text)).toContainEqual(['CB0', 'TOP', 'B0', '20.064f']);
  });

  it('are refused where they are none, all at once', () => {
    const capacitances_fF = { B0: 0, B1: NaN, B2: -1, B9: 1 };
    expect(problemsOf(() => writeCapacitorNetlist(kilnPolygons(), { capacitances_fF }))).toEqual([
      '0 fF for "B0" | a number above 0',
      'NaN fF for "B1" | a number above 0',
      '-1 fF for "B2" | a number above 0',
      '1 fF for "B9" | a capacitor of this array: B0, B1, B2, B3, TERM',
    ]);
  });
});

/** Every capacitor renamed wherever it is named. */
const renamed = (from: string, to: string): Polygons =>
  JSON.parse(JSON.stringify(kilnPolygons()), (_, v: unknown) => (v === from ? to : v)) as Polygons;
const netlists = [writeCapacitorNetlist, writeDeviceNetlist];

describe('names as attacks', () => {
  const hostile = ['a b', 'a\n.include x', '0', 'B 0', "a'b", '$x', '*', '+', '', 'a;b', 'a=1', 'ÅB', '-', 'a\u0000'];
  it.each(hostile)('a capacitor called %j is refused', (name) => {
    for (const write of netlists) expect(problemsOf(() => write(renamed('B2', name))).length).toBeGreaterThan(0);
  });
  it.each(hostile)('a block called %j is refused', (name) => {
    for (const write of netlists) expect(problemsOf(() => write(renamed('kiln4', name))).length).toBeGreaterThan(0);
  });
  it.each(hostile.filter((name) => name !== ''))('a pin called %j is refused', (name) => {
    for (const write of netlists)
      expect(problemsOf(() => write(kilnPolygons(), { pins: pinMap({ B2: name }) })).length).toBeGreaterThan(0);
  });
  it.each(['a b', 'a\n.end', '$x', "'1'", ''])('a model or a parameter %j is refused', (word) => {
    for (const device of [
      { model: word },
      { parameters: { w: word } },
      { parameters: { [word]: '1' } },
      { multiplicity: word },
    ])
      expect(problemsOf(() => writeDeviceNetlist(withDevice(device))).length).toBeGreaterThan(0);
  });

  it('names that differ in case only are refused: the format takes them for one', () => {
    for (const write of netlists) {
      expect(problemsOf(() => write(renamed('B2', 'b1')))).toEqual([
        'nets "B1" and "b1" | names that differ in more than case',
      ]);
      expect(problemsOf(() => write(kilnPolygons(), { pins: pinMap({ TOP: 'vss' }) }))).toEqual([
        'nets "VSS" and "vss" | names that differ in more than case',
      ]);
    }
  });

  it('names of two nets alike, and of a capacitor like a dummy, are refused', () => {
    for (const write of netlists) {
      for (const name of ['B1', 'TERM', 'TOP', 'VSS'])
        expect(problemsOf(() => write(renamed('B2', name)))).toContain(
          `net "${name}" once more | each net once; TOP and VSS are nets of their own`,
        );
      expect(problemsOf(() => write(renamed('B2', '_dummy')))).toEqual([
        'capacitor "_dummy" | a name that begins with a letter',
      ]);
    }
  });

  it('names that simulators take for node 0 are refused', () => {
    for (const write of netlists)
      for (const name of ['gnd', 'GND', 'Ground'])
        expect(problemsOf(() => write(renamed('B2', name)))[0]).toContain('node 0');
  });

  it('names that are words of the language it is written in are names', () => {
    for (const write of netlists)
      for (const name of ['constructor', 'hasOwnProperty', 'valueOf'])
        expect(statements(write(renamed('B2', name)))[0]).toContain(name);
  });

  it('whatever the names, the text has the statements it should have or is refused', () => {
    fc.assert(
      fc.property(
        fc.oneof(fc.string({ maxLength: 12 }), fc.constantFrom('B1', 'b1', 'TOP', '_fill', 'TERM_2')),
        fc.constantFrom(...netlists),
        (name, write) => {
          let text: string;
          try {
            text = write(renamed('B2', name));
          } catch (error) {
            expect(error).toBeInstanceOf(InputError);
            return;
          }
          expect(statements(text)).toHaveLength(statements(write(kilnPolygons())).length);
          const devices = statements(text).map(([device]) => device.toLowerCase());
          expect(new Set(devices).size).toBe(devices.length);
        },
      ),
      { numRuns: 300 },
    );
  });
});

describe('drawings that are not whole', () => {
  const relabelled = (change: (labels: Polygons['structures'][number]['labels']) => unknown[]): Polygons => {
    const p = kilnPolygons();
    return {
      ...p,
      structures: p.structures.map((s) =>
        s.name === 'kiln4' ? { ...s, labels: change(s.labels) as typeof s.labels } : s,
      ),
    };
  };

  it('are refused: a net without a name', () => {
    const p = relabelled((labels) => labels.filter(({ text }) => text !== 'B1'));
    for (const write of netlists)
      expect(problemsOf(() => write(p))).toEqual(['no pin label "B1" | a name on a pin layer for each net']);
  });

  it('are refused: a name of no net', () => {
    const p = relabelled((labels) => [...labels, { ...labels[0], text: 'CLK' }]);
    for (const write of netlists)
      expect(problemsOf(() => write(p))).toEqual(['pin label "CLK" | one of B0, B1, B2, B3, TERM, TOP, VSS']);
  });

  it('are refused: a capacitor without a unit', () => {
    const p = kilnPolygons();
    const without = {
      ...p,
      structures: p.structures.map((s) => ({
        ...s,
        references: s.references.map((r) => ({ ...r, cells: r.cells?.map((cell) => (cell === 'B0' ? '-' : cell)) })),
      })),
    } as Polygons;
    for (const write of netlists)
      expect(problemsOf(() => write(without))).toEqual(['no unit of capacitor "B0" | one or more in the drawing']);
  });
});
