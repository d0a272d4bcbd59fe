import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import type { Finding } from '../../src/check/finding.js';
import { checkPolygons } from '../../src/check/polygons.js';
import type { Polygon, Structure } from '../../src/core/layout.js';
import { outline, rectangle } from '../../src/core/rectangle.js';
import type { Polygons } from '../../src/spec/polygons.js';
import type { Technology } from '../../src/spec/technology.js';

const kiln4 = JSON.parse(readFileSync('test/fixtures/kiln4/kiln4.polygons.json', 'utf8')) as Polygons;

const [lower, lowerPlateVia, plate, topPlate, upper] = [21, 22, 23, 25, 27];
const box = (layer: number, x0: number, y0: number, x1: number, y1: number): Polygon => ({
  layer,
  datatype: 0,
  xy: outline(rectangle(x0, y0, x1, y1)),
});

const changed = (name: string, change: (s: Structure) => Partial<Structure>): Polygons => ({
  ...kiln4,
  structures: kiln4.structures.map((s) => (s.name === name ? { ...s, ...change(s) } : s)),
});
const withAdded = (...added: Polygon[]) => changed('kiln4', (top) => ({ polygons: [...top.polygons, ...added] }));
const withTechnology = (more: Partial<Technology>): Polygons => ({
  ...kiln4,
  technology: { ...kiln4.technology, ...more },
});

/** The one finding of a rule, and that there is no other of it. */
function only(p: Polygons, rule: string): Finding {
  const findings = checkPolygons(p).filter((finding) => finding.rule === rule);
  expect(findings).toHaveLength(1);
  return findings[0];
}

