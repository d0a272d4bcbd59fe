import { beforeAll, describe, expect, test } from 'vitest';
import { flatten, streamKey } from '../../src/core/flatten.js';
import { between } from '../../src/extraction/coupling.js';
import { type Extraction, extractCoupling } from '../../src/extraction/extract.js';
import { parasiticFigures } from '../../src/extraction/parasitic.js';
import type { Drawn } from '../../src/pipeline.js';
import type { Polygons } from '../../src/spec/polygons.js';
import { drawn } from '../pipeline/drawn.js';
import { spaceCoupling } from './space-field.js';

let array: Drawn;
let polygons: Polygons;
let extraction: Extraction;
beforeAll(() => {
  array = drawn({ bits: 6, effort: 'quick', tracksPerChannel: 3 });
  polygons = array.polygons!;
  extraction = array.extraction!;
});

/** All rectangles of a layer, with the net that they are meant to carry; a unit's bottom carries its capacitor. */
function rectangles(layerName: string) {
  const { layers, cells, shapes } = flatten(polygons.structures, polygons.topStructure);
  const boxes = layers.get(streamKey(polygons.technology.layers.find(({ name }) => name === layerName)!.stream))!;
  return Array.from(boxes.x0, (x0, i) => {
    const meant = shapes.polygon[boxes.shape[i]].net;
    const cell = boxes.cell[i] < 0 ? undefined : cells[boxes.cell[i]].name;
    const net = meant === 'BOTTOM' ? cell : meant;
    return { net, cell, x0, y0: boxes.y0[i], x1: boxes.x1[i], y1: boxes.y1[i] };
  });
}

type Rectangle = ReturnType<typeof rectangles>[number];
const overlap = (a: Rectangle, b: Rectangle): number =>
  Math.max(0, Math.min(a.x1, b.x1) - Math.max(a.x0, b.x0)) * Math.max(0, Math.min(a.y1, b.y1) - Math.max(a.y0, b.y0));

describe('against overlaps that are counted again, every rectangle with every other', () => {
  test('plates: as many units of the technology as their top and bottom plates overlap', () => {
    const [tops, bottoms] = [rectangles('top-plate'), rectangles('plate-metal')];
    for (const { name } of polygons.capacitors) {
      let area = 0;
      for (const top of tops)
        if (top.cell !== '-') for (const bottom of bottoms) if (bottom.net === name) area += overlap(top, bottom);
      const units = area / 4400 ** 2;
      expect(units).toBe(polygons.capacitors.find((capacitor) => capacitor.name === name)!.units);
      const wires = extraction.coupling.wires.filter(({ net }) => net === name).reduce((sum, w) => sum + w.top_fF, 0);
      const plates = between(extraction.coupling, name, 'TOP').fF - wires - extraction.unitExcess_fF[name];
      expect(plates).toBeCloseTo(20.064 * units, 6);
    }
  });

  test('crossings: bits whose wires cross have at least the plates that overlap, and no more than their fringe makes of it', () => {
    const [stubs, trunks] = [rectangles('plate-metal'), rectangles('lower-metal')].map((list) =>
      list.filter(({ cell }) => cell === undefined),
    );
    const bits = polygons.capacitors.filter(({ role }) => role === 'bit').map(({ name }) => name);
    let crossed = 0;
    for (const a of bits)
      for (const b of bits) {
        if (a === b) continue;
        let area = 0;
        for (const stub of stubs)
          if (stub.net === a) for (const trunk of trunks) if (trunk.net === b) area += overlap(stub, trunk);
        if (area === 0) continue;
        crossed++;
        // Plates 0.6 um apart at a permittivity of 4.1.
        expect(between(extraction.coupling, a, b).fF).toBeGreaterThan((8.854e-3 * 4.1 * (area / 1e6)) / 0.6);
      }
    expect(crossed).toBeGreaterThan(5);
  });
});

test('stubs with their stretch of trunk against the field in space', () => {
  const [px, py] = array.floorplan.core.pitch_um.map((um) => 1000 * um);
  const { cells } = flatten(polygons.structures, polygons.topStructure);
  const wires = extraction.coupling.wires.filter(({ net }) => net !== 'TERM');
  /** A channel from middle to middle of its columns, and one row. */
  const windowOf = ({ x0, y0 }: { readonly x0: number; readonly y0: number }) => {
    const left = cells.reduce((best, { at }) => (at[0] < x0 ? Math.max(best, at[0]) : best), -Infinity);
    const row = cells.reduce((best, { at }) => (Math.abs(at[1] - y0) < Math.abs(best - y0) ? at[1] : best), Infinity);
    return { x: [left, left + px], y: [row - py / 2, row + py / 2] } as const;
  };
  const within = (wire: (typeof wires)[number], { x, y }: ReturnType<typeof windowOf>) =>
    wire.x0 > x[0] && wire.x1 < x[1] && wire.y0 < y[1] && wire.y1 > y[0];
  const lengths = new Set<number>();
  for (const stub of wires) {
    const length = stub.x1 - stub.x0;
    if (stub.layer !== 'plate-metal' || length >= px || lengths.has(length)) continue;
    const window = windowOf(stub);
    const own = wires.filter((wire) => wire.net === stub.net && within(wire, window));
    if (own.filter(({ layer }) => layer === 'plate-metal').length > 1) continue;
    lengths.add(length);
    let expected = 0;
    for (const { top_fF, y0, y1 } of own)
      expected += (top_fF * (Math.min(y1, window.y[1]) - Math.max(y0, window.y[0]))) / (y1 - y0);
    const inSpace = spaceCoupling(polygons, window, 200).get(`${stub.net} wires`)! / 1000;
    // Charge where a stub meets its tab may count for either: some 3 aF of 12.
    expect(Math.abs(expected / inSpace - 1)).toBeLessThan(0.3);
  }
  expect(lengths.size).toBeGreaterThan(1);
});

test('attenuation: 5.12 pF with 100 fF to ground leave 0.980843 (D)', () => {
  const pairs = [
    { a: 'B0', b: 'TOP', fF: 5120, error_fF: 0 },
    { a: 'TOP', b: 'VSS', fF: 60, error_fF: 0 },
  ];
  const figures = parasiticFigures(
    { coupling: { nets: ['B0', 'TOP', 'VSS'], pairs, wires: [] }, unitExcess_fF: { B0: 0 }, sections: 0 },
    [{ name: 'B0', role: 'bit', weight: 1, units: 1 }],
    5120,
    40,
  ).figures;
  expect(1 - figures.attenuation_percent / 100).toBeCloseTo(0.980843, 6);
});

test('the same drawing gives the same, and one without heights says so', () => {
  expect(extractCoupling(polygons)).toEqual(extraction);
  const layers = polygons.technology.layers.map(({ height_um: _, ...layer }) => layer);
  expect(extractCoupling({ ...polygons, technology: { ...polygons.technology, layers } })).toMatch(
    /does not state height_um/,
  );
});
