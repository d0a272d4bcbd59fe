import { beforeAll, describe, expect, it } from 'vitest';
import { placeByRule, publishedRules } from '../../src/index.js';
import { MachineInMemory } from './machine-in-memory.js';

const byHand = {
  format: 'steelyard/floorplan',
  version: 1,
  core: { rows: 3, columns: 5, pitch_um: [7.2, 5.7] },
  capacitors: [1, 2, 4, 8].map((weight, bit) => ({ name: `B${bit}`, role: 'bit', weight, units: weight })),
  cells: ['33333', '21012', '23332'].map((row) => [...row].map((bit) => `B${bit}`)),
};

const spiral = placeByRule('spiral', 4, [1, 1]);

let placed: MachineInMemory;
beforeAll(async () => {
  placed = new MachineInMemory();
  expect(await placed.run('place --bits 4 --effort quick --out o')).toBe(0);
});
const machine = (): MachineInMemory => {
  const own = new MachineInMemory().put('by-hand.floorplan.json', byHand).put('s.json', spiral);
  own.put('drawn.json', placed.text('o/cdac4.floorplan.json'));
  return own;
};

/** The drawn array's own figures; that no hookup is better belongs to the run that has proved it. */
const measured = () => {
  const { hookup, ...rest } = placed.json('o/cdac4.metrics.json');
  const { status, ...wires } = hookup;
  expect(status).toBe('proved');
  return { ...rest, hookup: wires };
};

describe('pattern', () => {
  it.each(publishedRules.map(({ name }) => name))('prints %s as a floorplan', async (name) => {
    const own = new MachineInMemory();
    expect(await own.run(`pattern ${name} --bits 6`)).toBe(0);
    expect([JSON.parse(own.out), own.err, own.written.length]).toEqual([placeByRule(name, 6, [1, 1]), '', 0]);
    expect(JSON.parse(own.out)).toMatchObject({
      core: { rows: 8, columns: 8, pitch_um: [1, 1] },
      placement: { method: name },
    });
  });

  it('writes it to a file, on a pitch of its own, that place draws and check accepts', async () => {
    const own = new MachineInMemory();
    expect(await own.run('pattern interleaved --bits 4 --pitch 7.2,5.7 --out f/i.json')).toBe(0);
    expect(own.out).toBe('f/i.json\n');
    expect(own.json('f/i.json')).toMatchObject({ name: 'interleaved_4', core: { pitch_um: [7.2, 5.7] } });
    own.out = '';
    expect(await own.run('place f/i.json --out d')).toBe(0);
    expect(own.out).toContain('\nplacement     interleaved\n');
    expect(await own.run('check d/interleaved_4.floorplan.json d/interleaved_4.polygons.json')).toBe(0);
  });

  it('says why a rule cannot place an odd number of bits: 3', async () => {
    const own = new MachineInMemory();
    expect(await own.run('pattern chessboard --bits 7 --out f.json')).toBe(3);
    expect(own.err).toContain('impossible as asked: The rule chessboard fills a square');
    expect(own.err).toContain('Ask for 6 or 8 bits.');
    expect(own.written).toEqual([]);
  });

  it('names every problem at once', async () => {
    const own = new MachineInMemory();
    expect(await own.run('pattern spira --bits x --pitch 0,0')).toBe(2);
    expect(own.err.split('\n').map((line) => line.split(':')[0])).toEqual(['--bits', '--pitch', 'pattern', '']);
  });
});

