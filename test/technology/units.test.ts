import { describe, expect, it } from 'vitest';
import { layerDensities } from '../../src/check/density.js';
import { checkPolygons } from '../../src/check/polygons.js';
import { flatten } from '../../src/core/flatten.js';
import type { Point, Polygon, Structure } from '../../src/core/layout.js';
import { Random } from '../../src/core/random.js';
import { outline, rectangle } from '../../src/core/rectangle.js';
import { writeStream } from '../../src/export/gdsii.js';
import { writeStreamLibrary } from '../../src/export/stream-library.js';
import type { Polygons } from '../../src/spec/polygons.js';
import type { FramedFingersUnit } from '../../src/spec/technology.js';
import { drawnCapacitance_fF } from '../../src/spec/unit-geometry.js';
import { drawn, template } from '../pipeline/drawn.js';
import { readRecords, sayable } from '../stream.js';

const arrayIn = (name: string): Polygons =>
  drawn({ bits: 3, effort: 'quick' }, undefined, 1e6, template(name)).polygons!;

const rulesOf = (p: Polygons): string[] => [...new Set(checkPolygons(p).map(({ rule }) => rule))];

const changed = (p: Polygons, name: string, change: (s: Structure) => Partial<Structure>): Polygons => ({
  ...p,
  structures: p.structures.map((s) => (s.name === name ? { ...s, ...change(s) } : s)),
});

const streamOf = (p: Polygons, layer: string) => p.technology.layers.find(({ name }) => name === layer)!.stream;

/** Whether a point lies within an outline: how often a ray to the right crosses it. */
function holds(xy: readonly Point[], x: number, y: number): boolean {
  let inside = false;
  xy.forEach(([ax, ay], i) => {
    const [bx, by] = xy[(i + 1) % xy.length];
    if (ay > y !== by > y && x < ax + ((y - ay) * (bx - ax)) / (by - ay)) inside = !inside;
  });
  return inside;
}

