import { describe, expect, it } from 'vitest';
import { MachineInMemory } from '../cli/machine-in-memory.js';
import { readRecords } from '../stream.js';

const structuresIn = (machine: MachineInMemory, path: string): string[] =>
  readRecords(machine.files.get(path)!).structures.map(({ name }) => name);

describe.each(['framed-fingers', 'named-cell', 'under-plate', 'under-fingers'])('%s on the command line', (name) => {
  it('is placed, checked and exported from what was written', async () => {
    const machine = new MachineInMemory();
    expect(await machine.run(`place --bits 4 --effort quick --technology ${name} --out o`)).toBe(0);
    for (const line of [
      'check o/cdac4.floorplan.json',
      'check o/cdac4.polygons.json',
      'check o/cdac4.floorplan.json o/cdac4.polygons.json',
    ]) {
      machine.out = '';
      expect(await machine.run(line)).toBe(0);
      expect(machine.out).toMatch(/^no findings\n/);
    }
    expect(await machine.run('export o/cdac4.floorplan.json --to gds,polygons,svg,spice,lef --out e')).toBe(0);
    expect(machine.text('e/cdac4.polygons.json')).toBe(machine.text('o/cdac4.polygons.json'));
  });
});

it('--stub-cell adds the named cell, and is refused where nothing is named', async () => {
  const machine = new MachineInMemory();
  await machine.run('place --bits 2 --effort quick --technology named-cell --out o');
  expect(structuresIn(machine, 'o/cdac2.gds')).toEqual(['cdac2_unit', 'cdac2']);
  expect(await machine.run('export o/cdac2.floorplan.json --to gds --stub-cell --out e')).toBe(0);
  expect(structuresIn(machine, 'e/cdac2.gds')).toContain('unit_capacitor');
  await machine.run('place --bits 2 --effort quick --out p');
  machine.err = '';
  expect(await machine.run('export p/cdac2.floorplan.json --to gds --stub-cell --out e')).toBe(2);
  expect(machine.err).toContain(
    'export --stub-cell: found units that are drawn; wanted a technology whose unit is a cell',
  );
  expect(await machine.run('export o/cdac2.floorplan.json --to svg --stub-cell --out e')).toBe(2);
  expect(machine.err).toContain('export --stub-cell: found no file that it changes; wanted --to with gds');
});

it('unit_fF beyond the rules ends with 3, which rule and what would do; within them the files carry the unit', async () => {
  const machine = new MachineInMemory();
  const array = { format: 'steelyard/array', version: 1, bits: 3, effort: 'quick' };
  machine.put('large.array.json', { ...array, unit_fF: 900 }).put('small.array.json', { ...array, unit_fF: 8 });
  expect(await machine.run('place large.array.json --out o')).toBe(3);
  expect(machine.err).toMatch(/900 fF does not keep .* 20 um at most, the maxWidth_um of "plate-metal"\.\s+Ask for \d/);
  expect(await machine.run('place small.array.json --out o')).toBe(0);
  for (const file of ['floorplan', 'polygons']) {
    const { capacitance_fF } = machine.json(`o/cdac3.${file}.json`).technology.unit;
    expect(Math.abs(capacitance_fF - 8)).toBeLessThan(0.02);
  }
  machine.out = '';
  expect(await machine.run('check o/cdac3.floorplan.json o/cdac3.polygons.json')).toBe(0);
});

describe('the hookup asked for on the command line', () => {
  it('brings its technology, and is refused beside one that is made for another', async () => {
    const machine = new MachineInMemory();
    expect(await machine.run('place --bits 3 --effort quick --hookup under-plate --out o')).toBe(0);
    const floorplan = machine.json('o/cdac3.floorplan.json');
    expect(floorplan.technology.name).toBe('under-plate');
    expect(floorplan.array).toMatchObject({ hookup: 'under-plate', technology: 'under-plate' });
    expect(Object.keys(floorplan.hookup)).toEqual(['columns', 'buses']);
    expect(await machine.run('place --bits 3 --hookup under-plate --technology parallel-plate --out p')).toBe(2);
    expect(machine.err).toContain('/hookup: found "under-plate"; wanted "channel", as technology "parallel-plate" has');
  });

  it('changes where a floorplan is drawn in another technology', async () => {
    const machine = new MachineInMemory();
    await machine.run('place --bits 3 --effort quick --out o');
    expect(await machine.run('place o/cdac3.floorplan.json --technology under-plate --out p')).toBe(0);
    expect(await machine.run('check p/cdac3.floorplan.json p/cdac3.polygons.json')).toBe(0);
    const [before, after] = ['o', 'p'].map((folder) => machine.json(`${folder}/cdac3.floorplan.json`));
    expect(after.cells).toEqual(before.cells);
    expect(after.array.hookup).toBe('under-plate');
    expect(after.array.tracksPerChannel).toBeUndefined();
  });

  it('too many nets for the columns end with 3, the rule and the way out', async () => {
    const machine = new MachineInMemory();
    const array = { format: 'steelyard/array', version: 1, bits: 8, hookup: 'under-plate', tracksPerChannel: 1 };
    machine.put('narrow.array.json', array);
    expect(await machine.run('place narrow.array.json --out o')).toBe(3);
    expect(machine.err).toMatch(/need 19 trunks at least; 1 is asked for below a column.*Raise tracksPerChannel/s);
  });
});
