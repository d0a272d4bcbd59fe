import { describe, expect, it } from 'vitest';
import { options, schemaNames } from '../../src/index.js';
import { MachineInMemory } from './machine-in-memory.js';

const outcome = async (line: string, machine = new MachineInMemory()) => {
  const code = await machine.run(line);
  return { code, out: machine.out, err: machine.err, written: machine.written.length };
};

describe('a command line that is none ends with 2, says what was found and what exists, and writes nothing', () => {
  const commands = 'place, pattern, compare, check, export, size, schema, technology';
  const cases: [line: string, said: string][] = [
    ['', `steelyard: found no command; wanted one of ${commands} (steelyard --help)`],
    ['plaice', `steelyard: found the command "plaice"; wanted one of ${commands}`],
    ['simulate x.json', `simulate: found a command that is not available yet; wanted one of ${commands}`],
    ['place', 'place: found neither a file nor --bits; wanted one of them, as in: steelyard place --bits 8'],
    ['place --bits', 'place --bits <count>: found no value; wanted one'],
    ['place a.json b.json', 'place: found too many arguments; wanted: steelyard place [options] [FILE]'],
    ['place --bits 4 --pitch 1,1', 'place --pitch: found without --floorplan-only; wanted both'],
    ['place --bits 4 --floorplan-only --pitch 1', '--pitch: found "1"; wanted X,Y in micrometres, such as 7.2,5.7'],
    ['place --bits 4 --floorplan-only --pitch 1,0', '--pitch: found "1,0"; wanted X,Y in micrometres'],
    ['place --bits 99', '--bits: found 99; wanted a whole number from 2 to 14'],
    ['place --bits four', '--bits: found "four"; wanted a whole number from 2 to 14'],
    ['place --bits 4.5', '--bits: found "4.5"; wanted a whole number from 2 to 14'],
    ['place --bits 4 --core 3', '--core: found "3"; wanted ROWSxCOLUMNS, such as 15x17'],
    ['place --bits 4 --emphasis strong', '--emphasis: found "strong"; wanted'],
    ['place --bits 4 --effort some', '--effort: found "some"; wanted "quick", "normal" or "thorough"'],
    ['place --bits 4 --seed -1', '--seed: found "-1"; wanted a whole number'],
    ['place --bits 4 --rings 9', '--rings: found 9; wanted a whole number from 0 to 3'],
    ['place --bits 4 --balance on', '--balance: found "on"; wanted "off" ("on" is not available yet)'],
    ['place --bits 4 --hookup under', '--hookup: found "under"; wanted "channel" or "under-plate"'],
    [
      'place --bits 4 --technology pp',
      '--technology: found "pp"; wanted a shipped template (framed-fingers, named-cell, parallel',
    ],
    ['pattern', 'pattern: found no --bits; wanted --bits <count>'],
    ['pattern spiral', 'pattern: found no --bits; wanted --bits <count>'],
    ['pattern spirl --bits 6', 'pattern: found "spirl"; wanted "spiral", the nearest known rule'],
    ['pattern checkerboard --bits 6', 'pattern: found "checkerboard"; wanted "chessboard", the nearest known rule'],
    [
      'pattern q --bits 6',
      'pattern: found "q"; wanted a known rule: "row-by-row", "chessboard", "spiral", "interleaved"',
    ],
    ['pattern spiral --bits 99', '--bits: found 99; wanted a whole number from 2 to 14'],
    ['pattern spiral --bits 6 --pitch 1', '--pitch: found "1"; wanted X,Y in micrometres, such as 7.2,5.7'],
    ['compare', 'compare: found no FLOORPLAN; wanted: steelyard compare [options] <FLOORPLAN...>'],
    ['compare a.json --json --csv', 'compare: found both --json and --csv; wanted one of them'],
    ['compare a.json --pitch mine', '--pitch: found "mine"; wanted own, or X,Y in micrometres, such as 7.2,5.7'],
    ['compare a.json --correlation-length -3', '--correlation-length: found "-3"; wanted a number from 0 to 1000000'],
    ['check', 'check: found no FILE; wanted: steelyard check [options] <FILE> [POLYGONS]'],
    ['check a b c', 'check: found too many arguments'],
    ['export', 'export: found no --to; wanted --to <formats>'],
    ['export a.json --to dxf', 'export --to: found "dxf"; wanted one or more of gds, polygons, svg, spice, lef'],
    ['export a.json --to report', 'export --to: found report, not available yet; wanted one or more of gds,'],
    ['export a.json --to spice --devices all', 'export --devices: found "all"; wanted units or merged'],
    ['export a.json --to spice --dummies no', 'export --dummies: found "no"; wanted include or omit'],
    ['export a.json --to polygons --flat', 'export --flat: found no file that it changes; wanted --to with gds'],
    ['export a.json --to svg --layers m.json', 'export --layers: found no file that it changes; wanted --to with gds'],
    ['export a.json --to polygons --pins m.json', 'export --pins: found no file that it changes; wanted --to with gds'],
    [
      'export a.json --to lef --devices units',
      'export --devices: found no file that it changes; wanted --to with spice',
    ],
    [
      'export a.json --to gds --dummies omit',
      'export --dummies: found no file that it changes; wanted --to with spice',
    ],
    ['export a.json --to lef --date 2031-01-01', 'export --date: found no file that it changes; wanted --to with gds'],
    ['schema arrays', 'schema: found "arrays"; wanted one of array, floorplan, polygons, metrics, '],
    ['technology silver', 'technology: found "silver"; wanted one of '],
    ['technology ../package', 'technology: found "../package"; wanted one of '],
    ['--debug', 'steelyard --debug: found an unknown option; wanted one of'],
  ];
  it.each(cases)('steelyard %s', async (line, said) => {
    const { code, out, err, written } = await outcome(line);
    expect({ code, out, written }).toEqual({ code: 2, out: '', written: 0 });
    expect(err).toContain(said);
    expect(err).toMatch(/\n$/);
  });

  const later: [command: string, option: string][] = [['compare a.json', '--out report.html']];
  it.each(later)('%s %s is refused by name', async (command, option) => {
    const { code, err } = await outcome(`${command} ${option}`);
    const name = option.split(/[ =]/)[0];
    expect(code).toBe(2);
    expect(err).toContain(
      `${command.split(' ')[0]} ${name}: found an option that is not available yet; wanted one of `,
    );
  });

  it('tells an unknown option from one that comes later', async () => {
    expect((await outcome('place --bits 4 --candidate 3')).err).toContain('place --candidate: found an unknown option');
  });

  it('names several problems at once', async () => {
    const { err } = await outcome('place --bits 99 --seed x --core 3 --effort none');
    expect(err.split('\n').map((line) => line.split(':')[0])).toEqual(['--core', '--bits', '--effort', '--seed', '']);
  });
});