describe('framed fingers', () => {
  const p = arrayIn('framed-fingers');
  const unitName = `${p.topStructure}_unit`;
  const unit = p.structures.find(({ name }) => name === unitName)!;
  const metal = streamOf(p, 'finger-metal');
  const onMetal = unit.polygons.filter(({ layer }) => layer === metal.layer);
  const comb = onMetal.filter(({ net }) => net === 'TOP');
  const frame = onMetal.filter(({ net }) => net === 'BOTTOM');

  it('have as many facing edges as the capacitance says, counted on a raster', () => {
    // Squares of 20 nm, on whose edges all sizes of this unit lie: an edge of the comb counts where the frame is the first metal across the
    // gap, and lies 200 nm off.
    const [step, half] = [20, 110];
    const at = (shapes: readonly Polygon[]) => {
      const raster = new Uint8Array(4 * half * half);
      for (let j = 0; j < 2 * half; j++)
        for (let i = 0; i < 2 * half; i++)
          if (shapes.some(({ xy }) => holds(xy, (i - half + 0.5) * step, (j - half + 0.5) * step)))
            raster[j * 2 * half + i] = 1;
      return raster;
    };
    const [top, bottom] = [at(comb), at(frame)];
    const gap = 200 / step;
    let edges = 0;
    for (let from = 0; from < top.length; from++)
      for (const by of [1, -1, 2 * half, -2 * half]) {
        if (top[from] === 0) continue;
        const between = Array.from({ length: gap }, (_, k) => from + (k + 1) * by);
        if (between.every((k) => top[k] === 0 && bottom[k] === 0) && bottom[from + (gap + 1) * by] === 1) edges++;
      }
    const { dielectric, unit: own } = p.technology;
    expect((edges * step) / 1000).toBe(21.2);
    expect((edges * step * dielectric.facingCapacitance_fF_per_um!) / 1000).toBeCloseTo(own.capacitance_fF, 9);
    expect(drawnCapacitance_fF(p.technology)).toBeCloseTo(own.capacitance_fF, 9);
    expect(own.capacitance_fF).toBeGreaterThanOrEqual(1);
    expect(own.capacitance_fF).toBeLessThanOrEqual(2);
  });

  it('lie under the region that an extractor leaves out, which holds nothing else', () => {
    const { stream } = p.technology.layers.find(({ name }) => name === p.technology.roles.extractionExclusion)!;
    const [region, ...more] = unit.polygons.filter(({ layer }) => layer === stream.layer);
    expect(more).toEqual([]);
    for (const { xy } of comb) for (const [x, y] of xy) expect(holds(region.xy, x, y)).toBe(true);
    const tab = (p.technology.unit as FramedFingersUnit).tab_um![0] * 1000;
    const reach = (shapes: readonly Polygon[]) => Math.max(...shapes.flatMap(({ xy }) => xy.map(([x]) => x)));
    expect(reach([region])).toBe(reach(frame) - tab);
  });

  it('stand over a strip on VSS, or over nothing', () => {
    const { unit: own } = p.technology;
    const bare = drawn({ bits: 3, effort: 'quick', rings: 2 }, undefined, 1e6, {
      ...p.technology,
      unit: { ...(own as FramedFingersUnit), shield: false },
    });
    expect(bare.findings).toEqual([]);
    const strips = ({ structures, topStructure, technology }: Polygons) => {
      const lower = streamOf(p, 'lower-metal').layer;
      const top = structures.find(({ name }) => name === topStructure)!;
      return top.polygons.filter(
        ({ layer, net, xy }) => layer === lower && net === 'VSS' && xy[1][0] - xy[0][0] > 5 * technology.grid_nm * 100,
      );
    };
    expect(strips(bare.polygons!)).toEqual([]);
    const columns = p.structures.at(-1)!.references[0].columns;
    expect(strips(p)).toHaveLength(columns);
  });

  it('keep the wide spacing only where their own metal is wide', () => {
    const rowGap = (wideFrom_um: number): number => {
      const layers = p.technology.layers.map((l) => (l.name === 'finger-metal' ? { ...l, wideFrom_um } : l));
      const own = p.technology.unit as FramedFingersUnit;
      const sizes = { gap_um: 0.4, fingerLength_um: 2.4, frameWidth_um: 0.5 };
      const terminals = { ...own.terminals, top: { layer: 'finger-metal', at_um: [1, -1.2] as const } };
      const technology = { ...p.technology, layers, unit: { ...own, ...sizes, terminals } };
      const { findings, polygons } = drawn({ bits: 3, effort: 'quick' }, undefined, 1e6, technology);
      expect(findings).toEqual([]);
      return polygons!.structures.at(-1)!.references[0].rowStep[1] - 4600;
    };
    expect(rowGap(0.505)).toBe(280);
    expect(rowGap(0.5)).toBe(400);
  });

  const shorter = (polygon: Polygon, dy: number): Polygon => {
    // The end of one finger: the horizontal edge a finger wide, of those the first.
    const at = polygon.xy.findIndex(([x, y], i) => {
      const [nextX, nextY] = polygon.xy[(i + 1) % polygon.xy.length];
      return y === nextY && Math.abs(x - nextX) === 200 && i > 2;
    });
    return {
      ...polygon,
      xy: polygon.xy.map(([x, y], i) => (i === at || i === at + 1 ? [x, y + dy] : [x, y]) as Point),
    };
  };

  it('are all of one size: a finger of the comb or of the frame that is a grid step short is found', () => {
    const combShort = changed(p, unitName, (s) => ({
      polygons: s.polygons.map((polygon) => (polygon === comb[0] ? shorter(polygon, -5) : polygon)),
    }));
    expect(rulesOf(combShort)).toEqual(['unit-area']);
    const frameShort = changed(p, unitName, (s) => ({
      polygons: s.polygons.map((polygon) => (polygon === frame[0] ? shorter(polygon, 5) : polygon)),
    }));
    expect(rulesOf(frameShort)).toEqual(['unit-area']);
  });

  it('are units only within a closed frame', () => {
    const open = changed(p, unitName, (s) => ({ polygons: s.polygons.filter((polygon) => polygon !== frame[1]) }));
    const missing = checkPolygons(open).filter(({ rule }) => rule === 'unit-missing');
    expect(missing).toHaveLength(p.structures.at(-1)!.references[0].cells!.length);
    expect(missing[0].text).toMatch(/has no comb within a closed frame$/);
  });

  it('are found without cells too, and counted', () => {
    const uncelled = changed(p, p.topStructure, (s) => ({
      references: s.references.map(({ cells: _, ...rest }) => rest),
    }));
    expect(checkPolygons(uncelled)).toEqual([]);
    const capacitors = p.capacitors.map((c) => (c.name === 'B2' ? { ...c, units: 5 } : c));
    expect(rulesOf({ ...uncelled, capacitors })).toEqual(['unit-count']);
  });
});

