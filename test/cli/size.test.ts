import { describe, expect, it } from 'vitest';
import { MachineInMemory } from './machine-in-memory.js';

const converter = (keys: object) => ({ format: 'steelyard/converter', version: 1, ...keys });
const run = async (line: string, files: Readonly<Record<string, object | string>> = {}) => {
  const machine = new MachineInMemory();
  for (const [path, content] of Object.entries(files)) machine.put(path, content);
  const code = await machine.run(line);
  return { code, out: machine.out, err: machine.err, machine };
};
const json = async (line: string, files?: Readonly<Record<string, object | string>>) => {
  const { code, out, err } = await run(`${line} --json`, files);
  expect([code, err]).toEqual([0, '']);
  return JSON.parse(out);
};

describe('size', () => {
  it('gives the figures as JSON: the largest demand on the unit binds', async () => {
    const sized = await json('size --bits 10');
    expect(sized.thermal.total_fF).toBeCloseTo(104.2355, 4);
    expect(sized.mismatch.unitSigma_percent).toBeCloseTo(0.52109, 5);
    expect(sized.unit).toEqual({ capacitance_fF: 4.32, binding: 'technology', drawn_fF: 4.32 });
    expect(sized.array).toEqual({
      bits: 10,
      units: 1024,
      count: 1,
      limits: { inl_lsb: 0.5, dnl_lsb: 0.5, yield: 0.99 },
    });
    expect(sized.total.capacitance_fF).toBeCloseTo(1024 * 4.32, 9);
    expect(sized.energy).toMatchObject({ conventional: 1363.33398438, monotonic: 255.5 });
    expect(sized.switch).toBeUndefined();
  });

  it.each([
    [{ bits: 8, fullScale_Vpp: 0.05 }, 'thermal'],
    [{ bits: 14 }, 'mismatch'],
    [{ bits: 14, mismatch: { coefficient_percent_um: 0.1, of: 'single' } }, 'technology'],
  ])('%j: the %s decides', async (keys, binding) => {
    const { unit, thermal, mismatch, technology } = await json('size c.json', { 'c.json': converter(keys) });
    expect(unit.binding).toBe(binding);
    expect(unit.capacitance_fF).toBe(Math.max(thermal.unit_fF, mismatch.unit_fF, technology.unit_fF));
    expect(Math.abs(unit.drawn_fF / unit.capacitance_fF - 1)).toBeLessThan(0.005);
  });

  it('counts the coefficient as the file says: of a pair it asks for half the area', async () => {
    const sizes = await Promise.all(
      ['single', 'pair'].map((of) =>
        json('size c.json', { 'c.json': converter({ bits: 14, mismatch: { coefficient_percent_um: 2, of } }) }),
      ),
    );
    const [single, pair] = sizes.map(({ mismatch }) => mismatch.unit_fF);
    // By area and, a little, by the edge.
    expect(single / pair).toBeGreaterThan(1.95);
    expect(single / pair).toBeLessThan(2);
  });

  it('lets the command line override the file', async () => {
    const files = { 'c.json': converter({ bits: 8, fullScale_Vpp: 2, differential: true }) };
    const sized = await json(
      'size c.json --bits 12 --full-scale 0.5 --sampling top-plate --switching monotonic',
      files,
    );
    expect(sized.array).toMatchObject({ bits: 11, units: 2048, count: 2 });
    expect(sized.thermal.total_fF).toBeCloseTo((2 * 1667.768) / 0.25, 1);
  });

  it('writes an array file that place takes, its technology named from where it lies', async () => {
    const { code, machine } = await run('size in/c.json --out made/a/b.array.json', {
      'in/c.json': converter({ bits: 6, technology: 'own/t.json', topLoad_fF: 30 }),
      'in/own/t.json': await new MachineInMemory()
        .readFile(`${new MachineInMemory().root}templates/parallel-plate.technology.json`, 1e6)
        .then((bytes) => new TextDecoder().decode(bytes)),
    });
    expect(code).toBe(0);
    expect(machine.out).toContain('file          made/a/b.array.json');
    const array = machine.json('made/a/b.array.json');
    expect(array).toMatchObject({ format: 'steelyard/array', version: 1, bits: 6, technology: '../../in/own/t.json' });
    expect(await machine.run('place made/a/b.array.json --effort quick --out drawn')).toBe(0);
    const floorplan = machine.json('drawn/cdac6.floorplan.json');
    expect(floorplan.technology.unit.capacitance_fF).toBeCloseTo(array.unit_fF, 3);
  });

  it('splits the largest bit of the array file where the switching does', async () => {
    const { machine } = await run('size --bits 5 --switching splitMsb --out s.json');
    expect(machine.json('s.json').weights).toEqual([1, 1, 1, 2, 2, 4, 4, 8, 8]);
    const { machine: large } = await run('size --bits 12 --switching splitMsb --out s.json');
    expect(large.json('s.json').bits).toBe(12);
    expect(large.out).toContain('the 23 capacitors of a split largest bit are more than an array may have');
  });

  it('explains each figure by formula, numbers and source', async () => {
    const { out } = await run('size --bits 10 --sample-rate 1 --explain');
    expect(out).toContain('  C >= 12 k T 4^N / (a V^2)\n  = 12 x 1.380649e-23 J/K x 300 K x 4^10 / (0.5 x (1 V)^2)\n');
    expect(out).toContain('  R <= t / ((N + 1) ln 2 C)\n  = 83.33 ns / ((10 + 1) ln 2 x 4424 fF)\n  = 2471 ohm\n');
  });

  it('says what it has taken where nothing was said', async () => {
    expect((await run('size --bits 10')).out).toMatch(/^taken +a full scale of 1 V, a single-ended input, /m);
    expect((await run('size --bits 10 --full-scale 1')).out).not.toContain('a full scale of 1 V,');
  });

  it('gives the sides of a plate that is no whole number of units', async () => {
    const { nonUnit } = await json('size --ratio 2.314 --undercut 0.1');
    expect(nonUnit).toMatchObject({ wholeUnits: 1, ratio: 1.314 });
    const [x, y] = nonUnit.sides_um;
    expect((x + y) / (x * y)).toBeCloseTo(8.8 / 4.4 ** 2, 9);
    // Of the unit as sized, where there is a converter.
    const sized = await json('size --bits 14 --ratio 2.314');
    expect(sized.nonUnit.sides_um[0]).toBeLessThan(x);
  });

  it.each([
    ['size', 'size: found no number of bits; wanted --bits, or a file with "bits"'],
    ['size --bits 1', '--bits: found 1; wanted a whole number from 2 to 15'],
    ['size --bits ten', '--bits: found "ten"; wanted a whole number from 2 to 15'],
    ['size --bits 15', '--bits: found 15, for which the array has 15; wanted an array of 2 to 14 bits'],
    ['size --bits 10 --full-scale 0', '--full-scale: found 0; wanted a number above 0'],
    ['size --bits 10 --sampling both', '--sampling: found "both"; wanted "bottom-plate" or "top-plate"'],
    ['size --bits 10 --technology gold', '--technology: found "gold"; wanted a shipped template'],
    ['size --ratio 0.5', '--ratio: found "0.5"; wanted a number of units from 1 to 16383'],
    ['size --ratio 2.5 --undercut 3', '--undercut: found "3"; wanted micrometres from 0 to 1.1'],
    ['size --undercut 3', 'size --undercut: found without --ratio; wanted both'],
    ['size --ratio 2.5 --out a.json', 'size: found no number of bits; wanted --bits'],
  ])('%s ends with 2', async (line, said) => {
    const { code, out, err } = await run(line);
    expect([code, out]).toEqual([2, '']);
    expect(err).toContain(said);
  });

  it.each([
    ['size --bits 14 --full-scale 0.01', 'Ask for 4.32 to 371.808 fF'],
    ['size --bits 14 --full-scale 0.1 --technology named-cell', 'the cell unit_capacitor of 25 fF'],
    ['size --ratio 2.5 --technology framed-fingers', 'Name a technology of parallel plates.'],
  ])('%s ends with 3', async (line, said) => {
    const { code, out, err } = await run(line);
    expect([code, out]).toEqual([3, '']);
    expect(err).toContain(said);
  });
});
