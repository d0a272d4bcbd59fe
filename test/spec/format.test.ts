import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { figure } from '../../src/core/figure.js';
import { formatFloorplan, formatJson, formatPolygons, formatTechnology } from '../../src/spec/format.js';
import { parseFloorplan } from '../../src/spec/parse-floorplan.js';
import { parsePolygons } from '../../src/spec/parse-polygons.js';
import { parseTechnology } from '../../src/spec/parse-technology.js';
import { kiln4, valueOf } from './kiln4.js';

const figures = fc.double({ noNaN: true, noDefaultInfinity: true }).map(figure);

describe('a figure', () => {
  it('is within half a unit of its twelfth digit and its own figure', () => {
    fc.assert(
      fc.property(fc.double({ min: 1e-300, max: 1e300, noNaN: true }), (n) => {
        expect(Math.abs(figure(n) - n)).toBeLessThanOrEqual(n * 5.0001e-12);
        expect(figure(figure(n))).toBe(figure(n));
        expect(figure(-n)).toBe(-figure(n));
      }),
    );
  });

  it('drops what lies behind, and the sign of zero', () => {
    expect(figure(0.1 + 0.2)).toBe(0.3);
    expect(figure(2 / 3)).toBe(0.666666666667);
    expect(Object.is(figure(-0), 0)).toBe(true);
  });
});

describe('written files', () => {
  it('of any plain data are read back', () => {
    const data = fc.letrec((tie) => ({
      value: fc.oneof(
        { depthSize: 'small' },
        fc.string(),
        figures,
        fc.maxSafeInteger().map((n) => n + 0),
        fc.boolean(),
        fc.constant(null),
        tie('list'),
        tie('keyed'),
      ),
      list: fc.array(tie('value')),
      keyed: fc.dictionary(
        fc.oneof(fc.string(), fc.constantFrom('cells', 'layers', 'polygons', 'sides')),
        tie('value'),
        { noNullPrototype: true },
      ),
    }));
    fc.assert(
      fc.property(data.keyed, (value) => {
        const text = formatJson(value);
        expect(JSON.parse(text)).toEqual(JSON.parse(JSON.stringify(value)));
        expect(text.endsWith('\n')).toBe(true);
        expect(formatJson(JSON.parse(text))).toBe(text);
      }),
    );
  });

  it('of random floorplans are read back, one row of cells a line', () => {
    const technology = valueOf(parseTechnology(kiln4('parallel-plate.technology.json'), 't'));
    const size = fc.integer({ min: 1, max: 12 });
    const length = fc.integer({ min: 1, max: 20000 }).map((n) => n / 1000);
    fc.assert(
      fc.property(
        size,
        size,
        length,
        length,
        fc.infiniteStream(fc.integer({ min: 0, max: 3 })),
        (rows, columns, x, y, random) => {
          const name = (): string => ['-', 'B0', 'B1', 'A_long_name_24_characters'.slice(0, 24)][random.next().value];
          const cells = Array.from({ length: rows }, () => Array.from({ length: columns }, name));
          cells[0][0] = 'B0';
          const capacitors = [...new Set(cells.flat())]
            .filter((n) => n !== '-')
            .map((n) => ({
              name: n,
              role: 'bit' as const,
              weight: 1,
              units: cells.flat().filter((c) => c === n).length,
            }));
          const floorplan = {
            technology,
            cells,
            capacitors,
            core: { rows, columns, pitch_um: [x, y] as const },
            version: 1 as const,
            format: 'steelyard/floorplan' as const,
          };
          const text = formatFloorplan(floorplan);
          expect(valueOf(parseFloorplan(text, 'f'))).toEqual(floorplan);
          const lines = text.split('\n');
          const start = lines.indexOf('  "cells": [');
          for (let r = 0; r < rows; r++) expect(JSON.parse(lines[start + 1 + r].replace(/,$/, ''))).toEqual(cells[r]);
        },
      ),
      { numRuns: 50 },
    );
  });

  it('do not depend on the order in which keys were made', () => {
    const reversed = (value: unknown): unknown =>
      typeof value !== 'object' || value === null
        ? value
        : Array.isArray(value)
          ? value.map(reversed)
          : Object.fromEntries(
              Object.entries(value)
                .reverse()
                .map(([k, v]) => [k, reversed(v)]),
            );
    // The device's parameters are the user's own, in the user's order.
    const technology = JSON.parse(kiln4('parallel-plate.technology.json'));
    const turned = reversed(technology) as typeof technology;
    turned.device.parameters = technology.device.parameters;
    expect(formatTechnology(turned)).toBe(formatTechnology(technology));
    const polygons = valueOf(parsePolygons(kiln4('kiln4.polygons.json'), 'p'));
    expect(
      formatPolygons({ ...polygons, technology: turned, structures: reversed(polygons.structures) as never }),
    ).toBe(kiln4('kiln4.polygons.json'));
  });

  it('leave out what is undefined and an empty list of ring units', () => {
    const floorplan = valueOf(parseFloorplan(kiln4('kiln4.floorplan.json'), 'f'));
    expect(formatFloorplan({ ...floorplan, ringUnits: [] })).not.toContain('ringUnits');
    expect(formatJson({ a: undefined, b: { c: undefined, d: 1 } })).toBe('{\n  "b": {"d": 1}\n}\n');
  });

  it('hold exact whole numbers, and no number that is not finite', () => {
    expect(formatJson({ seed: 9007199254740991, zero: -0 })).toBe('{\n  "seed": 9007199254740991,\n  "zero": 0\n}\n');
    expect(() => formatJson({ inl_lsb: NaN })).toThrow(RangeError);
  });
});
