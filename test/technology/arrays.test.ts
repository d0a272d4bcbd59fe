import { describe, expect, it } from 'vitest';
import { checkPolygons } from '../../src/check/polygons.js';
import { Random } from '../../src/core/random.js';
import { formatFloorplan, formatPolygons } from '../../src/spec/format.js';
import { parseFloorplan } from '../../src/spec/parse-floorplan.js';
import { parsePolygons } from '../../src/spec/parse-polygons.js';
import { faults, names } from '../check/plant-faults.js';
import { drawn, type Given, template } from '../pipeline/drawn.js';

const technologies = ['parallel-plate', 'framed-fingers', 'named-cell'] as const;

function expectClean(name: string, given: Given): void {
  const { findings, metrics, polygons, floorplan } = drawn(
    { effort: 'quick', ...given },
    undefined,
    1e6,
    template(name),
  );
  expect(findings).toEqual([]);
  expect(metrics.hookup.sameMetalCrossings).toBe(0);
  expect(polygons!.technology.name).toBe(name);
  expect(floorplan.array!.technology ?? name).toBe(name);
}

describe('arrays in every technology have no findings', () => {
  for (const name of technologies)
    for (const bits of [2, 3, 4, 5, 6, 7, 8])
      for (const rings of [0, 1, 2]) {
        const fillTop = (bits + rings) % 2 === 0 ? 'VSS' : 'TOP';
        it(`${name}: ${bits} bits, ${rings} rings, fill on ${fillTop}`, () =>
          expectClean(name, { bits, rings, fillTop }));
      }

  for (const name of technologies)
    for (const given of [
      { bits: 5, core: { rows: 7, columns: 7 }, rings: 2, fillTop: 'VSS' },
      { bits: 4, core: { rows: 5, columns: 5 }, rings: 0, fillTop: 'VSS', termination: 'core' },
      { weights: [3, 3, 3, 7], rings: 3, tracksPerChannel: 6 },
    ] satisfies Given[])
      it(`${name}: ${JSON.stringify(given)}`, () => expectClean(name, given));
});

describe.each(['framed-fingers', 'named-cell'])('%s', (name) => {
  const { polygons, floorplan } = drawn({ bits: 4, effort: 'quick', fillTop: 'VSS' }, undefined, 1e6, template(name));

  it('a planted fault is found, by its kind and within a pitch of its place', () => {
    for (const [kind, plant] of Object.entries(faults))
      for (let seed = 1; seed <= 20; seed++) {
        const planted = plant(polygons!, new Random(seed));
        expect(planted, `${kind}, seed ${seed}`).toBeDefined();
        const findings = checkPolygons(planted!.polygons);
        const found = findings.some((finding) => names(finding, planted!));
        expect(found, `${kind}, seed ${seed}: ${JSON.stringify(findings.slice(0, 5))}`).toBe(true);
      }
  });

  it('its files are read again as they were written', () => {
    expect(parsePolygons(formatPolygons(polygons!), 'p')).toEqual({ ok: true, value: polygons });
    const again = parseFloorplan(formatFloorplan(floorplan), 'f');
    expect(again.ok && again.value.technology).toEqual(template(name));
  });

  it('a sound drawing stays sound mirrored and turned within another', () => {
    const part = { origin: [90_000, 70_000], columns: 1, rows: 1, columnStep: [0, 0], rowStep: [0, 0] } as const;
    for (const [mirrored, angle_deg] of [
      [true, 0],
      [false, 90],
      [true, 270],
    ] as const) {
      const reference = { ...part, structure: polygons!.topStructure, mirrored, angle_deg };
      const frame = { name: 'frame', polygons: [], references: [reference], labels: [] };
      const turned = { ...polygons!, topStructure: 'frame', structures: [...polygons!.structures, frame] };
      expect(checkPolygons(turned)).toEqual([]);
    }
  });
});