describe('compare', () => {
  it('prints figures side by side, the best marked, and says who dominates whom', async () => {
    const own = machine();
    expect(await own.run('compare by-hand.floorplan.json s.json drawn.json')).toBe(0);
    // The pitch is that of the one that has wires.
    expect(own.out).toMatch(
      /^All on a pitch of 7\.\d+ x 5\.7 um, mismatch correlated over \d+\.\d+ um; \* is the best\.\n/,
    );
    expect(own.out).toMatch(/\n {2,}by-hand +spiral_4 +cdac4\n/);
    expect(own.out).toMatch(/\nfirst order INL +LSB per ppm\/um +\S+e-5 +\S+e-6 +0 \*\n/);
    expect(own.out).toMatch(/\narea +um2 +- +- +\d+\n/);
    expect(own.out.replace(/\n +/g, ' ')).toMatch(
      /\ncdac4 dominates by-hand: first order INL 0 against .*, worst along 90 degrees with B2 on/,
    );
    expect([own.err, own.written]).toEqual(['', []]);
  });

  it('parts a table that is too wide', async () => {
    const own = machine();
    own.columns = 60;
    expect(await own.run('compare by-hand.floorplan.json s.json drawn.json')).toBe(0);
    expect(Math.max(...own.out.split('\n').map(({ length }) => length))).toBeLessThanOrEqual(60);
    expect(own.out.match(/\ncolumn nets/g)).toHaveLength(2);
  });

  it('--json is the comparison alone', async () => {
    const own = machine();
    expect(await own.run('compare drawn.json s.json --json --pitch 3,4 --correlation-length 25')).toBe(0);
    const result = JSON.parse(own.out);
    expect(result).toMatchObject({ pitch_um: [3, 4], correlationLength_um: 25 });
    expect(result.floorplans.map(({ name }: { name: string }) => name)).toEqual(['cdac4', 'spiral_4']);
    const metrics = measured();
    expect(result.floorplans[0]).toMatchObject({ area_um2: metrics.area_um2, hookup: metrics.hookup });
    expect(result.best['gradient.first.inl_lsb']).toBe('cdac4');
    expect(result.dominates).toContainEqual(['cdac4', 'spiral_4']);
  });

  it('on its own pitch a drawn floorplan has the figures of its metrics file', async () => {
    const own = machine();
    expect(await own.run('compare drawn.json --json')).toBe(0);
    const [figures] = JSON.parse(own.out).floorplans;
    const metrics = measured();
    for (const part of ['name', 'core', 'hookup', 'area_um2']) expect(figures[part]).toEqual(metrics[part]);
    expect(figures.gradient.second).toEqual(metrics.gradient.second);
    expect(figures.mismatch.placement).toEqual(metrics.mismatch.placement);
  });

  it('--csv is a line for each floorplan under the keys of the metrics', async () => {
    const own = machine();
    expect(await own.run('compare by-hand.floorplan.json drawn.json --csv --pitch own')).toBe(0);
    const lines = own.out
      .trimEnd()
      .split('\n')
      .map((line) => line.split(','));
    expect(lines.map((line) => line.length)).toEqual([18, 18, 18]);
    expect(lines[0].slice(0, 6)).toEqual([
      'name', 'core.rows', 'core.columns', 'core.pitch_um.x', 'core.pitch_um.y', 'gradient.first.inl_lsb_per_ppm_per_um',
    ]); // prettier-ignore
    expect(lines[0].slice(-2)).toEqual(['area_um2', 'total.inl3Sigma_lsb']);
    expect([lines[1][0], lines[1].at(-1), lines[2][0]]).toEqual(['by-hand', '', 'cdac4']);
  });

  it('applies a measured map', async () => {
    const own = machine().put('map.csv', 'x_um,y_um,ppm\n-30,-30,0\n30,-30,0\n-30,30,600\n30,30,600\n');
    expect(await own.run('compare by-hand.floorplan.json drawn.json --gradient map.csv --json')).toBe(0);
    const [byHandFigures, drawn] = JSON.parse(own.out).floorplans;
    // 10 ppm/um upwards: the linear model's figure along 90 degrees, to the second order in it.
    const { inl_lsb_per_ppm_per_um } = byHandFigures.gradient.first;
    expect(byHandFigures.gradient.map.inl_lsb / (10 * inl_lsb_per_ppm_per_um)).toBeCloseTo(1, 3);
    expect(drawn.gradient.map.inl_lsb).toBeLessThan(1e-12);
    expect(await own.run('compare by-hand.floorplan.json drawn.json --gradient map.csv')).toBe(0);
    expect(own.out).toMatch(/\nmeasured map INL +LSB +1\.\d+e-4/);
  });

  it('names what is wrong with a map: line, column, or how far it should reach', async () => {
    const own = machine()
      .put('m.csv', 'x_um,y_um,ppm\n0,0,0\n0,zero,0\n0,0,1\n')
      .put('small.csv', 'x_um,y_um,ppm\n0,0,5\n');
    expect(await own.run('compare s.json --gradient m.csv')).toBe(2);
    expect(own.err).toBe(
      'm.csv:3:3: found "zero"; wanted y_um: a number from -33554 to 33554\n' +
        'm.csv:4:1: found a point at 0, 0 once more; wanted each place once; it stands in line 2\n',
    );
    own.err = '';
    expect(await own.run('compare s.json --gradient small.csv')).toBe(2);
    expect(own.err).toBe(
      'small.csv: found a map from x 0 to 0 and y 0 to 0 um, and a cell at -1.5, 1.5; wanted points that reach as far as the cells\n',
    );
    own.err = '';
    expect(await own.run('compare s.json --gradient none.csv')).toBe(4);
  });

  it('names what is wrong with floorplans: all of them at once, and other weights', async () => {
    const own = machine()
      .put('a.json', { ...byHand, core: { ...byHand.core, rows: 4 } })
      .put('b.json', { ...byHand, bits: 4 })
      .put('six.json', placeByRule('spiral', 6, [1, 1]));
    expect(await own.run('compare a.json s.json b.json')).toBe(2);
    expect(own.err).toMatch(
      /^a\.json:\d+:\d+ \/cells: found 3 rows; wanted 4, as core\.rows says\nb\.json:\d+:\d+ \/bits: found unknown key/,
    );
    own.err = '';
    expect(await own.run('compare s.json six.json')).toBe(2);
    expect(own.err).toBe('six.json: found weights 1 2 4 8 16 32; wanted those of the first floorplan, 1 2 4 8\n');
  });

  it('says where a hookup no longer fits the cells', async () => {
    const own = machine();
    const floorplan = own.json('drawn.json');
    const [top, ...rest] = floorplan.cells as string[][];
    own.put('edited.json', { ...floorplan, name: 'edited', cells: [...rest, top] });
    expect(await own.run('compare drawn.json edited.json')).toBe(0);
    expect(own.err).toMatch(/^edited\.json: The floorplan's hookup does not fit its cells/);
  });
});
