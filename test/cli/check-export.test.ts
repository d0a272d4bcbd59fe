import { beforeAll, describe, expect, it } from 'vitest';
import { MachineInMemory } from './machine-in-memory.js';

const floorplanFile = 'o/cdac4.floorplan.json';
const polygonsFile = 'o/cdac4.polygons.json';
let placed: MachineInMemory;
/** A machine of its own with the files of the placed array. */
const machine = () => {
  const copy = new MachineInMemory();
  for (const [path, bytes] of placed.files) copy.files.set(path, bytes);
  return copy;
};

beforeAll(async () => {
  placed = new MachineInMemory();
  expect(await placed.run('place --bits 4 --effort quick --out o')).toBe(0);
});

/** The polygon list with its first stub gone. */
function withoutOneStub(polygons: {
  topStructure: string;
  structures: { name: string; polygons: { part?: string }[] }[];
}) {
  const top = polygons.structures.find(({ name }) => name === polygons.topStructure);
  const at = top?.polygons.findIndex(({ part }) => part === 'stub') ?? -1;
  expect(at).toBeGreaterThanOrEqual(0);
  top?.polygons.splice(at, 1);
  return polygons;
}

describe('check', () => {
  it.each([`check ${floorplanFile}`, `check ${polygonsFile}`, `check ${floorplanFile} ${polygonsFile}`])(
    'steelyard %s finds nothing in what place wrote',
    async (line) => {
      const own = machine();
      expect(await own.run(line)).toBe(0);
      expect(own.out).toMatch(/^no findings\nwithin 5 um of 15 units of bits:\n/);
      expect(own.err).toBe('');
      own.out = '';
      expect(await own.run(`${line} --json`)).toBe(0);
      expect(JSON.parse(own.out)).toMatchObject({ findings: [], neighbourhood: { reach_um: 5, units: 15 } });
      expect(own.written).toEqual([]);
    },
  );

  it('finds a wire that is missing: 1, in words or as JSON', async () => {
    const own = machine().put('broken.json', withoutOneStub(placed.json(polygonsFile)));
    expect(await own.run('check broken.json')).toBe(1);
    expect(own.out).toMatch(/\bB\d\b/);
    const lines = own.out.trimEnd().split('\n').length;
    own.out = '';
    expect(await own.run('check broken.json --json')).toBe(1);
    const { findings } = JSON.parse(own.out);
    expect(findings.length).toBe(lines);
    for (const finding of findings)
      expect(finding).toMatchObject({ rule: expect.any(String), text: expect.any(String) });
  });

  it('tells a drawing of another floorplan: 1', async () => {
    const own = machine();
    const floorplan = own.json(floorplanFile);
    // Two cells of different bits change places.
    const cells: string[] = floorplan.cells.flat();
    const [one, other] = [cells.indexOf('B3'), cells.indexOf('B2')];
    [cells[one], cells[other]] = ['B2', 'B3'];
    const { rows, columns } = floorplan.core;
    own.put('changed.json', {
      ...floorplan,
      hookup: undefined,
      placement: undefined,
      cells: Array.from({ length: rows }, (_, row) => cells.slice(row * columns, (row + 1) * columns)),
    });
    expect(await own.run(`check changed.json ${polygonsFile}`)).toBe(1);
    expect(own.out).not.toContain('no findings');
  });

  it('says that it routes anew where the hookup no longer fits the cells', async () => {
    const own = machine();
    const floorplan = own.json(floorplanFile);
    own.put('edited.json', {
      ...floorplan,
      hookup: { ...floorplan.hookup, channels: floorplan.hookup.channels.map(() => []) },
    });
    expect(await own.run('check edited.json')).toBe(0);
    expect(own.err).toContain('routed anew');
    expect(own.out).toMatch(/^no findings\n/);
  });

  it('lists the problems of both files at once', async () => {
    const own = machine()
      .put('a.json', '{"format": "steelyard/floorplan"}')
      .put('b.json', '{"format": "steelyard/polygons"}');
    expect(await own.run('check a.json b.json')).toBe(2);
    expect(own.err).toMatch(/^a\.json:1:1/m);
    expect(own.err).toMatch(/^b\.json:1:1/m);
  });

  it('wants the floorplan first', async () => {
    const own = machine();
    expect(await own.run(`check ${polygonsFile} ${floorplanFile}`)).toBe(2);
    expect(own.err).toBe('check: found a polygons file first; wanted the floorplan, then its polygons\n');
  });
});