it('covers each layer to a share of the block that sampling finds too', () => {
  const p = arrayIn('parallel-plate');
  const { layers } = flatten(p.structures, p.topStructure);
  const { stream } = p.technology.layers.find(({ name }) => name === p.technology.roles.boundary)!;
  const block = layers.get(`${stream.layer}/${stream.datatype}`)!;
  const densities = layerDensities(p);
  expect(densities.map(({ layer }) => layer)).toEqual(['lower-metal', 'plate-metal', 'top-plate', 'upper-metal']);
  for (const { layer, density } of densities) {
    const own = layers.get(`${streamOf(p, layer).layer}/0`)!;
    const random = new Random(7);
    let hits = 0;
    for (let i = 0; i < 20000; i++) {
      const [x, y] = [random.below(block.x1[0]) + 0.5, random.below(block.y1[0]) + 0.5];
      if (own.x0.some((x0, b) => x0 < x && x < own.x1[b] && own.y0[b] < y && y < own.y1[b])) hits++;
    }
    // Three standard deviations of 20,000 samples come to 0.011 at most.
    expect(Math.abs(hits / 20000 - density)).toBeLessThan(0.011);
  }
});

describe('a named cell', () => {
  const p = arrayIn('named-cell');
  const unitName = `${p.topStructure}_unit`;

  it('is referenced in the stream and not defined there, unless a placeholder is asked for', () => {
    const { structures } = readRecords(writeStream(p));
    expect(structures.map(({ name }) => name)).toEqual([unitName, p.topStructure]);
    expect(structures[0].references.map(({ structure }) => structure)).toEqual(['unit_capacitor']);
    const stubbed = readRecords(writeStream(p, { stubCell: true })).structures;
    expect(stubbed).toEqual(sayable(p.structures));
    expect(stubbed.map(({ name }) => name)).toContain('unit_capacitor');
  });

  it('stays a reference in a flat file, at the same places', () => {
    const placesOf = (structures: readonly Structure[], top: string) =>
      flatten(structures, top, 'unit_capacitor').instances.map(({ place }) => JSON.stringify(place));
    const { structures } = readRecords(writeStream(p, { flat: true, stubCell: true }));
    expect(structures.map(({ name }) => name)).toEqual(['unit_capacitor', p.topStructure]);
    expect(placesOf(structures, p.topStructure)).toEqual(placesOf(p.structures, p.topStructure));
    expect(readRecords(writeStream(p, { flat: true })).structures.map(({ name }) => name)).toEqual([p.topStructure]);
  });

  it('keeps its name where several arrays share a library', () => {
    const bytes = writeStreamLibrary([p, p], { topStructure: 'both' });
    const units = readRecords(bytes).structures.filter(({ name }) => name.startsWith(unitName));
    expect(units).toHaveLength(2);
    for (const { references } of units)
      expect(references.map(({ structure }) => structure)).toEqual(['unit_capacitor']);
  });

  it('has nothing drawn over it but its landings, straps and what runs to them', () => {
    const { structures, technology } = p;
    const landings = structures.find(({ name }) => name === unitName)!;
    const middle = streamOf(p, 'middle-metal').layer;
    const [landing, ...more] = landings.polygons.filter(({ layer }) => layer === middle);
    expect(more).toEqual([]);
    // Off the outline by the spacing of wide metal, but for the way to the terminal at the left-hand side.
    const clearance = technology.layers.find(({ name }) => name === 'middle-metal')!.wideSpacing_um! * 1000;
    for (let x = -3000 - clearance + 5; x < 3000 + clearance; x += 10)
      for (const y of [-2500 - clearance + 5, -1000, 1000, 2500 + clearance - 5])
        expect(holds(landing.xy, x, y)).toBe(false);
    expect(holds(landing.xy, -2700, 0)).toBe(true);
  });

  it('is no unit without a landing over each terminal, with cells or without', () => {
    const bare = changed(p, unitName, (s) => ({ polygons: s.polygons.filter(({ net }) => net !== 'BOTTOM') }));
    expect(rulesOf(bare)).toContain('unit-missing');
    const uncelled = changed(bare, p.topStructure, (s) => ({
      references: s.references.map(({ cells: _, ...rest }) => rest),
    }));
    const missing = checkPolygons(uncelled).filter(({ rule }) => rule === 'unit-missing');
    expect(missing.length).toBe(p.structures.at(-1)!.references[0].cells!.length);
    expect(missing[0].text).toBe('an instance of unit_capacitor without a landing over each terminal');
  });

  it('is covered at its terminals, and overlaps no other', () => {
    const shifted = changed(p, unitName, (s) => ({
      references: s.references.map((r) => ({ ...r, origin: [r.origin[0] - 200, r.origin[1]] as Point })),
    }));
    expect(rulesOf(shifted)).toEqual(['unit-area']);
    const doubled = changed(p, unitName, (s) => ({
      references: [...s.references, { ...s.references[0], origin: [-2995, -2500] as Point }],
    }));
    expect(checkPolygons(doubled).some(({ text }) => text === 'the outline overlaps that of another unit')).toBe(true);
  });

  it('lets only VSS pass below it', () => {
    const { layer, datatype } = streamOf(p, 'lower-metal');
    const reference = p.structures.at(-1)!.references[0];
    const [x, y] = reference.origin;
    const wire: Polygon = { layer, datatype, xy: outline(rectangle(x - 500, y - 500, x + 500, y + 500)) };
    const crossed = changed(p, p.topStructure, (s) => ({ polygons: [...s.polygons, wire] }));
    expect(rulesOf(crossed)).toContain('wires-under-plate');
  });

  it('may bring its terminals elsewhere: the hookup finds its way', () => {
    const { technology } = p;
    if (technology.unit.kind !== 'named-cell') throw new Error('another unit');
    const { terminals } = technology.unit;
    for (const bottom of [
      [5.6, 1],
      [3, 0.3],
      [1, 4.7],
      [5, 0.4],
    ] as const)
      for (const top of [
        [3, 2.5],
        [4.5, 2],
        [2, 3],
      ] as const) {
        const unit = {
          ...technology.unit,
          terminals: { bottom: { ...terminals.bottom, at_um: bottom }, top: { ...terminals.top, at_um: top } },
        };
        const moved = drawn(
          { bits: 3, effort: 'quick', core: { rows: 3, columns: 5 }, fillTop: 'VSS' },
          undefined,
          1e6,
          {
            ...technology,
            unit,
          },
        );
        expect(moved.findings, JSON.stringify([bottom, top])).toEqual([]);
      }
  });
});
