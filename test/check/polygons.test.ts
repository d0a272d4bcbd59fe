import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { Random } from '../../src/core/random.js';
import { checkPolygons } from '../../src/check/polygons.js';
import type { Polygons } from '../../src/spec/polygons.js';
import { faults, names } from './plant-faults.js';

const kiln4 = JSON.parse(readFileSync('test/fixtures/kiln4/kiln4.polygons.json', 'utf8')) as Polygons;

describe('a sound drawing', () => {
  it('has no finding', () => {
    expect(checkPolygons(kiln4)).toEqual([]);
  });

  it('is judged by its shapes, not by what they say they are', () => {
    const random = new Random(5);
    const words = ['B0', 'B3', 'VSS', 'TOP', 'BOTTOM'];
    const parts = ['plate', 'trunk', 'via', 'shield'] as const;
    const scrambled: Polygons = {
      ...kiln4,
      structures: kiln4.structures.map((s) => ({
        ...s,
        polygons: s.polygons.map((polygon) => ({
          ...polygon,
          net: words[random.below(words.length)],
          part: parts[random.below(parts.length)],
        })),
      })),
    };
    expect(checkPolygons(scrambled)).toEqual([]);
  });
});

it('a sound drawing stays sound mirrored and turned within another', () => {
  for (const mirrored of [false, true])
    for (const angle_deg of [90, 180, 270]) {
      const reference = {
        structure: 'kiln4',
        origin: [50_000, 70_000] as const,
        columns: 1,
        rows: 1,
        columnStep: [0, 0] as const,
        rowStep: [0, 0] as const,
        mirrored,
        angle_deg,
      };
      const frame = { name: 'frame', polygons: [], references: [reference], labels: [] };
      expect(checkPolygons({ ...kiln4, topStructure: 'frame', structures: [...kiln4.structures, frame] })).toEqual([]);
    }
});

describe('a planted fault is found, by its kind and within a pitch of its place', () => {
  for (const [kind, plant] of Object.entries(faults))
    it(kind, () => {
      for (let seed = 1; seed <= 20; seed++) {
        const planted = plant(kiln4, new Random(seed));
        expect(planted, `seed ${seed}`).toBeDefined();
        const findings = checkPolygons(planted!.polygons);
        const found = findings.some((finding) => names(finding, planted!));
        expect(found, `seed ${seed}: ${JSON.stringify({ ...planted, polygons: 0 })} ${JSON.stringify(findings)}`).toBe(
          true,
        );
      }
    });
});
