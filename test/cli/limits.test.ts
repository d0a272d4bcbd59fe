import { describe, expect, it } from 'vitest';
import { MachineInMemory } from './machine-in-memory.js';

const array = (keys: object) => ({ format: 'steelyard/array', version: 1, bits: 6, effort: 'quick', ...keys });
// Cells alone: what the wires cost has a test of its own below.
const placed = async (keys: object, options = '--floorplan-only') => {
  const machine = new MachineInMemory().put('a.json', array(keys));
  const code = await machine.run(`place a.json --out d ${options}`);
  return { code, machine, metrics: machine.files.has('d/cdac6.metrics.json') && machine.json('d/cdac6.metrics.json') };
};
// Sigma DNL of 6 bits at the middle: 7.94 sigma of a unit.
const mismatch = { localSigma_percent: 2, correlatedSigma_percent: 0, correlationLength_um: 0 };

describe('limits of an array', () => {
  it('that are kept give a yield and exit code 0', async () => {
    const { code, machine, metrics } = await placed({ mismatch, limits: { inl_lsb: 0.5, dnl_lsb: 0.5, yield: 0.98 } });
    expect(code).toBe(0);
    expect(metrics.yield).toMatchObject({ samples: 100_000, seed: 1, method: 'counted' });
    expect(metrics.yield.share).toBeGreaterThan(0.99);
    expect(machine.out).toMatch(
      /^yield +99\.\d+ % within INL 0\.5 and DNL 0\.5 LSB; 95 % interval .*, 100000 arrays drawn$/m,
    );
    expect(machine.out).not.toContain('limit missed');
  });

  it('that are missed give exit code 1, the files all the same', async () => {
    const { code, machine } = await placed({ mismatch, limits: { dnl_lsb: 0.2, yield: 0.98 } });
    expect(code).toBe(1);
    expect(machine.out).toMatch(/^limit missed +The yield is \d+\.\d+ %; the limit is 98 %\.$/m);
    expect(machine.files.has('d/cdac6.floorplan.svg')).toBe(true);
  });

  it('without a yield hold for all errors at three sigma', async () => {
    expect((await placed({ mismatch, limits: { inl_lsb: 0.25, dnl_lsb: 0.5 } })).code).toBe(0);
    const { code, machine } = await placed({ mismatch, limits: { inl_lsb: 0.2, dnl_lsb: 0.4 } });
    expect(code).toBe(1);
    expect(machine.out).toMatch(
      /^limit missed +INL with all errors at three sigma is 0\.23\d* LSB; the limit is 0\.2 LSB\.$/m,
    );
    expect(machine.out).toMatch(
      /^limit missed +DNL with all errors at three sigma is 0\.47\d* LSB; the limit is 0\.4 LSB\.$/m,
    );
  });

  it('take as many arrays as --samples says; the same seed gives the same share', async () => {
    const limits = { dnl_lsb: 0.3 };
    const first = await placed({ mismatch, limits }, '--samples 5000 --json --floorplan-only');
    expect(first.metrics.yield.samples).toBe(5000);
    expect(JSON.parse(first.machine.out).yield).toEqual(first.metrics.yield);
    expect((await placed({ mismatch, limits }, '--samples 5000 --floorplan-only')).metrics.yield).toEqual(
      first.metrics.yield,
    );
    expect((await placed({ mismatch, limits, seed: 2 }, '--samples 5000 --floorplan-only')).metrics.yield.share).not.toBe(first.metrics.yield.share); // prettier-ignore
  });

  it('count the wires of what is drawn', async () => {
    const { metrics, machine } = await placed({ mismatch, limits: { dnl_lsb: 0.3 } }, '');
    expect(metrics.parasitic.dnl_lsb).toBeGreaterThan(0);
    expect(metrics.yield.withoutWiring).toBeGreaterThan(metrics.yield.share);
    expect(machine.out).toMatch(
      /^ +\d[\d.]* % without the gradient, \d[\d.]* % without the wires, \d[\d.]* % with mismatch alone$/m,
    );
  });

  it('are held against a floorplan that is drawn again, too', async () => {
    const { machine } = await placed({ mismatch, limits: { dnl_lsb: 0.2, yield: 0.98 } });
    expect(await machine.run('place d/cdac6.floorplan.json --floorplan-only --samples 2000 --out again')).toBe(1);
    expect(machine.json('again/cdac6.metrics.json').yield.samples).toBe(2000);
  });

  it.each([
    ['{"limits": {"yield": 0.9}}', '/limits: found "yield" alone; wanted "inl_lsb", "dnl_lsb" or both beside it'],
    ['{"limits": {"inl_lsb": 1, "yield": 1}}', '/limits/yield: found 1; wanted less than 1'],
  ])('%s is refused', async (keys, said) => {
    const { code, machine } = await placed(JSON.parse(keys));
    expect(code).toBe(2);
    expect(machine.err).toContain(said);
  });

  it.each([
    ['--samples 5', 'place --samples: found without limits'],
    ['--samples many', 'place --samples: found without limits'],
  ])('are what %s needs', async (options, said) => {
    const { code, machine } = await placed({}, options);
    expect([code, machine.err]).toEqual([2, expect.stringContaining(said)]);
  });
});

it('sigma of every code is written as picture and table', async () => {
  const { machine } = await placed({});
  const rows = machine.text('d/cdac6.mismatch.csv').trimEnd().split('\n');
  expect(rows[0]).toBe('code,inlSigma_lsb,inlSigmaLeastSquares_lsb,dnlSigma_lsb');
  expect(rows.length).toBe(65);
  const { inlSigma_lsb, dnlSigma_lsb } = machine.json('d/cdac6.metrics.json').mismatch;
  const column = (i: number) => rows.slice(1).map((row) => Number(row.split(',')[i]));
  expect(Math.max(...column(1))).toBeCloseTo(inlSigma_lsb, 10);
  expect(Math.max(...column(3))).toBeCloseTo(dnlSigma_lsb, 10);
  expect(machine.text('d/cdac6.mismatch.svg')).toContain('<title>cdac6: random mismatch</title>');
});
