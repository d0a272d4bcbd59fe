import { Clipper, type Path64, FillRule } from 'clipper2-ts';
import { describe, expect, it } from 'vitest';
import type { Likeness } from '../../src/check/neighbourhood.js';
import { checkPolygons, judgePolygons } from '../../src/check/polygons.js';
import { flatten, streamKey } from '../../src/core/flatten.js';
import type { Polygon } from '../../src/core/layout.js';
import { outline, rectangle, type Rectangle } from '../../src/core/rectangle.js';
import { inOneStructure } from '../../src/export/drawn-shapes.js';
import type { Polygons } from '../../src/spec/polygons.js';
import { drawn, type Given, template } from '../pipeline/drawn.js';
import { flatBoxes } from './plant-faults.js';

const draw = (given: Given, technology = 'parallel-plate'): Polygons =>
  drawn({ effort: 'quick', ...given }, undefined, 1e6, template(technology)).polygons!;

const withAdded = (p: Polygons, ...added: Polygon[]): Polygons => ({
  ...p,
  structures: p.structures.map((s) => (s.name === p.topStructure ? { ...s, polygons: [...s.polygons, ...added] } : s)),
});

const onLayer = (p: Polygons, name: string, box: Rectangle): Polygon => ({
  ...p.technology.layers.find((layer) => layer.name === name)!.stream,
  xy: outline(box),
});

const layerOf = (p: Polygons, name: string) =>
  judgePolygons(p).neighbourhood.layers.find(({ layer }) => layer === name)!;

const path = ({ x0, y0, x1, y1 }: Rectangle, dx = 0, dy = 0): Path64 =>
  outline({ x0: x0 - dx, y0: y0 - dy, x1: x1 - dx, y1: y1 - dy }).map(([x, y]) => ({ x, y }));
const areaOf = (paths: Path64[]) => paths.reduce((sum, one) => sum + Clipper.area(one), 0);

/** The same figures from what a general-purpose library cuts out around each unit; nets as the drawing says that they are meant. */
function recount(p: Polygons, layerName: string, topOnly: boolean): { alike: number; inside: number; edge: number } {
  const flat = flatten(p.structures, p.topStructure);
  const { technology } = p;
  const bits = new Set(p.capacitors.filter(({ role }) => role === 'bit').map(({ name }) => name));
  const layer = technology.layers.find(({ name }) => name === layerName)!;
  const boxes = flatBoxes(flat, flat.layers.get(streamKey(layer.stream))).filter(
    ({ net }) => !topOnly || net === 'TOP',
  );
  const half = [0, 1].map((axis) => {
    const { unit } = technology;
    return unit.kind === 'parallel-plate' ? 500 * unit.topPlate_um[axis] + 1000 * unit.plateEnclosure_um : NaN;
  });
  const reach = 1000 * technology.proximityReach_um;
  const units = flat.cells.filter(({ name }) => bits.has(name!)).map(({ at: [x, y] }) => ({ x, y }));
  const [xs, ys] = [units.map(({ x }) => x), units.map(({ y }) => y)];
  const views = units.map(({ x, y }) => {
    const window = rectangle(x - half[0] - reach, y - half[1] - reach, x + half[0] + reach, y + half[1] + reach);
    const near = boxes.filter((b) => b.x0 < window.x1 && b.x1 > window.x0 && b.y0 < window.y1 && b.y1 > window.y0);
    const inside =
      window.x0 >= Math.min(...xs) - half[0] &&
      window.x1 <= Math.max(...xs) + half[0] &&
      window.y0 >= Math.min(...ys) - half[1] &&
      window.y1 <= Math.max(...ys) + half[1];
    const all = Clipper.union(
      near.map((box) => path(box, x, y)),
      FillRule.NonZero,
    );
    return { inside, paths: Clipper.intersect(all, [path(window, x, y)], FillRule.NonZero) };
  });
  const differ = (a: Path64[], b: Path64[]) => areaOf(Clipper.xor(a, b, FillRule.NonZero)) / 1e6;
  const twins = views.map((view) => views.filter((v) => v.inside && differ(v.paths, view.paths) === 0).length);
  const usual =
    views[twins.findIndex((n, i) => views[i].inside && n === Math.max(...twins.filter((_, j) => views[j].inside)))];
  const areas = views.map((view) => ({ inside: view.inside, area: differ(usual.paths, view.paths) }));
  const most = (inside: boolean) => Math.max(0, ...areas.filter((v) => v.inside === inside).map(({ area }) => area));
  return { alike: areas.filter(({ area }) => area === 0).length, inside: most(true), edge: most(false) };
}

