import { beforeAll, describe, expect, it } from 'vitest';
import { coreInCharacters } from '../../src/cli/summary.js';
import type { Floorplan } from '../../src/index.js';
import { MachineInMemory } from './machine-in-memory.js';

const endings = [
  'floorplan.json',
  'metrics.json',
  'gds',
  'polygons.json',
  'floorplan.svg',
  'hookup.svg',
  'mismatch.svg',
  'mismatch.csv',
  'cir',
  'lvs.cir',
  'extracted.cir',
  'lef',
];
const array = { format: 'steelyard/array', version: 1, name: 'rain', bits: 4, effort: 'quick' };

async function placed(line: string, machine = new MachineInMemory()): Promise<MachineInMemory> {
  const code = await machine.run(line);
  expect({ code, err: machine.err }).toEqual({ code: 0, err: '' });
  return machine;
}

describe('place', () => {
  let plain: MachineInMemory;
  beforeAll(async () => {
    plain = await placed('place in/rain.array.json', new MachineInMemory().put('in/rain.array.json', array));
  });

  it('writes all files in one set into a folder of the name of the array, and says where they lie', () => {
    expect(plain.written.length).toBe(1);
    const paths = plain.written[0]?.map(({ path }) => path);
    expect(paths).toEqual(endings.map((ending) => `rain/rain.${ending}`));
    for (const path of paths ?? []) expect(plain.out).toContain(path);
  });

  it('prints a summary without control characters: the core, the own gradient first, the rest after it', () => {
    const lines = plain.out.split('\n');
    expect(lines[0]).toMatch(/^rain, 4 bits, \d+ rows x \d+ columns, pitch [\d.]+ x [\d.]+ um, parallel-plate$/);
    const { rows } = plain.json('rain/rain.floorplan.json').core;
    expect(lines.slice(2, 2 + rows).join('\n')).toMatch(/^( {2}[0-3.]( [0-3.])*\n?)+$/);
    const labels = lines.slice(3 + rows).map((line) => line.slice(0, 14).trim());
    expect(labels.slice(0, 2)).toEqual(['gradient', 'first order']);
    for (const label of ['second order', 'lower bound', 'placement', 'hookup', 'area', 'check', 'files']) {
      expect(labels).toContain(label);
    }

    expect(plain.out).not.toMatch(/[\u0000-\u0009\u000b-\u001f]/);
  });

  it('shows colour only where it is asked for', async () => {
    const machine = new MachineInMemory();
    machine.colour = true;
    await placed('place --bits 2 --floorplan-only', machine);
    expect(machine.out).toContain('\u001b[1mcdac2');
  });

  it('prints the metrics file and nothing else with --json', async () => {
    const machine = await placed('place rain.array.json --json', new MachineInMemory().put('rain.array.json', array));
    expect(machine.out).toBe(machine.text('rain/rain.metrics.json'));
    expect(machine.text('rain/rain.metrics.json')).toBe(plain.text('rain/rain.metrics.json'));
  });

  it('gives the same files for --bits as for an array file that says no more', async () => {
    const typed = await placed('place --bits 4 --out a');
    const read = await placed(
      'place x.json --out a',
      new MachineInMemory().put('x.json', { format: 'steelyard/array', version: 1, bits: 4 }),
    );
    expect(typed.written).toEqual(read.written);
  });

  it('gives the same files however fast the machine is', async () => {
    const runs: MachineInMemory[] = [];
    for (const tick of [0, 5, 1000]) {
      const machine = new MachineInMemory();
      machine.tick = tick;
      runs.push(await placed('place --bits 6 --effort quick --out a', machine));
    }
    expect(runs[1]?.written).toEqual(runs[0]?.written);
    expect(runs[2]?.written).toEqual(runs[0]?.written);
  });

  it('lets the command line override the file, and keeps the rest of it', async () => {
    const machine = new MachineInMemory().put('rain.array.json', { ...array, seed: 5, emphasis: 'wiring' });
    await placed('place rain.array.json --bits 5 --seed 9 --core 7x5 --rings 2 --out o', machine);
    const { array: resolved, core } = machine.json('o/rain.floorplan.json');
    expect(resolved).toMatchObject({ bits: 5, seed: 9, rings: 2, emphasis: 'wiring', effort: 'quick' });
    expect([core.rows, core.columns]).toEqual([7, 5]);
  });

  it('--bits replaces weights', async () => {
    const { bits: _, ...rest } = array;
    const machine = new MachineInMemory().put('w.json', { ...rest, weights: [1, 2, 3] });
    await placed('place w.json --bits 3 --out o', machine);
    expect(machine.json('o/rain.floorplan.json').array).toMatchObject({ bits: 3 });
    expect(machine.json('o/rain.floorplan.json').array).not.toHaveProperty('weights');
  });

  it('takes a technology file relative to the array file, or to here from the command line', async () => {
    const shipped = new MachineInMemory();
    await shipped.run('technology parallel-plate');
    const own = JSON.stringify({ ...JSON.parse(shipped.out), name: 'tin-roof' });
    const beside = new MachineInMemory().put('in/t.json', own).put('in/a.json', { ...array, technology: 't.json' });
    await placed('place in/a.json --out o', beside);
    expect(beside.json('o/rain.floorplan.json').technology.name).toBe('tin-roof');
    const typed = new MachineInMemory().put('there/t.json', own);
    await placed('place --bits 4 --technology there/t.json --out o', typed);
    expect(typed.json('o/cdac4.floorplan.json').technology.name).toBe('tin-roof');
  });

  it('--floorplan-only writes floorplan, metrics and pictures, on a pitch of its own where given', async () => {
    const machine = await placed('place --bits 4 --floorplan-only --pitch 3.5,2 --out o');
    expect(machine.written[0]?.map(({ path }) => path)).toEqual(
      ['floorplan.json', 'metrics.json', 'floorplan.svg', 'mismatch.svg', 'mismatch.csv'].map(
        (ending) => `o/cdac4.${ending}`,
      ),
    );
    const metrics = machine.json('o/cdac4.metrics.json');
    expect(metrics.core.pitch_um).toEqual([3.5, 2]);
    expect(metrics).not.toHaveProperty('area_um2');
    expect(Object.keys(metrics.hookup)).toEqual(['columnNets']);
    expect(machine.out).not.toMatch(/^check/m);
  });

  it.each(['1.00005,2', '0,1', '1e3,1', '-1,1', 'a,b', '1,2,3', `${'9'.repeat(15)},1`])(
    'refuses a pitch of %s',
    async (pitch) => {
      const machine = new MachineInMemory();
      expect(await machine.run(`place --bits 4 --floorplan-only --pitch ${pitch}`)).toBe(2);
      expect(machine.err).toMatch(/^--pitch: found ".*"; wanted X,Y in micrometres/);
    },
  );

  it('shows progress on standard error where that is a terminal, from 0 to 1 and never back', async () => {
    const machine = new MachineInMemory();
    machine.stderrIsTerminal = true;
    await placed('place --bits 6 --floorplan-only', machine);
    expect(machine.shares.length).toBeGreaterThan(1);
    expect(machine.shares).toEqual([...machine.shares].sort((a, b) => a - b));
    expect(Math.max(...machine.shares)).toBeLessThanOrEqual(1);
    expect(machine.barStopped).toBe(true);
  });
});