describe('export', () => {
  it('gives the same files as place did, in the formats asked for', async () => {
    const own = machine();
    expect(await own.run(`export ${floorplanFile} --to lef,svg,spice,gds,polygons --out e`)).toBe(0);
    const endings = [
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
    expect(own.written[0]?.map(({ path }) => path)).toEqual(endings.map((ending) => `e/cdac4.${ending}`));
    for (const ending of endings) expect(own.text(`e/cdac4.${ending}`)).toBe(placed.text(`o/cdac4.${ending}`));
    expect(own.out).toBe(endings.map((ending) => `e/cdac4.${ending}\n`).join(''));
    expect(own.err).toBe('');
  });

  it('writes only what is asked for', async () => {
    const own = machine();
    expect(await own.run(`export ${floorplanFile} --to gds --out e`)).toBe(0);
    expect(own.written[0]?.map(({ path }) => path)).toEqual(['e/cdac4.gds']);
  });

  it('puts a date of its own into the stream file, and nowhere else', async () => {
    const own = machine();
    expect(await own.run(`export ${floorplanFile} --to gds,polygons --out e --date 2031-02-28`)).toBe(0);
    expect(own.text('e/cdac4.polygons.json')).toBe(placed.text(polygonsFile));
    const bytes = own.files.get('e/cdac4.gds') ?? new Uint8Array();
    const view = new DataView(bytes.buffer, bytes.byteOffset);
    // HEADER has 6 bytes; BGNLIB's date starts 4 bytes into its record.
    expect([10, 12, 14].map((at) => view.getInt16(at))).toEqual([2031, 2, 28]);
    expect(await own.run(`export ${floorplanFile} --to gds --out e --date 2031-02-29`)).toBe(2);
    expect(own.err).toContain('2031-02-29');
  });

  it('renumbers layers by a map, and what it writes passes the check', async () => {
    const map = {
      format: 'steelyard/layers',
      version: 1,
      layers: [{ name: 'plate-metal', stream: { layer: 123, datatype: 4 } }],
    };
    const own = machine().put('map.json', map);
    expect(await own.run(`export ${floorplanFile} --to polygons --out e --layers map.json`)).toBe(0);
    const numbers = (text: string) => new Set(text.match(/"layer": \d+, "datatype": \d+/g));
    expect(numbers(own.text('e/cdac4.polygons.json'))).toContain('"layer": 123, "datatype": 4');
    expect(numbers(own.text('e/cdac4.polygons.json'))).not.toContain('"layer": 23, "datatype": 0');
    expect(await own.run('check e/cdac4.polygons.json')).toBe(0);
  });

  it('refuses a map of layers that are not there, by file and pointer', async () => {
    const map = {
      format: 'steelyard/layers',
      version: 1,
      layers: [{ name: 'plate-mettle', stream: { layer: 1, datatype: 0 } }],
    };
    const own = machine().put('map.json', map);
    expect(await own.run(`export ${floorplanFile} --to gds --layers map.json`)).toBe(2);
    expect(own.err).toMatch(/^map\.json \/layers\/0\/name: found "plate-mettle"; wanted "plate-metal"/);
  });

  it('writes the netlists that are asked for', async () => {
    const own = machine();
    expect(await own.run(`export ${floorplanFile} --to spice --out e --devices merged --dummies omit`)).toBe(0);
    expect(own.written[0]?.map(({ path }) => path)).toEqual([
      'e/cdac4.cir',
      'e/cdac4.lvs.cir',
      'e/cdac4.extracted.cir',
    ]);
    expect(own.text('e/cdac4.cir')).not.toMatch(/dummy/);
    expect(own.text('e/cdac4.lvs.cir')).toMatch(/^CB3 TOP B3 cpp w=4.4u l=4.4u m=8$/m);
    expect(own.text('e/cdac4.lvs.cir')).not.toMatch(/dummy/);
    expect(own.text('e/cdac4.lvs.cir')).not.toBe(placed.text('o/cdac4.lvs.cir'));
    const plain = machine();
    expect(await plain.run(`export ${floorplanFile} --to spice --out e --devices units --dummies include`)).toBe(0);
    expect(plain.text('e/cdac4.lvs.cir')).toBe(placed.text('o/cdac4.lvs.cir'));
  });

  it('writes a flat stream file, and nothing else flat', async () => {
    const own = machine();
    expect(await own.run(`export ${floorplanFile} --to gds,polygons --out e --flat`)).toBe(0);
    expect(own.text('e/cdac4.polygons.json')).toBe(placed.text(polygonsFile));
    expect(own.text('e/cdac4.gds')).not.toContain('cdac4_unit');
    expect(placed.text('o/cdac4.gds')).toContain('cdac4_unit');
  });

  const pins = {
    format: 'steelyard/pins',
    version: 1,
    pins: [
      { pin: 'B0', name: 'sar_d[0]' },
      { pin: 'TOP', name: 'vdac' },
    ],
  };

  it("puts the user's pin names into every file but the polygon list", async () => {
    const own = machine().put('names.json', pins);
    const to = 'gds,polygons,svg,spice,lef';
    expect(await own.run(`export ${floorplanFile} --to ${to} --out e --pins names.json`)).toBe(0);
    for (const ending of ['polygons.json', 'floorplan.svg'])
      expect(own.text(`e/cdac4.${ending}`)).toBe(placed.text(`o/cdac4.${ending}`));
    for (const ending of ['gds', 'hookup.svg', 'cir', 'lvs.cir', 'extracted.cir', 'lef']) {
      expect(own.text(`e/cdac4.${ending}`)).toContain('sar_d[0]');
      expect(own.text(`e/cdac4.${ending}`)).toContain('vdac');
    }
    expect(own.text('e/cdac4.lef')).not.toMatch(/PIN (B0|TOP)\b/);
  });

  it('lists every problem of a pin map, with its place', async () => {
    const text = JSON.stringify(
      {
        ...pins,
        pins: [
          { pin: 'BO', name: 'a' },
          { pin: 'TOP', name: 'vss' },
        ],
      },
      null,
      1,
    );
    const own = machine().put('names.json', text);
    expect(await own.run(`export ${floorplanFile} --to gds --pins names.json`)).toBe(2);
    expect(own.err).toMatch(/^names\.json:6:\d+ \/pins\/0\/pin: found "BO"; wanted "B0"/m);
    expect(own.err).toMatch(/^names\.json:11:\d+ \/pins\/1\/name: found "vss", which pin "VSS" bears/m);
    expect(own.written).toEqual([]);
  });

  it('tells layers apart by the numbers of the technology where a map puts two on one', async () => {
    const map = {
      format: 'steelyard/layers',
      version: 1,
      allowShared: true,
      layers: ['lower', 'plate', 'upper'].map((name) => ({
        name: `${name}-metal-pin`,
        stream: { layer: 99, datatype: 0 },
      })),
    };
    const own = machine().put('map.json', map);
    expect(await own.run(`export ${floorplanFile} --to gds,spice,lef --out e --layers map.json`)).toBe(0);
    for (const ending of ['cir', 'lvs.cir', 'extracted.cir', 'lef'])
      expect(own.text(`e/cdac4.${ending}`)).toBe(placed.text(`o/cdac4.${ending}`));
    expect(own.text('e/cdac4.gds')).not.toBe(placed.text('o/cdac4.gds'));
  });

  it('refuses an abstract without names in LEF; place says that there is none, and writes the rest', async () => {
    const technology = placed.json(floorplanFile).technology;
    delete technology.layers[0].lefName;
    const own = machine().put('mine.technology.json', technology);
    expect(await own.run('place --bits 4 --effort quick --out o --technology mine.technology.json')).toBe(0);
    expect(own.out).toContain('No lef files: found no "lefName" for layer "lower-metal"');
    expect(own.written[0]?.map(({ path }) => path)).toContain('o/cdac4.lvs.cir');
    expect(own.written[0]?.map(({ path }) => path)).not.toContain('o/cdac4.lef');
    expect(await own.run(`export ${floorplanFile} --to gds,lef --out e`)).toBe(2);
    expect(own.err).toContain('no "lefName" for layer "lower-metal"');
    expect(own.written).toHaveLength(1);
  });
});