const array = draw({ bits: 6, core: { rows: 7, columns: 9 } });

describe('what surrounds the units of bits', () => {
  it('is as alike as a recount by other means finds', () => {
    const figures = ({ alike, inside, edge }: Likeness) => ({
      alike,
      inside: inside?.area_um2 ?? 0,
      edge: edge?.area_um2 ?? 0,
    });
    const { reach_um, units, layers } = judgePolygons(array).neighbourhood;
    expect({ reach_um, units }).toEqual({ reach_um: 5, units: 63 });
    expect(layers.map(({ layer }) => layer)).toEqual(['lower-metal', 'plate-metal', 'top-plate', 'upper-metal']);
    for (const { layer, shapes, onTop } of layers)
      for (const [found, top] of [
        [shapes, false],
        [onTop, true],
      ] as const) {
        const wanted = recount(array, layer, top);
        for (const [key, value] of Object.entries(figures(found)))
          expect(value, `${layer} ${key}`).toBeCloseTo(wanted[key as keyof typeof wanted], 9);
      }
  });

  it('is the same for all inside: plates, straps, and what of them is on TOP', () => {
    for (const technology of ['parallel-plate', 'framed-fingers', 'named-cell']) {
      const { layers } = judgePolygons(draw({ bits: 6 }, technology)).neighbourhood;
      const [upper] = layers.slice(-1);
      expect(upper.shapes.inside).toBeUndefined();
      for (const { onTop } of layers) expect(onTop.inside).toBeUndefined();
    }
    expect(layerOf(array, 'top-plate').shapes).toEqual({ alike: 63, kinds: 1 });
    // Rings are on VSS, so the core's edge sees less of TOP.
    expect(layerOf(array, 'top-plate').onTop.alike).toBe(5 * 7);
  });

  it('tells of fill dummies on VSS within the core', () => {
    const fill = { bits: 5, core: { rows: 7, columns: 7 } };
    expect(layerOf(draw({ ...fill, fillTop: 'TOP' }), 'top-plate').onTop.inside).toBeUndefined();
    expect(layerOf(draw({ ...fill, fillTop: 'VSS' }), 'top-plate').onTop.inside?.area_um2).toBeGreaterThan(4);
  });

  // The unit in the middle of the core.
  const { origin, columnStep, rowStep } = array.structures[1].references[0];
  const [x, y] = [origin[0] + 5 * columnStep[0], origin[1] + 4 * rowStep[1]];

  it.each([
    ['a strap that is wider at one place', 'upper-metal', rectangle(-400, 1500, 400, 1900), true],
    ['a piece of metal beside a strap', 'upper-metal', rectangle(-2600, -600, -1900, 200), false],
    ['a top plate with a nose', 'top-plate', rectangle(2200, -500, 2210, 500), true],
  ] as const)('planted fault: %s', (_, layer, box, onTop) => {
    const moved = rectangle(box.x0 + x, box.y0 + y, box.x1 + x, box.y1 + y);
    const { shapes, onTop: top } = layerOf(withAdded(array, onLayer(array, layer, moved)), layer);
    const sound = layerOf(array, layer);
    // Whoever has it within 5 um of a plate of 5.2 um sees it.
    const steps = [-1, 0, 1];
    const sees = (from: number, to: number, step: number) =>
      steps.filter((i) => from < i * step + 7600 && to > i * step - 7600);
    const seers = sees(box.x0, box.x1, columnStep[0]).length * sees(box.y0, box.y1, rowStep[1]).length;
    expect(seers).toBeGreaterThan(3);
    expect(shapes.alike).toBe(sound.shapes.alike - seers);
    const [atX, atY] = shapes.inside!.at_um;
    expect(Math.abs(1000 * atX - x)).toBeLessThan(columnStep[0]);
    expect(Math.abs(1000 * atY - y)).toBeLessThan(rowStep[1]);
    if (onTop) expect(top.inside).toEqual(shapes.inside);
    else expect(top).toEqual(sound.onTop);
  });

  it('planted fault: a bar missing below the lowest row', () => {
    const isBar = ({ part, xy }: Polygon) => part === 'strap' && xy[1][0] - xy[0][0] === 5200;
    const lost = array.structures.at(-1)!.polygons.filter(isBar)[4];
    const p = {
      ...array,
      structures: array.structures.map((s) => ({ ...s, polygons: s.polygons.filter((polygon) => polygon !== lost) })),
    };
    // Corners, edges, and the two columns at the strap that goes on to the pin; now also the three units above the gap.
    const kinds = (q: Polygons) => [layerOf(q, 'upper-metal').shapes.kinds, layerOf(q, 'upper-metal').onTop.kinds];
    expect(kinds(p)).toEqual(kinds(array).map((count) => count + 3));
  });
});