describe('help', () => {
  it.each(['place', 'pattern', 'compare', 'check', 'export', 'schema', 'technology'])(
    'of %s shows options and an example',
    async (name) => {
      const { code, out, err } = await outcome(`${name} --help`);
      expect({ code, err }).toEqual({ code: 0, err: '' });
      expect(out).toMatch(new RegExp(`^Usage: steelyard ${name} `));
      expect(out).toMatch(/\nExample:\n {2}steelyard \w/);
    },
  );

  it('of place describes each flag of the options table with its default', async () => {
    const machine = new MachineInMemory();
    machine.columns = 10_000;
    const { out } = await outcome('place --help', machine);
    for (const { flag, help, standard } of options) {
      if (flag === undefined) continue;
      const line = out.split('\n').find((each) => each.includes(`${flag} `)) ?? '';
      expect(line).toContain(help);
      if (standard !== '-') expect(line).toContain(`(default: ${standard.replace(/[`"]/g, '')})`);
    }
  });

  it('shows examples that work as they stand, one after another', { timeout: 120_000 }, async () => {
    for (const name of ['place', 'pattern', 'compare', 'check', 'export', 'schema', 'technology']) {
      const { out } = await outcome(`${name} --help`);
      const machine = new MachineInMemory();
      const lines = out.slice(out.indexOf('\nExample:')).match(/^ {2}steelyard .*$/gm) ?? [];
      expect(lines.length).toBeGreaterThan(0);
      for (const line of lines) expect(await machine.run(line.trim().replace(/^steelyard /, ''))).toBe(0);
      expect(machine.err).toBe('');
    }
  });
});

describe('what needs no input file', () => {
  it('--version prints the version of the package', async () => {
    const { code, out } = await outcome('--version');
    expect(code).toBe(0);
    expect(out).toMatch(/^\d+\.\d+\.\d+\n$/);
  });

  it('schema lists the names and prints each one as JSON Schema', async () => {
    expect((await outcome('schema')).out).toBe(schemaNames.map((name) => `${name}\n`).join(''));
    for (const name of schemaNames) {
      const { code, out } = await outcome(`schema ${name}`);
      expect(code).toBe(0);
      expect(JSON.parse(out).$schema).toBe('https://json-schema.org/draft/2020-12/schema');
    }
  });

  it('technology lists the templates, one line each, and prints one as its file is', async () => {
    const list = (await outcome('technology')).out.trimEnd().split('\n');
    expect(list.map((line) => line.split(' ')[0])).toEqual([
      'framed-fingers',
      'named-cell',
      'parallel-plate',
      'under-fingers',
      'under-plate',
    ]);
    for (const line of list) expect(line).toMatch(/^[a-z-]+ +Generic .*not foundry data/i);
    for (const line of list) {
      const name = line.split(' ')[0] ?? '';
      expect(JSON.parse((await outcome(`technology ${name}`)).out)).toMatchObject({
        format: 'steelyard/technology',
        name,
      });
    }
  });
});