describe('place with a floorplan', () => {
  it('keeps the cells and draws new wires', async () => {
    const first = await placed('place --bits 5 --effort quick --out o');
    const cells = first.json('o/cdac5.floorplan.json').cells;
    const bare = { ...first.json('o/cdac5.floorplan.json') };
    for (const key of ['array', 'placement', 'hookup', 'technology', 'name']) delete bare[key];
    const again = await placed('place mine.json', new MachineInMemory().put('mine.json', bare));
    expect(again.json('cdac5/cdac5.floorplan.json').cells).toEqual(cells);
    expect(again.out).toContain('The floorplan brings no technology; it is drawn in parallel-plate.');
    expect(await again.run('check cdac5/cdac5.floorplan.json cdac5/cdac5.polygons.json')).toBe(0);
  });

  it('redraws in another technology: what came from the former one comes from the new one', async () => {
    const machine = await placed('place --bits 4 --effort quick --out o');
    const { technology } = machine.json('o/cdac4.floorplan.json');
    const gradient = { linear_ppm_per_um: 20, quadratic_ppm_per_um2: 0.1 };
    machine.put('t.json', { ...technology, name: 'tin-roof', gradient });
    machine.out = '';
    await placed('place o/cdac4.floorplan.json --technology t.json --out p', machine);
    const moved = machine.json('p/cdac4.floorplan.json');
    expect(moved.technology.name).toBe('tin-roof');
    expect(moved.array).toMatchObject({ technology: 'tin-roof', gradient });
    expect(moved.cells).toEqual(machine.json('o/cdac4.floorplan.json').cells);
  });

  it('never writes over its input', async () => {
    const machine = await placed('place --bits 4 --effort quick');
    const before = machine.text('cdac4/cdac4.floorplan.json');
    expect(await machine.run('place cdac4/cdac4.floorplan.json')).toBe(2);
    expect(machine.err).toMatch(/^cdac4\/cdac4\.floorplan\.json: found an input of this run; wanted another folder/);
    expect(await machine.run('place ./cdac4/cdac4.floorplan.json --out ./cdac4')).toBe(2);
    expect(machine.written.length).toBe(1);
    expect(machine.text('cdac4/cdac4.floorplan.json')).toBe(before);
  });

  it('refuses what it would ignore', async () => {
    const machine = await placed('place --bits 4 --effort quick');
    expect(await machine.run('place cdac4/cdac4.floorplan.json --bits 5 --seed 2 --out o')).toBe(2);
    expect(machine.err).toBe(
      'place: found --bits, --seed; wanted none of them with a floorplan: its cells are kept as they are\n',
    );
  });
});

