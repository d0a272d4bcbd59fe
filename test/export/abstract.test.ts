import { describe, expect, it } from 'vitest';
import { InputError } from '../../src/core/problem.js';
import { writeAbstract } from '../../src/export/lef.js';
import type { Polygons } from '../../src/spec/polygons.js';
import type { Layer } from '../../src/spec/technology.js';
import { expectGolden } from '../golden.js';
import { drawn, template } from '../pipeline/drawn.js';
import { kilnPolygons } from './arrays.js';

// A reader of its own, after the grammar of LEF 5.8 (from memory): statements of words that end with a semicolon, sections that end with
// END; comments from a number sign to the end of the line.

type Rect = [x0: number, y0: number, x1: number, y1: number];
interface Shapes {
  layer: string;
  spacing?: number;
  rects: Rect[];
}
interface Pin {
  name: string;
  direction: string;
  use: string;
  ports: Shapes[][];
  areas: Map<string, number>;
}
interface Macro {
  header: Map<string, string[]>;
  name: string;
  statements: Map<string, string[]>;
  pins: Pin[];
  obstructions: Shapes[];
}

function readLef(text: string): Macro {
  const words = text
    .split('\n')
    .map((line) => line.replace(/#.*/, ''))
    .join(' ')
    .split(/\s+/)
    .filter((word) => word !== '');
  let at = 0;
  const next = () => words[at++];
  const must = (word: string) => expect(next()).toBe(word);
  const statement = (): string[] => {
    const parts: string[] = [];
    for (let word = next(); word !== ';'; word = next()) {
      expect(word).toBeDefined();
      parts.push(word);
    }
    return parts;
  };
  const numbers = (parts: string[]): Rect => {
    const found = parts.map(Number);
    expect(found).toHaveLength(4);
    for (const value of found) expect(Number.isInteger(Math.round(value * 1e6) / 1e3)).toBe(true);
    const [x0, y0, x1, y1] = found.map((value) => Math.round(value * 1000));
    expect(x0 < x1 && y0 < y1).toBe(true);
    return [x0, y0, x1, y1];
  };
  const shapes = (): Shapes[] => {
    const list: Shapes[] = [];
    while (words[at] !== 'END') {
      const keyword = next();
      const parts = statement();
      if (keyword === 'LAYER') {
        expect([1, 3]).toContain(parts.length);
        if (parts.length === 3) expect(parts[1]).toBe('SPACING');
        list.push({ layer: parts[0], rects: [], ...(parts.length === 3 && { spacing: Number(parts[2]) }) });
      } else {
        expect(keyword).toBe('RECT');
        list.at(-1)!.rects.push(numbers(parts));
      }
    }
    next();
    return list;
  };

  const header = new Map<string, string[]>();
  while (words[at] !== 'MACRO') {
    const keyword = next();
    if (keyword !== 'UNITS') {
      header.set(keyword, statement());
      continue;
    }
    header.set('UNITS', statement());
    must('END');
    must('UNITS');
  }
  next();
  const macro: Macro = { header, name: next(), statements: new Map(), pins: [], obstructions: [] };
  while (words[at] !== 'END') {
    const keyword = next();
    if (keyword === 'OBS') macro.obstructions.push(...shapes());
    else if (keyword === 'PIN') {
      const pin: Pin = { name: next(), direction: '', use: '', ports: [], areas: new Map() };
      while (words[at] !== 'END') {
        const inner = next();
        if (inner === 'PORT') {
          pin.ports.push(shapes());
          continue;
        }
        const parts = statement();
        if (inner === 'DIRECTION') pin.direction = parts.join(' ');
        else if (inner === 'USE') pin.use = parts.join(' ');
        else {
          expect(inner).toBe('ANTENNAPARTIALMETALAREA');
          expect(parts[1]).toBe('LAYER');
          pin.areas.set(parts[2], Number(parts[0]));
        }
      }
      must('END');
      must(pin.name);
      macro.pins.push(pin);
    } else macro.statements.set(keyword, statement());
  }
  must('END');
  must(macro.name);
  must('END');
  must('LIBRARY');
  expect(at).toBe(words.length);
  return macro;
}

interface Placed {
  layer: string;
  net: string | undefined;
  part: string | undefined;
  box: Rect;
}

/** Every shape with the net that it is on, its unit moved to its place by hand. */
function everyShape(p: Polygons): Placed[] {
  const nameOf = new Map(p.technology.layers.map((l) => [`${l.stream.layer}/${l.stream.datatype}`, l.name]));
  const found: Placed[] = [];
  const top = p.structures.find((s) => s.name === p.topStructure)!;
  const put = (s: Polygons['structures'][number], dx: number, dy: number, cell?: string) => {
    for (const q of s.polygons) {
      const layer = nameOf.get(`${q.layer}/${q.datatype}`);
      if (layer === undefined) continue;
      const net =
        q.net === 'BOTTOM'
          ? cell === '-' || cell === '='
            ? 'VSS'
            : cell
          : q.net === 'TOP' && cell === '-'
            ? 'VSS'
            : q.net;
      for (const [x0, y0, x1, y1] of boxesOf(q.xy))
        found.push({ layer, net, part: q.part, box: [x0 + dx, y0 + dy, x1 + dx, y1 + dy] });
    }
  };
  put(top, 0, 0);
  for (const r of top.references) {
    const unit = p.structures.find((s) => s.name === r.structure)!;
    for (let row = 0; row < r.rows; row++)
      for (let column = 0; column < r.columns; column++)
        put(
          unit,
          r.origin[0] + column * r.columnStep[0] + row * r.rowStep[0],
          r.origin[1] + column * r.columnStep[1] + row * r.rowStep[1],
          r.cells![row * r.columns + column],
        );
  }
  return found;
}

/** An upright outline cut at every corner: those rectangles whose middle lies inside by counting crossings. */
function boxesOf(xy: readonly (readonly [number, number])[]): Rect[] {
  const cuts = (axis: 0 | 1) => [...new Set(xy.map((point) => point[axis]))].sort((a, b) => a - b);
  const [xs, ys] = [cuts(0), cuts(1)];
  const boxes: Rect[] = [];
  for (let i = 0; i + 1 < xs.length; i++)
    for (let j = 0; j + 1 < ys.length; j++) {
      const [x, y] = [(xs[i] + xs[i + 1]) / 2, (ys[j] + ys[j + 1]) / 2];
      let inside = false;
      xy.forEach(([ax, ay], k) => {
        const [bx, by] = xy[(k + 1) % xy.length];
        if (ax === bx && ax < x && Math.min(ay, by) < y && y < Math.max(ay, by)) inside = !inside;
      });
      if (inside) boxes.push([xs[i], ys[j], xs[i + 1], ys[j + 1]]);
    }
  return boxes;
}

/** The area of a union, column by column between neighbouring upright edges. */
function unionArea(boxes: readonly Rect[]): number {
  const xs = [...new Set(boxes.flatMap(([x0, , x1]) => [x0, x1]))].sort((a, b) => a - b);
  let area = 0;
  for (let i = 0; i + 1 < xs.length; i++) {
    const spans = boxes.filter(([x0, , x1]) => x0 <= xs[i] && xs[i] < x1).map(([, y0, , y1]) => [y0, y1]);
    spans.sort((a, b) => a[0] - b[0]);
    let [height, reached] = [0, -Infinity];
    for (const [y0, y1] of spans) {
      height += Math.max(0, y1 - Math.max(y0, reached));
      reached = Math.max(reached, y1);
    }
    area += height * (xs[i + 1] - xs[i]);
  }
  return area;
}

const clipped = ([ax0, ay0, ax1, ay1]: Rect, [bx0, by0, bx1, by1]: Rect): Rect[] => {
  const r: Rect = [Math.max(ax0, bx0), Math.max(ay0, by0), Math.min(ax1, bx1), Math.min(ay1, by1)];
  return r[0] < r[2] && r[1] < r[3] ? [r] : [];
};
const conducts = ({ kind }: Layer) => ['metal', 'plate', 'diffusion', 'well'].includes(kind);

const drawings: [string, Polygons][] = [
  ['kiln4', kilnPolygons()],
  ...([{ bits: 6 }, { bits: 5, fillTop: 'VSS' }, { bits: 4, rings: 0 }, { bits: 5, rings: 2 }] as const).map(
    (given): [string, Polygons] => [JSON.stringify(given), drawn({ ...given, effort: 'quick' }).polygons!],
  ),
  ...['framed-fingers', 'named-cell', 'under-plate', 'under-fingers'].map((name): [string, Polygons] => [
    name,
    drawn({ bits: 4, effort: 'quick' }, undefined, 1e6, template(name)).polygons!,
  ]),
];

describe.each(drawings)('abstract of %s', (_, p) => {
  const text = writeAbstract(p);
  const macro = readLef(text);
  const shapes = everyShape(p);
  const layers = p.technology.layers.filter(conducts);
  const outline = shapes.find(({ layer }) => layer === p.technology.roles.boundary)!.box;
  const pinRects = (layer: Layer) =>
    macro.pins.flatMap(({ ports }) =>
      ports
        .flat()
        .filter((s) => s.layer === layer.lefName)
        .flatMap((s) => s.rects),
    );

  it('has the header and the statements of a block', () => {
    expect(Object.fromEntries(macro.header)).toEqual({
      VERSION: ['5.8'],
      BUSBITCHARS: ['"[]"'],
      DIVIDERCHAR: ['"/"'],
      UNITS: ['DATABASE', 'MICRONS', '1000'],
    });
    expect(macro.name).toBe(p.topStructure);
    expect([...macro.statements.keys()]).toEqual(['CLASS', 'FOREIGN', 'ORIGIN', 'SIZE', 'SYMMETRY']);
    expect(macro.statements.get('CLASS')).toEqual(['BLOCK']);
    expect(macro.statements.get('FOREIGN')).toEqual([p.topStructure, '0', '0']);
    expect(macro.statements.get('SYMMETRY')).toEqual(['X', 'Y']);
  });

  it('is as large as the boundary', () => {
    const [width, by, height] = macro.statements.get('SIZE')!;
    expect([0, 0, Math.round(Number(width) * 1000), Math.round(Number(height) * 1000)]).toEqual(outline);
    expect(by).toBe('BY');
  });

  it('has the pins that are drawn, on drawn metal of their net', () => {
    const nets = [...p.capacitors.map(({ name }) => name), 'VSS', 'TOP'];
    expect(macro.pins.map(({ name }) => name).sort()).toEqual([...nets].sort());
    for (const { name, direction, use, ports } of macro.pins) {
      expect([direction, use]).toEqual(
        name === 'VSS' ? ['INOUT', 'GROUND'] : name === 'TOP' ? ['INOUT', 'ANALOG'] : ['INPUT', 'ANALOG'],
      );
      expect(ports.length).toBe(shapes.filter((s) => s.part === 'pin' && s.net === name).length);
      for (const { layer: lefName, rects } of ports.flat())
        for (const rect of rects) {
          const { name: layer } = layers.find((l) => l.lefName === lefName)!;
          const under = shapes.filter((s) => s.layer === layer && s.net === name).flatMap((s) => clipped(s.box, rect));
          expect(unionArea(under)).toBe((rect[2] - rect[0]) * (rect[3] - rect[1]));
          expect(clipped(rect, outline)).toEqual([rect]);
        }
    }
  });

  it('obstructs every conductor but the pins, and touches no pin', () => {
    expect(macro.obstructions.map(({ layer }) => layer)).toEqual(layers.map(({ lefName }) => lefName));
    for (const layer of layers) {
      const [{ rects, spacing }] = macro.obstructions.filter((s) => s.layer === layer.lefName);
      expect(spacing).toBe(layer.minSpacing_um);
      const pins = pinRects(layer);
      for (const pin of pins) expect(rects.flatMap((r) => clipped(r, pin))).toEqual([]);
      const metal = shapes.filter((s) => s.layer === layer.name).map((s) => s.box);
      const covered = [...rects, ...pins];
      expect(unionArea([...covered, ...metal])).toBe(unionArea(covered));
    }
  });

  it('leaves free nothing but the spacing around the pins', () => {
    for (const layer of layers) {
      const [{ rects }] = macro.obstructions.filter((s) => s.layer === layer.lefName);
      const spacing = Math.round(layer.minSpacing_um! * 1000);
      const around = pinRects(layer).flatMap(([x0, y0, x1, y1]) =>
        clipped([x0 - spacing, y0 - spacing, x1 + spacing, y1 + spacing], outline),
      );
      expect(unionArea([...rects, ...around])).toBe(unionArea([outline]));
    }
    // Nothing is routed over the common plate.
    const [{ rects }] = macro.obstructions.filter((s) => s.layer === 'UPPER');
    expect(unionArea(rects)).toBeGreaterThan(0.99 * unionArea([outline]));
  });

  it('keeps the spacing from a pin where only other nets would come near', () => {
    for (const layer of layers) {
      const [{ rects }] = macro.obstructions.filter((s) => s.layer === layer.lefName);
      const spacing = Math.round(layer.minSpacing_um! * 1000);
      const metal = shapes.filter((s) => s.layer === layer.name).map((s) => s.box);
      for (const [x0, y0, x1, y1] of pinRects(layer)) {
        const around: Rect = [x0 - spacing, y0 - spacing, x1 + spacing, y1 + spacing];
        const near = rects.flatMap((r) => clipped(r, around));
        const drawnNear = metal.flatMap((r) => clipped(r, around));
        expect(unionArea([...near, ...drawnNear])).toBe(unionArea(drawnNear));
      }
    }
  });

  it('tells the area of all metal of a net, plates included', () => {
    for (const { name, areas } of macro.pins) {
      const found = layers.flatMap((layer) => {
        const metal = shapes.filter((s) => s.layer === layer.name && s.net === name).map((s) => s.box);
        return metal.length === 0 ? [] : [[layer.lefName, unionArea(metal) / 1e6]];
      });
      expect([...areas]).toEqual(found);
    }
  });

  it('is the same on a second run', () => expect(writeAbstract(p)).toBe(text));
});

it('counts the plates of the common net on their metal', () => {
  const p = kilnPolygons();
  const cells = p.structures.flatMap((s) => s.references.flatMap((r) => r.cells ?? [])).filter((cell) => cell !== '-');
  const { pins } = readLef(writeAbstract(p));
  expect(cells).toHaveLength(16);
  expect(pins.find(({ name }) => name === 'TOP')!.areas.get('TOPPLATE')).toBeCloseTo(16 * 4.4 * 4.4, 6);
});

it('the golden abstract', () => expectGolden(writeAbstract(kilnPolygons()), 'kiln4.lef'));

function problemsOf(p: Polygons, pins: Record<string, string> = {}): string[] {
  const map = Object.entries(pins).map(([pin, name]) => ({ pin, name }));
  try {
    writeAbstract(p, { pins: { format: 'steelyard/pins', version: 1, pins: map } });
    return [];
  } catch (error) {
    if (error instanceof InputError)
      return error.problems.map(({ pointer, found, wanted }) => `${pointer}: ${found} | ${wanted}`);
    throw error;
  }
}
const withLayers = (change: (layer: Layer) => Layer): Polygons => {
  const p = kilnPolygons();
  return { ...p, technology: { ...p.technology, layers: p.technology.layers.map(change) } };
};
const withoutLefName = (...names: string[]) =>
  withLayers((layer) => {
    if (!names.includes(layer.name)) return layer;
    const { lefName: _, ...rest } = layer;
    return rest;
  });

describe('an abstract is refused', () => {
  it('where a metal has no name in LEF: every one by name', () => {
    expect(problemsOf(withoutLefName('lower-metal', 'plate-metal'))).toEqual([
      '/technology/layers/0: no "lefName" for layer "lower-metal" | "lefName": the name that it has in LEF',
      '/technology/layers/1: no "lefName" for layer "plate-metal" | "lefName": the name that it has in LEF',
    ]);
  });

  it('where layers cannot be told apart', () => {
    // As drawn after a layer map that puts two pin layers on one number.
    const text = JSON.stringify(kilnPolygons())
      .replaceAll('"layer":27,"datatype":5', '"layer":21,"datatype":5')
      .replaceAll('"layer":27,"texttype":5', '"layer":21,"texttype":5');
    expect(problemsOf(JSON.parse(text) as Polygons)[0]).toContain(
      '/technology/layers/6/stream: 21/5, as for "lower-metal-pin"',
    );
  });

  it('where a pin has a name and no shape', () => {
    const p = kilnPolygons();
    const structures = p.structures.map((s) => ({
      ...s,
      polygons: s.polygons.filter((q) => !(q.part === 'pin' && q.net === 'TOP')),
    }));
    expect(problemsOf({ ...p, structures })).toEqual([
      '/structures: pin "TOP" without a shape | one on layer "upper-metal-pin"',
    ]);
  });

  it('where the block has no outline, or not at 0, 0', () => {
    const p = kilnPolygons();
    const moved = (change: (q: Polygons['structures'][number]['polygons']) => typeof q): Polygons => ({
      ...p,
      structures: p.structures.map((s) => ({ ...s, polygons: change(s.polygons) })),
    });
    expect(problemsOf(moved((all) => all.filter((q) => q.layer !== 62)))).toEqual([
      '/structures: nothing on layer "boundary" | the block\'s outline there',
    ]);
    const further = moved((all) =>
      all.map((q) => (q.layer === 62 ? { ...q, xy: q.xy.map(([x, y]) => [x + 5, y] as const) } : q)),
    );
    expect(problemsOf(further)).toEqual(["/structures: the block's lower left corner at 0.005, 0 um | it at 0, 0"]);
  });

  const hostile = ['a b', 'a;', '#a', 'a\nEND', '"a"', '0a', 'a{', ''];
  it.each(hostile)('with a name %j of a pin, a layer or the block', (name) => {
    if (name !== '') expect(problemsOf(kilnPolygons(), { B0: name }).length).toBeGreaterThan(0);
    const layers = withLayers((layer) => (layer.name === 'upper-metal' ? { ...layer, lefName: name } : layer));
    expect(problemsOf(layers).length).toBeGreaterThan(0);
    const block = JSON.parse(JSON.stringify(kilnPolygons()), (_, v: unknown) => (v === 'kiln4' ? name : v)) as Polygons;
    expect(problemsOf(block).length).toBeGreaterThan(0);
  });
});

describe('an abstract', () => {
  it('leaves a plate without a name in LEF out: no router knows it', () => {
    const macro = readLef(writeAbstract(withoutLefName('top-plate')));
    expect(macro.obstructions.map(({ layer }) => layer)).toEqual(['LOWER', 'PLATE', 'UPPER']);
    expect(macro.pins.find(({ name }) => name === 'TOP')!.areas.has('TOPPLATE')).toBe(false);
  });

  it("has the user's pin names, and the brackets that they use", () => {
    const names = { B0: 'd<0>', B1: 'd<1>', TOP: 'vdac' };
    const map = Object.entries(names).map(([pin, name]) => ({ pin, name }));
    const macro = readLef(writeAbstract(kilnPolygons(), { pins: { format: 'steelyard/pins', version: 1, pins: map } }));
    expect(macro.pins.map(({ name }) => name)).toEqual(['TERM', 'd<0>', 'd<1>', 'B2', 'B3', 'VSS', 'vdac']);
    expect(macro.header.get('BUSBITCHARS')).toEqual(['"<>"']);
    const { pins } = readLef(writeAbstract(kilnPolygons()));
    macro.pins.forEach(({ name: _, ...rest }, i) => expect(pins[i]).toMatchObject(rest));
  });
});
