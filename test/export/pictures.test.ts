import { JSDOM } from 'jsdom';
import { describe, expect, it } from 'vitest';
import { InputError } from '../../src/core/problem.js';
import { drawFloorplanSvg } from '../../src/export/floorplan-svg.js';
import { drawHookupSvg } from '../../src/export/hookup-svg.js';
import type { Floorplan } from '../../src/spec/floorplan.js';
import type { Polygons } from '../../src/spec/polygons.js';
import { drawMismatchSvg, writeMismatchCsv } from '../../src/export/mismatch-curves.js';
import { analyseMismatch } from '../../src/linearity/mismatch.js';
import { unitMismatch } from '../../src/spec/options.js';
import { expectGolden } from '../golden.js';
import {
  kilnFloorplan,
  kilnPolygons,
  randomFloorplan,
  rectangle,
  reference,
  structure,
  withStructures,
} from './arrays.js';

/** The root of a well-formed file; a parser that finds a fault answers with an element of that name. */
function parsed(svg: string): Element {
  const document = new new JSDOM('').window.DOMParser().parseFromString(svg, 'image/svg+xml');
  expect(document.getElementsByTagName('parsererror')).toHaveLength(0);
  return document.documentElement;
}
const texts = (root: Element): string[] => [...root.querySelectorAll('text')].map((node) => node.textContent);

/** Every capacitor renamed wherever it is named. */
function renamed<T>(value: T, names: ReadonlyMap<string, string>): T {
  return JSON.parse(JSON.stringify(value), (_, v: unknown) => (typeof v === 'string' ? (names.get(v) ?? v) : v)) as T;
}

const kilnMismatch = () => {
  const { technology } = kilnFloorplan();
  if (technology === undefined) throw new Error('the floorplan has a technology');
  return analyseMismatch(kilnFloorplan(), unitMismatch(technology));
};

describe('golden pictures', () => {
  it('mismatch', async () => {
    expectGolden(await drawMismatchSvg(kilnFloorplan(), kilnMismatch()), 'kiln4.mismatch.svg');
    expectGolden(writeMismatchCsv(kilnFloorplan(), kilnMismatch()), 'kiln4.mismatch.csv');
  });

  it('placement', async () => expectGolden(await drawFloorplanSvg(kilnFloorplan()), 'kiln4.floorplan.svg'));
  it('hookup', async () => expectGolden(await drawHookupSvg(kilnPolygons(), kilnFloorplan()), 'kiln4.hookup.svg'));
});

describe.each<[string, () => Promise<string>]>([
  ['placement', () => drawFloorplanSvg(kilnFloorplan())],
  ['placement of ten bits', () => drawFloorplanSvg(randomFloorplan(10, 31, 33))],
  ['hookup', () => drawHookupSvg(kilnPolygons(), kilnFloorplan())],
  ['mismatch', () => drawMismatchSvg(kilnFloorplan(), kilnMismatch())],
])('%s', (_, draw) => {
  it('is a well-formed SVG file with a size, a title first and a white ground', async () => {
    const root = parsed(await draw());
    expect(root.localName).toBe('svg');
    expect(root.namespaceURI).toBe('http://www.w3.org/2000/svg');
    expect(root.firstElementChild?.localName).toBe('title');
    const [x, y, width, height] = root.getAttribute('viewBox')!.split(' ').map(Number);
    expect([x, y]).toEqual([0, 0]);
    const aspect = Number(root.getAttribute('width')) / Number(root.getAttribute('height'));
    expect(Math.abs((aspect * height) / width - 1)).toBeLessThan(0.002);
    const ground = root.querySelector('path')!;
    expect(ground.getAttribute('fill')).toBe('#ffffff');
    expect(ground.getAttribute('d')).toBe(`M0,0h${width}v${height}h-${width}z`);
  });

  it('is drawn in whole numbers inside its own frame', async () => {
    const root = parsed(await draw());
    const [, , width, height] = root.getAttribute('viewBox')!.split(' ').map(Number);
    for (const path of root.querySelectorAll('path')) {
      const d = path.getAttribute('d')!;
      expect(d).not.toMatch(/[.e]/);
      for (const [, x, y] of d.matchAll(/M(-?\d+)[ ,](-?\d+)/g)) {
        expect(Number(x) >= 0 && Number(x) <= width).toBe(true);
        expect(Number(y) >= 0 && Number(y) <= height).toBe(true);
      }
    }
    for (const text of root.querySelectorAll('text')) {
      expect(Number.isInteger(Number(text.getAttribute('x')))).toBe(true);
      expect(Number(text.getAttribute('x'))).toBeLessThan(width);
      expect(Number(text.getAttribute('y'))).toBeLessThan(height);
    }
  });

  it('comes out the same again, and beside another', async () => {
    const first = await draw();
    const [again, beside] = await Promise.all([draw(), draw(), drawFloorplanSvg(randomFloorplan(3, 3, 3))]);
    expect(again).toBe(first);
    expect(beside).toBe(first);
  });
});