describe('single rules on a changed drawing', () => {
  it('via-size: a square of another side, and two that overlap', () => {
    const larger = withAdded(box(lowerPlateVia, 35700, 40000, 35970, 40270));
    expect(only(larger, 'via-size')).toMatchObject({ layer: 'lower-plate', at_um: [35.835, 40.135], found_um: 0.27 });
    const double = withAdded(
      box(lowerPlateVia, 35700, 40000, 35960, 40260),
      box(lowerPlateVia, 35800, 40100, 36060, 40360),
    );
    expect(only(double, 'via-size').found_um).toBeUndefined();
  });

  it('via-spacing: corner to corner', () => {
    const p = withAdded(box(lowerPlateVia, 35600, 40000, 35860, 40260), box(lowerPlateVia, 35800, 40440, 36060, 40700));
    const { at_um, found_um, limit_um } = only(p, 'via-spacing');
    expect({ at_um, found_um, limit_um }).toEqual({ at_um: [35.83, 40.35], found_um: 0.18, limit_um: 0.26 });
  });

  it('via-under-plate and wires-under-plate', () => {
    const [x, y] = [10860, 12040]; // the middle of a unit
    const found = checkPolygons(
      withAdded(box(lowerPlateVia, x - 130, y - 130, x + 130, y + 130), box(lower, x - 500, y - 500, x + 500, y + 500)),
    );
    expect(found.find((finding) => finding.rule === 'via-under-plate')).toMatchObject({ at_um: [10.86, 12.04] });
    expect(found.find((finding) => finding.rule === 'wires-under-plate')).toMatchObject({
      layer: 'lower-metal',
      at_um: [10.86, 12.04],
      nets: ['B3'],
    });
    expect(checkPolygons(withTechnology({ viaUnderTopPlate: true, wiresUnderPlate: true }))).toEqual([]);
  });

  it('a via through the top plate joins it to what it comes from', () => {
    const [x, y] = [10860, 12040];
    // From the bottom plate of a unit of B3 to a piece of the metal above: it meets the top plate on its way.
    const added = [box(24, x - 180, y - 180, x + 180, y + 180), box(upper, x - 280, y - 280, x + 280, y + 280)];
    expect(checkPolygons(withAdded(...added)).some((f) => f.rule === 'short' && f.nets?.includes('TOP'))).toBe(true);
  });

  it('boundary and unknown layers', () => {
    expect(only(withAdded(box(upper, 36000, 42000, 36500, 42500)), 'boundary')).toMatchObject({ layer: 'upper-metal' });
    expect(only(withAdded(box(99, 1000, 1000, 2000, 2000)), 'unknown-layer')).toMatchObject({ layer: '99/0' });
  });

  it('label: off its metal', () => {
    const p = changed('kiln4', (top) => ({
      labels: top.labels.map((label) => (label.text === 'B2' ? { ...label, xy: [23040, 180] as const } : label)),
    }));
    expect(only(p, 'label')).toMatchObject({ at_um: [23.04, 0.18], nets: ['B2'] });
    expect(only(p, 'floating')).toMatchObject({ nets: ['B2'] });
  });

  it('angle: a cut corner, and what it hides is still checked', () => {
    const p = changed('kiln4', (top) => ({
      polygons: [
        ...top.polygons,
        {
          layer: upper,
          datatype: 0,
          xy: [
            [1000, 500],
            [3000, 500],
            [3000, 1500],
            [2500, 2000],
            [1000, 2000],
          ] as const,
        },
      ],
    }));
    expect(only(p, 'angle')).toMatchObject({ layer: 'upper-metal', at_um: [2.75, 1.75] });
    expect(checkPolygons(p).map((finding) => finding.rule)).toEqual(['angle', 'floating']);
  });

  it('width: an outline around nothing', () => {
    const p = changed('kiln4', (top) => ({
      polygons: [
        ...top.polygons,
        {
          layer: upper,
          datatype: 0,
          xy: [
            [1000, 500],
            [3000, 500],
            [2000, 500],
          ] as const,
        },
      ],
    }));
    expect(checkPolygons(p)).toHaveLength(1);
    expect(only(p, 'width')).toMatchObject({ found_um: 0, at_um: [1, 0.5] });
  });

  it('max-width and enclosed-area', () => {
    const wide = withTechnology({
      layers: kiln4.technology.layers.map((l) => (l.name === 'plate-metal' ? { ...l, maxWidth_um: 5.1 } : l)),
    });
    const found = checkPolygons(wide);
    expect(found).toHaveLength(35);
    expect(new Set(found.map((finding) => finding.rule))).toEqual(new Set(['max-width']));
    const hole = [box(upper, 1000, 200, 3000, 700), box(upper, 1000, 1100, 3000, 1600)];
    const sides = [box(upper, 1000, 200, 1500, 1600), box(upper, 2500, 200, 3000, 1600)];
    expect(only(withAdded(...hole, ...sides), 'enclosed-area')).toMatchObject({ at_um: [2, 0.9] });
  });

  it('unit-area: a top plate that is a grid step short', () => {
    const p = changed('kiln4_unit', (unit) => ({
      polygons: unit.polygons.map((polygon) =>
        polygon.layer === topPlate ? box(topPlate, -2200, -2200, 2200, 2195) : polygon,
      ),
    }));
    const found = checkPolygons(p).filter((finding) => finding.rule === 'unit-area');
    expect(found).toHaveLength(35);
  });

  it('three nets in one piece: each is parted from the others where it joins them', () => {
    // A bar across the foot of B1's, B2's and B3's drops.
    const found = checkPolygons(withAdded(box(lower, 22580, 300, 24060, 500))).filter((f) => f.rule === 'short');
    expect(found.map((finding) => finding.nets)).toEqual(found.map(() => ['B1', 'B2', 'B3']));
    for (const finding of found) expect(finding.at_um[1]).toBeLessThan(2.2);
  });

  it('a name that no unit answers to', () => {
    const p = changed('kiln4', (top) => ({
      polygons: [...top.polygons, box(lower, 1000, 0, 1600, 600)],
      labels: [...top.labels, { text: 'SPARE', layer: lower, texttype: 5, xy: [1300, 180] as const }],
    }));
    expect(only(p, 'open')).toMatchObject({ nets: ['SPARE'], at_um: [1.3, 0.18] });
    expect(checkPolygons(p)).toHaveLength(1);
  });

  it('a frame cut through: two pieces with the name', () => {
    const p = changed('kiln4', (top) => ({
      polygons: top.polygons.flatMap((polygon) => {
        const isDrop = polygon.part === 'drop' && polygon.net === 'VSS';
        return isDrop ? [box(plate, 35560, 0, 36120, 1000), box(plate, 35560, 1500, 36120, 2540)] : [polygon];
      }),
    }));
    expect(only(p, 'open')).toMatchObject({ nets: ['VSS'], at_um: [35.84, 1] });
  });
});

describe('a flat list without references and cells', () => {
  /** The same shapes in one structure. */
  const flat: Polygons = (() => {
    const [unit, top] = kiln4.structures;
    const [reference] = top.references;
    const polygons = [...top.polygons];
    for (let row = 0; row < reference.rows; row++)
      for (let column = 0; column < reference.columns; column++)
        for (const { layer, datatype, xy } of unit.polygons) {
          const [dx, dy] = [reference.origin[0] + column * 7200, reference.origin[1] + row * 5700];
          polygons.push({ layer, datatype, xy: xy.map(([x, y]) => [x + dx, y + dy] as const) });
        }
    return { ...kiln4, structures: [{ ...top, polygons, references: [] }] };
  })();

  it('is as sound', () => {
    expect(checkPolygons(flat)).toEqual([]);
  });

  it('still counts the units of each capacitor', () => {
    const capacitors = kiln4.capacitors.map((c) => (c.name === 'B2' ? { ...c, units: 5 } : c));
    expect(only({ ...flat, capacitors }, 'unit-count')).toMatchObject({ nets: ['B2'], at_um: [23.32, 0.18] });
  });

  it('knows no unit between two bits', () => {
    const capacitors = kiln4.capacitors.filter((c) => c.name !== 'B0');
    expect(only({ ...flat, capacitors }, 'unit-net')).toMatchObject({ nets: ['B0', 'TOP'], at_um: [18.06, 23.44] });
  });
});
