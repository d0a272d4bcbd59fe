import { describe, expect, it } from 'vitest';
import { Infeasible } from '../../src/core/problem.js';
import type { ArraySpec } from '../../src/spec/array-spec.js';
import { tableMarkdown } from '../../src/spec/option-table.js';
import { options } from '../../src/spec/options.js';
import { parseArray } from '../../src/spec/parse-array.js';
import { parseTechnology } from '../../src/spec/parse-technology.js';
import { resolveArray } from '../../src/spec/resolve.js';
import { schema } from '../../src/spec/schema.js';
import { changed, kiln4, linesOf, template, valueOf } from './kiln4.js';

const technology = valueOf(parseTechnology(template('parallel-plate'), 't'));
const technologyWith = (path: (string | number)[], value: unknown) =>
  valueOf(parseTechnology(changed(template('parallel-plate'), path, value), 't'));
const array = (keys: Partial<ArraySpec>): ArraySpec => ({ format: 'steelyard/array', version: 1, ...keys });
const resolve = (keys: Partial<ArraySpec>, drawnIn = technology) => valueOf(resolveArray(array(keys), drawnIn));

describe('an array file, resolved', () => {
  it('has what the example has', () => {
    const { spec, capacitors } = valueOf(resolveArray(valueOf(parseArray(kiln4('kiln4.array.json'), 'a')), technology));
    const floorplan = JSON.parse(kiln4('kiln4.floorplan.json'));
    expect({ ...spec, tracksPerChannel: 2 }).toEqual(floorplan.array);
    expect(capacitors).toEqual(floorplan.capacitors);
  });

  it('has every default where only bits are given', () => {
    expect(resolve({ bits: 10 }).spec).toEqual({
      format: 'steelyard/array',
      version: 1,
      name: 'cdac10',
      bits: 10,
      technology: 'parallel-plate',
      hookup: 'channel',
      unit_fF: 20.064,
      rings: 1,
      termination: 'ring',
      fillTop: 'TOP',
      emphasis: 'balanced',
      effort: 'normal',
      seed: 1,
      balance: 'off',
      gradient: { linear_ppm_per_um: 10, quadratic_ppm_per_um2: 0.05 },
      mismatch: { localSigma_percent: 0.1, correlatedSigma_percent: 0.05, correlationLength_um: 60 },
      pins: { bits: { side: 'bottom' }, top: { side: 'top' } },
      pair: 'none',
    });
  });

  it('has every default of its pins where only a part of them is given', () => {
    expect(resolve({ bits: 4, pins: { bits: { pitch_um: 4 } } }).spec.pins).toEqual({
      bits: { side: 'bottom', pitch_um: 4 },
      top: { side: 'top' },
    });
    expect(resolve({ bits: 4, pins: { top: { side: 'bottom' } } }).spec.pins).toEqual({
      bits: { side: 'bottom' },
      top: { side: 'bottom' },
    });
  });

  it('has pins in an order that names each bit once', () => {
    const refused = (order: string[], more: Partial<ArraySpec> = {}) => {
      const text = JSON.stringify(array({ bits: 3, ...more, pins: { bits: { order } } }), null, 1);
      const result = resolveArray(valueOf(parseArray(text, 'a')), technology, { text, file: 'a.json' });
      return result.ok ? [] : result.issues.map(({ pointer, found, wanted }) => `${pointer} | ${found} | ${wanted}`);
    };
    expect(refused(['B2', 'TERM', 'B1', 'B0'])).toEqual([]);
    expect(refused(['B2', 'B1', 'B0'])).toEqual([]);
    expect(refused(['B2', 'B1', 'B1', 'BO'])).toEqual([
      '/pins/bits/order | 4 pins without "B0" | every bit once',
      '/pins/bits/order/2 | "B1" once more | each pin once',
      '/pins/bits/order/3 | "BO" | "B0", the nearest known pin',
    ]);
    expect(refused(['TERM', 'B0', 'B1', 'B2'], { termination: 'none' })[0]).toMatch('/pins/bits/order/0 | "TERM" | ');
  });

  it('has one switch for each bit where it lists them', () => {
    const refused = (switch_ohm: number | number[], bits: Partial<ArraySpec>) => {
      const result = resolveArray(array({ ...bits, drive: { switch_ohm } }), technology);
      return result.ok ? [] : result.issues.map(({ pointer, found, wanted }) => `${pointer} | ${found} | ${wanted}`);
    };
    expect(refused(1000, { bits: 4 })).toEqual([]);
    expect(refused([4, 3, 2, 1], { bits: 4 })).toEqual([]);
    expect(refused([3, 2, 1], { weights: [1, 2, 3] })).toEqual([]);
    expect(refused([3, 2, 1], { bits: 4 })).toEqual([
      '/drive/switch_ohm | a list of 3 | one for each of the 4 bits, or one number for all',
    ]);
    expect(refused([], { weights: [1, 2, 3] })[0]).toMatch('a list of 0 | one for each of the 3 bits');
    expect(resolve({ bits: 4 }).spec).not.toHaveProperty('drive');
  });

  it('lists the bits from the least significant up, then the termination', () => {
    const { spec, capacitors } = resolve({ weights: [1, 2, 3, 5], termination: 'core' });
    expect(spec.name).toBe('cdac4w');
    expect(capacitors.map((c) => [c.name, c.role, c.weight, c.units])).toEqual([
      ['B0', 'bit', 1, 1],
      ['B1', 'bit', 2, 2],
      ['B2', 'bit', 3, 3],
      ['B3', 'bit', 5, 5],
      ['TERM', 'termination', 1, 1],
    ]);
    expect(resolve({ bits: 14 }).capacitors.at(-2)).toEqual({ name: 'B13', role: 'bit', weight: 8192, units: 8192 });
  });

  it('has no termination without a ring, unless in the core', () => {
    expect(resolve({ bits: 4, rings: 0 }).spec.termination).toBe('none');
    expect(resolve({ bits: 4, rings: 0 }).capacitors).toHaveLength(4);
    expect(resolve({ bits: 4, rings: 0, termination: 'core' }).capacitors).toHaveLength(5);
  });

  it('has as many rings as the proximity reach needs', () => {
    // A ring is a plate of 5.2 um and its wide spacing of 0.5 um: 5.7 um.
    for (const [reach, rings] of [
      [0, 1],
      [5.7, 1],
      [5.701, 2],
      [11.4, 2],
      [17.1, 3],
    ] as const) {
      expect(resolve({ bits: 4 }, technologyWith(['proximityReach_um'], reach)).spec.rings).toBe(rings);
    }
  });

  it('scales mismatch to the unit: coefficients of pairs are those of a difference', () => {
    const of = (path: string[], value: unknown) => resolve({ bits: 4 }, technologyWith(path, value)).spec.mismatch;
    expect(of(['mismatch', 'of'], 'pair').localSigma_percent).toBeCloseTo(0.1 / Math.SQRT2, 12);
    expect(of(['mismatch', 'coefficient_percent_um'], 0.88).localSigma_percent).toBe(0.2);
    const bare = { coefficient_percent_um: 0.44, of: 'single' };
    expect(of(['mismatch'], bare)).toEqual({
      localSigma_percent: 0.1,
      correlatedSigma_percent: 0,
      correlationLength_um: 0,
    });
  });

  it("keeps the file's own gradient, and names the template where the file named a file", () => {
    const { spec } = resolve({ bits: 4, gradient: { linear_ppm_per_um: 3 }, technology: 'mine.technology.json' });
    expect(spec.gradient).toEqual({ linear_ppm_per_um: 3 });
    expect(spec.technology).toBe('parallel-plate');
  });

  it('is refused where it contradicts the technology, all at once and with its places', () => {
    const spec = array({ hookup: 'under-plate' });
    const expected = [
      ' | neither "bits" nor "weights" | one of the two',
      '/hookup | "under-plate" | "channel", as technology "parallel-plate" has it',
    ];
    const text = JSON.stringify(spec, null, 2);
    const placed = resolveArray(spec, technology, { text, file: 'mine.array.json' });
    expect(linesOf(placed)).toEqual(expected);
    expect(placed.ok ? [] : placed.issues.map((p) => [p.file, p.line, p.column])).toEqual([
      ['mine.array.json', 1, 1],
      ['mine.array.json', 4, 13],
    ]);
    const bare = resolveArray(spec, technology);
    expect(linesOf(bare).sort()).toEqual([...expected].sort());
    expect(bare.ok ? [] : bare.issues.map((p) => 'line' in p || 'file' in p)).toEqual([false, false]);
  });

  it('is impossible in a core, a ring or a reach that cannot be', () => {
    expect(() => resolve({ bits: 4, rings: 0, termination: 'ring' })).toThrow(Infeasible);
    expect(() => resolve({ bits: 4, core: { rows: 2, columns: 7 } })).toThrow(/14 cells; the array has 15 units/);
    expect(() => resolve({ bits: 4, core: { rows: 3, columns: 5 }, termination: 'core' })).toThrow(Infeasible);
    expect(() => resolve({ bits: 4 }, technologyWith(['proximityReach_um'], 17.2))).toThrow(/needs 4 rings/);
    expect(resolve({ bits: 4, rings: 3 }, technologyWith(['proximityReach_um'], 17.2)).spec.rings).toBe(3);
    expect(resolve({ bits: 4, core: { rows: 3, columns: 5 } }).spec.core).toEqual({ rows: 3, columns: 5 });
  });
});

describe('the table of options', () => {
  it('is the schema: the same keys, and each documented', () => {
    const keys = options.map((o) => o.key);
    expect(Object.keys(schema('array').properties ?? {})).toEqual(['$schema', 'format', 'version', ...keys]);
    expect(new Set(keys).size).toBe(keys.length);
    const rows = tableMarkdown(options).split('\n');
    for (const { key, help, flag } of options) {
      const row = rows.find((r) => r.startsWith(`| \`${key}\` |`));
      expect(row).toContain(help);
      if (flag !== undefined) expect(row).toContain(`\`${flag.replaceAll('|', '\\|')}\``);
    }
  });

  it('renders as a table of one width', () => {
    const cells = tableMarkdown(options)
      .trimEnd()
      .split('\n')
      .map((row) => row.replaceAll('\\|', '').split('|').length);
    expect(new Set(cells)).toEqual(new Set([7]));
  });

  it('gives every default a value that its own schema takes', () => {
    const { spec } = resolve({ bits: 8 });
    const text = JSON.stringify({ ...spec, mismatch: undefined });
    expect(linesOf(parseArray(text, 'a'))).toEqual([]);
  });
});