describe('Ctrl-C', () => {
  it('during the search: 130, and all files of one floorplan that says so', async () => {
    const machine = new MachineInMemory();
    machine.interruptAtBreath = 3;
    expect(await machine.run('place --bits 6 --out o')).toBe(130);
    expect(machine.err).toBe('steelyard: interrupted; the best so far is saved\n');
    expect(machine.written[0]?.map(({ path }) => path)).toEqual(endings.map((ending) => `o/cdac6.${ending}`));
    expect(machine.json('o/cdac6.floorplan.json').placement.status).toBe('interrupted');
    expect(machine.json('o/cdac6.metrics.json').status).toBe('interrupted');
    machine.interruptAtBreath = Infinity;
    expect(await machine.run('check o/cdac6.floorplan.json o/cdac6.polygons.json')).toBe(0);
  });

  it('before the first placement: 130, and nothing is written', async () => {
    const machine = new MachineInMemory();
    machine.interruptAtBreath = 1;
    expect(await machine.run('place --bits 6 --out o')).toBe(130);
    expect(machine.err).toBe('steelyard: interrupted before there was anything to save: nothing written\n');
    expect(machine.out).toBe('');
    expect(machine.written).toEqual([]);
  });

  it('stops the progress bar', async () => {
    const machine = new MachineInMemory();
    machine.stderrIsTerminal = true;
    machine.interruptAtBreath = 3;
    expect(await machine.run('place --bits 6 --out o --floorplan-only')).toBe(130);
    expect(machine.barStopped).toBe(true);
  });
});

describe('a set that cannot be written', () => {
  it('is 4, which and why, with nothing on standard output', async () => {
    const machine = new MachineInMemory();
    machine.broken.set('o/cdac4.gds', 'ENOSPC');
    expect(await machine.run('place --bits 4 --effort quick --out o')).toBe(4);
    expect(machine.err).toBe('steelyard: o/cdac4.gds could not be written: no space left (ENOSPC)\n');
    expect(machine.out).toBe('');
    expect(machine.written).toEqual([]);
  });
});

describe('the core in characters', () => {
  const floorplan = (rows: number, columns: number): Floorplan => ({
    format: 'steelyard/floorplan',
    version: 1,
    core: { rows, columns, pitch_um: [1, 1] },
    capacitors: [
      ...Array.from({ length: 11 }, (_, bit) => ({ name: `B${bit}`, role: 'bit' as const, weight: 1, units: 1 })),
      { name: 'TERM', role: 'termination', weight: 1, units: 1 },
    ],
    cells: Array.from({ length: rows }, () =>
      Array.from({ length: columns }, (_, c) => ['B0', 'B10', 'TERM', '-'][c % 4] ?? ''),
    ),
  });
  it('gives bits digits, then letters, the termination T, fill a dot', () => {
    expect(coreInCharacters(floorplan(2, 4), 80)).toEqual(['0 a T .', '0 a T .']);
  });
  it('leaves the blanks out where they do not fit, and all where the rest does not', () => {
    expect(coreInCharacters(floorplan(1, 4), 7)).toEqual(['0 a T .']);
    expect(coreInCharacters(floorplan(1, 4), 6)).toEqual(['0aT.']);
    expect(coreInCharacters(floorplan(1, 4), 3)).toEqual([]);
    expect(coreInCharacters(floorplan(41, 4), 80)).toEqual([]);
  });
});
