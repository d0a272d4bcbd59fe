import { beforeAll, describe, expect, it } from 'vitest';
import { MachineInMemory } from './machine-in-memory.js';

const endings = [
  ...['floorplan.json', 'metrics.json', 'gds', 'polygons.json', 'floorplan.svg', 'hookup.svg'],
  ...['mismatch.svg', 'mismatch.csv'],
  ...['cir', 'lvs.cir', 'extracted.cir', 'lef'],
];
const setsOf = (folder: string, name: string, count: number) =>
  Array.from({ length: count }, (_, i) => endings.map((ending) => `${folder}/${name}-${i + 1}.${ending}`)).flat();
const ask = 'place --bits 5 --effort quick --candidates 3';

describe('place --candidates', () => {
  let machine: MachineInMemory;
  beforeAll(async () => {
    machine = new MachineInMemory();
    expect(await machine.run(ask)).toBe(0);
  });

  it('writes a whole set for each in one go', () => {
    expect(machine.err).toBe('');
    expect(machine.written.map((files) => files.map(({ path }) => path))).toEqual([setsOf('cdac5', 'cdac5', 3)]);
  });

  it('each set is of one floorplan with a name of its own, and the drawing belongs to it', async () => {
    for (const number of [1, 2, 3]) {
      const base = `cdac5/cdac5-${number}`;
      const floorplan = machine.json(`${base}.floorplan.json`);
      expect(floorplan.name).toBe(`cdac5_${number}`);
      expect(machine.json(`${base}.metrics.json`).name).toBe(`cdac5_${number}`);
      expect(machine.json(`${base}.polygons.json`).topStructure).toMatch(new RegExp(`^cdac5_${number}`));
      machine.out = '';
      expect(await machine.run(`check ${base}.floorplan.json ${base}.polygons.json`)).toBe(0);
      expect(machine.out).toMatch(/^no findings\n/);
    }
  });

  it('tells a candidate a line, the best of each figure marked', async () => {
    const told = new MachineInMemory();
    await told.run(ask);
    const lines = told.out.split('\n');
    expect(lines[0]).toBe('cdac5, 5 bits, parallel-plate: 3 candidates, none dominated by another');
    const rows = lines.filter((line) => /^cdac5-\d /.test(line));
    expect(rows.map((row) => row.split(' ')[0])).toEqual(['cdac5-1', 'cdac5-2', 'cdac5-3']);
    const seconds = [1, 2, 3].map(
      (n) => told.json(`cdac5/cdac5-${n}.metrics.json`).gradient.second.inl_lsb_per_ppm_per_um2 as number,
    );
    expect(seconds).toEqual([...seconds].sort((a, b) => a - b));
    expect(rows[0]).toMatch(/^cdac5-1 +\d+ x \d+ +[\d.e-]+ \*/);
    expect(told.out).toContain('second order');
    expect(told.out).toContain('sigma INL');
    expect(told.out).toContain('check: no findings');
    expect(told.out).not.toContain('fewer than');
  });

  it('prints the metrics of all and nothing else with --json', async () => {
    const json = new MachineInMemory();
    expect(await json.run(`${ask} --json --out o`)).toBe(0);
    const { candidates, ...rest } = JSON.parse(json.out);
    expect(rest).toEqual({});
    expect(candidates).toEqual([1, 2, 3].map((n) => json.json(`o/cdac5-${n}.metrics.json`)));
  });

  it('says so where there are fewer than asked for', async () => {
    const few = new MachineInMemory();
    expect(await few.run('place --bits 2 --effort quick --candidates 16')).toBe(0);
    const count = few.written[0].length / endings.length;
    expect(count).toBeGreaterThan(0);
    expect(count).toBeLessThan(16);
    expect(few.out).toContain('fewer than the 16 that were asked for');
  });

  it('takes what an earlier run left of its own kind out of the folder, and nothing else', async () => {
    const again = new MachineInMemory();
    const kept = ['cdac5/cdac5.floorplan.json', 'cdac5/cdac5-17.gds', 'cdac5/notes.txt'];
    for (const path of [...kept, 'cdac5/cdac5-9.gds']) again.put(path, '');
    expect(await again.run(ask)).toBe(0);
    expect([...again.files.keys()].sort()).toEqual([...setsOf('cdac5', 'cdac5', 3), ...kept].sort());
    expect(again.err).toBe(
      'steelyard: cdac5/cdac5-9.gds removed: it belonged to the candidates that were there before\n',
    );
  });

  it('without wires: floorplans, figures and pictures', async () => {
    const bare = new MachineInMemory();
    expect(await bare.run(`${ask} --floorplan-only --pitch 2,3 --out o`)).toBe(0);
    const wanted = [1, 2, 3].flatMap((n) =>
      ['floorplan.json', 'metrics.json', 'floorplan.svg', 'mismatch.svg', 'mismatch.csv'].map(
        (ending) => `o/cdac5-${n}.${ending}`,
      ),
    );
    expect([...bare.files.keys()]).toEqual(wanted);
    expect(bare.json('o/cdac5-2.floorplan.json').core.pitch_um).toEqual([2, 3]);
  });

  it('has no other name in a long name than its number', async () => {
    const name = 'a_name_of_24_characters_';
    const long = new MachineInMemory().put('a.json', {
      format: 'steelyard/array',
      version: 1,
      name,
      bits: 2,
      effort: 'quick',
    });
    expect(await long.run('place a.json --candidates 2')).toBe(0);
    expect(long.json(`${name}/${name}-1.floorplan.json`).name).toBe('a_name_of_24_character_1');
    expect(await long.run(`export ${name}/${name}-1.floorplan.json --to gds --out o`)).toBe(0);
  });

  it.each([
    ['--candidates 1', /^--candidates: found "1"; wanted a whole number from 2 to 16\n$/],
    ['--candidates 17', /^--candidates: found "17"; wanted a whole number from 2 to 16\n$/],
    ['--candidates many', /^--candidates: found "many"/],
    ['--candidates 3 --emphasis wiring', /^place: found both --emphasis and --candidates; wanted one of them/],
    ['--workers 0', /^--workers: found "0"; wanted a whole number from 1 to 64\n$/],
    ['--workers 2.5', /^--workers: found "2.5"/],
  ])('%s is refused', async (flags, said) => {
    const refused = new MachineInMemory();
    expect(await refused.run(`place --bits 4 ${flags}`)).toBe(2);
    expect(refused.err).toMatch(said);
    expect(refused.written).toEqual([]);
  });

  it('has nothing to choose where a floorplan is given', async () => {
    const given = new MachineInMemory();
    given.files.set('f.json', machine.files.get('cdac5/cdac5-1.floorplan.json')!);
    expect(await given.run('place f.json --candidates 3 --workers 2')).toBe(2);
    expect(given.err).toMatch(/^place: found --candidates, --workers; wanted none of them with a floorplan/);
  });
});