describe('units around the units of bits', () => {
  const flat: Polygons = { ...array, structures: [inOneStructure(array)] };
  const { origin, columnStep, rowStep } = array.structures[1].references[0];
  const placeOf = (column: number, row: number) =>
    [origin[0] + column * columnStep[0], origin[1] + row * rowStep[1]] as const;
  const topPlate = array.technology.layers.find(({ name }) => name === 'top-plate')!.stream;
  const isTopPlate = ({ layer, datatype, xy }: Polygon, [px, py]: readonly [number, number]) =>
    layer === topPlate.layer && datatype === topPlate.datatype && xy[0][0] === px - 2200 && xy[0][1] === py - 2200;

  it('are all there', () => {
    expect(checkPolygons(flat)).toEqual([]);
    for (const rings of [0, 2]) expect(checkPolygons(draw({ bits: 4, rings }))).toEqual([]);
  });

  it.each([
    ['of the ring', 0, 3],
    ['in the corner of the ring', 10, 8],
    ['of the core', 4, 4],
  ])('planted fault: one %s without its top plate, in a drawing that has no cells', (_, column, row) => {
    const at = placeOf(column, row);
    const [s] = flat.structures;
    const polygons = s.polygons.filter((polygon) => !isTopPlate(polygon, at));
    expect(polygons).toHaveLength(s.polygons.length - 1);
    const findings = checkPolygons({ ...flat, structures: [{ ...s, polygons }] }).filter(
      ({ rule }) => rule === 'neighbour',
    );
    expect(findings).toMatchObject([{ at_um: [at[0] / 1000, at[1] / 1000], layer: 'plate-metal' }]);
  });

  it('planted fault: one out of place', () => {
    const at = placeOf(0, 3);
    const [s] = flat.structures;
    const polygons = s.polygons.map((polygon) =>
      isTopPlate(polygon, at) ? { ...polygon, xy: polygon.xy.map(([px, py]) => [px, py + 50] as const) } : polygon,
    );
    const findings = checkPolygons({ ...flat, structures: [{ ...s, polygons }] }).filter(
      ({ rule }) => rule === 'neighbour',
    );
    expect(findings).toMatchObject([{ at_um: [at[0] / 1000, at[1] / 1000] }]);
  });
});