describe('placement', () => {
  it('names every cell of a small array, and tells sizes and units', async () => {
    const found = texts(parsed(await drawFloorplanSvg(kilnFloorplan())));
    const count = (name: string) => found.filter((text) => text === name).length;
    // Once a cell, once in the legend.
    expect(['B0', 'B1', 'B2', 'B3', 'TERM'].map(count)).toEqual([2, 3, 5, 9, 2]);
    expect(found).toContain('4 bits · 5 rows × 3 columns · pitch 7.2 × 5.7 µm');
    expect(found).toContain('ring dummy');
    // 7 x 5 places around and in the core, less the core and the termination.
    expect(found).toContain('19');
  });

  it('draws as many cells as there are units, one path a capacitor', async () => {
    const f = randomFloorplan(8, 15, 17);
    const root = parsed(await drawFloorplanSvg(f));
    const boxes = [...root.querySelectorAll('path')].map((path) => path.getAttribute('d')!.match(/M/g)!.length);
    for (const { units } of f.capacitors.slice(1)) expect(boxes).toContain(units);
  });

  it('marks the cells instead where names would be too small', async () => {
    const found = texts(parsed(await drawFloorplanSvg(randomFloorplan(12, 63, 65))));
    expect(found.filter((text) => text === 'B11')).toHaveLength(1);
  });

  it('needs nothing but core, capacitors and cells', async () => {
    const { format, version, core, capacitors, cells } = kilnFloorplan();
    const found = texts(parsed(await drawFloorplanSvg({ format, version, core, capacitors, cells })));
    expect(found[0]).toBe('array');
    expect(found).not.toContain('ring dummy');
  });

  it('shows fill dummies', async () => {
    const f = kilnFloorplan();
    const cells = f.cells.map((row, i) => (i === 0 ? ['-', ...row.slice(1)] : row));
    expect(texts(parsed(await drawFloorplanSvg({ ...f, cells })))).toContain('fill dummy');
  });
});

describe('hookup', () => {
  it('has one path per net and metal, and names pins and plates', async () => {
    const root = parsed(await drawHookupSvg(kilnPolygons(), kilnFloorplan()));
    const found = texts(root);
    for (const pin of ['B0', 'TERM', 'TOP', 'VSS']) expect(found).toContain(pin);
    expect(found).toContain('4 bits · 5 rows × 3 columns · block 36.12 × 44.2 µm');
    const subpaths = [...root.querySelectorAll('path')].map((path) => path.getAttribute('d')!.match(/M/g)!.length);
    // All 35 top plates in one path, and the 387 shapes of the drawing with the legend in few.
    expect(subpaths).toContain(35);
    expect(subpaths.length).toBeLessThan(80);
  });

  it('keeps mirrored and turned shapes solid where they overlap others', async () => {
    const { roles, layers } = kilnPolygons().technology;
    const { layer, datatype } = layers.find((l) => l.name === roles.trunk)!.stream;
    const metal = { layer, datatype, net: 'B0', part: 'trunk' } as const;
    const p = withStructures([
      structure('bar', { polygons: [rectangle(0, 0, 400, 100, metal)] }),
      structure('top', {
        polygons: [rectangle(0, -100, 400, 0, metal)],
        references: [reference('bar', { mirrored: true }), reference('bar', { mirrored: true, angle_deg: 90 })],
      }),
    ]);
    const root = parsed(await drawHookupSvg(p, kilnFloorplan()));
    const path = [...root.querySelectorAll('path')].find((node) => node.getAttribute('d')!.match(/z/g)?.length === 3)!;
    // Twice the area of each outline, by the shoelace rule on the relative steps: all of one sign, so that none cuts a hole in another.
    const areas = path
      .getAttribute('d')!
      .split('z')
      .filter(Boolean)
      .map((outline) => {
        let [x, y, area] = [0, 0, 0];
        for (const [, step, length] of outline.matchAll(/([hv])(-?\d+)/g)) {
          const [dx, dy] = step === 'h' ? [Number(length), 0] : [0, Number(length)];
          area += x * dy - y * dx;
          [x, y] = [x + dx, y + dy];
        }
        return Math.sign(area);
      });
    expect(new Set(areas).size).toBe(1);
  });

  it('refuses a list without metal', async () => {
    await expect(drawHookupSvg(withStructures([structure('top')]), kilnFloorplan())).rejects.toThrow(InputError);
  });
});

describe('hostile names', () => {
  const hostile = new Map([
    ['B0', '<script>alert(1)</script>'],
    ['B1', `"'&]]>\u0000\u001b[31m\r\nx`],
    ['B2', '\u202eevil\u2066\u200b\ufeff\ud800'],
    ['B3', 'ю漢\u{1f600}'],
    ['TERM', 'T'.repeat(400)],
    ['kiln4', '--><!-- \u0085<svg onload="x">'],
  ]);
  const draw: [string, () => Promise<string>][] = [
    ['placement', () => drawFloorplanSvg(renamed<Floorplan>(kilnFloorplan(), hostile))],
    [
      'hookup',
      () => drawHookupSvg(renamed<Polygons>(kilnPolygons(), hostile), renamed<Floorplan>(kilnFloorplan(), hostile)),
    ],
  ];
  it.each(draw)('stay text in the %s', async (_, make) => {
    const svg = await make();
    const root = parsed(svg);
    expect([...new Set([...root.querySelectorAll('*')].map((node) => node.localName))].sort()).toEqual(
      ['desc', 'g', 'path', 'text', 'title'].sort(),
    );
    expect(
      [...root.querySelectorAll('*')].flatMap((node) => node.getAttributeNames()).filter((n) => n.startsWith('on')),
    ).toEqual([]);
    const found = texts(root);
    for (const name of [
      '<script>alert(1)</script>',
      `"'&]]>[31m x`,
      'evil',
      'ю漢\u{1f600}',
      '--><!-- <svg onload="x">',
    ])
      expect(found).toContain(name);
    expect(found.filter((text) => text.length > 33 && text.startsWith('TTT'))).toEqual([]);

    expect(svg.replaceAll('\n', '')).not.toMatch(
      /[\u0000-\u001f\u007f-\u009f\u200b-\u200f\u202a-\u202e\u2060-\u2069\ufeff]/,
    );
  });
});