describe('Ctrl-C', () => {
  it('among candidates saves those there are', async () => {
    for (const breath of [4, 60]) {
      const machine = new MachineInMemory();
      machine.tick = 30;
      machine.interruptAtBreath = breath;
      expect(await machine.run('place --bits 6 --effort quick --candidates 4 --out o')).toBe(130);
      expect(machine.err).toBe('steelyard: interrupted; the best so far is saved\n');
      const count = machine.written[0].length / endings.length;
      expect([...machine.files.keys()]).toEqual(setsOf('o', 'cdac6', count));
      expect(machine.json('o/cdac6-1.floorplan.json').name).toBe('cdac6_1');
    }
  });
});

describe('threads', () => {
  it('are started where the search takes long enough, are ended again, and change nothing', async () => {
    const alone = new MachineInMemory();
    expect(await alone.run('place --bits 7 --effort quick --workers 1')).toBe(0);
    expect(alone.threads).toEqual({ started: 0, ended: 0 });
    for (const flags of ['--workers 3', '']) {
      const machine = new MachineInMemory();
      machine.cores = 2;
      machine.tick = 45;
      expect(await machine.run(`place --bits 7 --effort quick ${flags}`)).toBe(0);
      expect(machine.threads.started).toBe(flags === '' ? 1 : 2);
      expect(machine.threads.ended).toBe(machine.threads.started);
      expect(machine.files).toEqual(alone.files);
      expect(machine.out).toBe(alone.out);
    }
  });

  it('that die end the run with 5 and a plain word; the others are ended', async () => {
    const machine = new MachineInMemory();
    machine.deadly = 'out of luck';
    machine.tick = 45;
    expect(await machine.run('place --bits 7 --effort quick --workers 3')).toBe(5);
    expect(machine.err).toMatch(/^steelyard: .*a thread of the search ended before its work \(out of luck\)/);
    expect(machine.err).not.toMatch(/^\s+at /m);
    expect(machine.written).toEqual([]);
    expect(machine.threads.ended).toBe(machine.threads.started);
  });
});
