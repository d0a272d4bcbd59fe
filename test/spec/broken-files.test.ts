import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import type { Result } from '../../src/core/problem.js';
import { parseArray } from '../../src/spec/parse-array.js';
import { parseFloorplan } from '../../src/spec/parse-floorplan.js';
import { parseLayerMap } from '../../src/spec/parse-layer-map.js';
import { parsePins } from '../../src/spec/parse-pins.js';
import { parsePolygons } from '../../src/spec/parse-polygons.js';
import { parseTechnology } from '../../src/spec/parse-technology.js';
import { changed, kiln4, linesOf } from './kiln4.js';

type Case = [path: (string | number)[], value: unknown, problems: string[]];

const files = {
  floorplan: kiln4('kiln4.floorplan.json'),
  polygons: kiln4('kiln4.polygons.json'),
  technology: kiln4('parallel-plate.technology.json'),
};
const ringWords = 'row -1 is above, row 5 below, column -1 left, column 3 right of the core';
const twin = { name: 'b3', role: 'bit', weight: 8, units: 8 };

const floorplans: Case[] = [
  [['core'], undefined, [' | no key "core" | "core": an object with "rows", "columns", "pitch_um"']],
  [
    ['cells', 2, 1],
    'BO',
    [
      '/capacitors/0/units | 1 for "B0" | 0, as many as are placed, or other cells',
      '/cells/2/1 | "BO" | "B0", the nearest known cell',
    ],
  ],
  [
    ['cells', 2, 1],
    '=',
    [
      '/capacitors/0/units | 1 for "B0" | 0, as many as are placed, or other cells',
      '/cells/2/1 | "=" | "-", the nearest known cell',
    ],
  ],
  [
    ['cells', 4],
    ['B3', 'B2'],
    [
      '/capacitors/3/units | 8 for "B3" | 7, as many as are placed, or other cells',
      '/cells/4 | a row of 2 cells | 3, as core.columns says',
    ],
  ],
  [
    ['core', 'rows'],
    6,
    [
      '/cells | 5 rows | 6, as core.rows says',
      `/ringUnits/0 | row 5, column 0 | a place in the ring: ${ringWords.replace('row 5', 'row 6')}`,
    ],
  ],
  [['capacitors', 1, 'units'], 3, ['/capacitors/1/units | 3 for "B1" | 2, as many as are placed, or other cells']],
  [['capacitors', 0, 'weight'], 0, ['/capacitors/0/weight | 0 | a whole number from 1 to 16383']],
  [['capacitors', 4, 'role'], 'dummy', ['/capacitors/4/role | "dummy" | "bit" or "termination"']],
  [['capacitors', 5], twin, ['/capacitors/5/name | "b3" | a name that differs from "B3" in more than case']],
  [['capacitors', 5], { ...twin, name: 'vss' }, ['/capacitors/5/name | "vss" | another name: VSS is a net of its own']],
  [['ringUnits', 0, 'row'], 4, [`/ringUnits/0 | row 4, column 0 | a place in the ring: ${ringWords}`]],
  [['ringUnits', 0, 'row'], 6, [`/ringUnits/0 | row 6, column 0 | a place in the ring: ${ringWords}`]],
  [
    ['ringUnits', 0, 'capacitor'],
    'TERN',
    [
      '/capacitors/4/units | 1 for "TERM" | 0, as many as are placed, or other cells',
      '/ringUnits/0/capacitor | "TERN" | "TERM", the nearest known capacitor',
    ],
  ],
  [['array', 'bits'], 40, ['/array/bits | 40 | a whole number from 2 to 14']],
  [['array', 'weights'], [1, 2], ['/array/weights | "weights" beside "bits" | one of the two']],
  [
    ['hookup', 'columns'],
    [],
    [
      '/hookup | "sides", "channels" and "columns" | "sides" and "channels", or "columns" alone for trunks under the plates',
    ],
  ],
  [['placement', 'status'], 'optimal', ['/placement/status | "optimal" | "proved", "effort-spent" or "interrupted"']],
  [
    ['technology', 'roles', 'bus'],
    'plate-metl',
    ['/technology/roles/bus | "plate-metl" | "plate-metal", the nearest known layer'],
  ],
];

const square = [
  [0, 0],
  [9, 0],
  [9, 9],
  [0, 9],
];
const structureOf = (references: unknown[]) => ({ name: 'x', polygons: [], references, labels: [] });
const reference = (structure: string, rows = 1) => ({
  structure,
  origin: [0, 0],
  columns: rows,
  rows,
  columnStep: [10, 0],
  rowStep: [0, 10],
  mirrored: false,
  angle_deg: 0,
});

const lists: Case[] = [
  [['topStructure'], 'kiln5', ['/topStructure | "kiln5" | "kiln4", the nearest known structure']],
  [
    ['structures', 0, 'polygons', 0, 'xy', 0],
    [0.5, 0],
    ['/structures/0/polygons/0/xy/0/0 | 0.5 | a whole number from -33554432 to 33554432'],
  ],
  [
    ['structures', 0, 'polygons', 0, 'xy'],
    square.slice(2),
    ['/structures/0/polygons/0/xy | a list of 2 | a list of 3 or more'],
  ],
  [
    ['structures', 0, 'polygons', 0, 'part'],
    'wire',
    [
      '/structures/0/polygons/0/part | "wire" | "plate", "tab", "pad", "trunk", "stub", "bus", "drop", "strap", "spine", "ring", "shield", "pin" or "via"',
    ],
  ],
  [
    ['structures', 0, 'name'],
    'kiln4',
    [
      '/structures/1/name | "kiln4" once more | each structure once',
      '/structures/1/references/0/structure | "kiln4_unit" | a known structure: "kiln4"',
    ],
  ],
  [
    ['structures', 2],
    structureOf([reference('x')]),
    ['/structures/2/references/0/structure | a structure within itself: x > x | references that end'],
  ],
  [
    ['structures', 0, 'references'],
    [reference('kiln4')],
    [
      '/structures/1/references/0/structure | a structure within itself: kiln4_unit > kiln4 > kiln4_unit | references that end',
    ],
  ],
  [
    ['structures', 2],
    structureOf([reference('kiln4_unit', 2000)]),
    ['/structures/2/references/0 | more than 10000000 shapes in "x" | 10000000 at most'],
  ],
  [
    ['structures', 1, 'references', 0, 'angle_deg'],
    45,
    ['/structures/1/references/0/angle_deg | 45 | a multiple of 90 from -3600 to 3600'],
  ],
  [
    ['structures', 1, 'references', 0, 'rows'],
    0,
    ['/structures/1/references/0/rows | 0 | a whole number from 1 to 32767'],
  ],
  [
    ['structures', 1, 'references', 0, 'rows'],
    8,
    ['/structures/1/references/0/cells | a list of 35 | a list of 40: rows times columns'],
  ],
  [
    ['structures', 1, 'references', 0, 'cells', 6],
    'B33',
    ['/structures/1/references/0/cells/6 | "B33" | "B3", the nearest known cell'],
  ],
  [['databaseUnit_m'], 1e-8, ['/databaseUnit_m | 1e-8 | 1e-9']],
];

const technologies: Case[] = [
  [['unit', 'kind'], 'spiral', ['/unit/kind | "spiral" | "parallel-plate", "framed-fingers" or "named-cell"']],
  [
    ['unit'],
    { kind: 'named-cell', cell: 'mine' },
    [
      '/unit | no key "capacitance_fF" | "capacitance_fF": a number above 0',
      '/unit | no key "outline_um" | "outline_um": a list of 2',
      '/unit | no key "terminals" | "terminals": an object with "bottom", "top"',
    ],
  ],
  [['hookup'], 'under', ['/hookup | "under" | "channel" or "under-plate"']],
  [['name'], '../x', ['/name | "../x" | a letter, then letters, digits, - or _, 40 at most']],
  [['layers', 0, 'minWidth_um'], 0.203, ['/layers/0/minWidth_um | 0.203 um | a multiple of 0.005 um, the grid']],
  [
    ['vias', 0, 'size_um'],
    0.265,
    ['/vias/0/size_um | 0.265 um | a multiple of 0.01 um, twice the grid: it is drawn about a centre on the grid'],
  ],
  [['unit', 'plateEnclosure_um'], 0.4001, ['/unit/plateEnclosure_um | 0.4001 um | a multiple of 0.005 um, the grid']],
  [
    ['layers', 0, 'maxWidth_um'],
    0.15,
    [
      '/layers/0/maxWidth_um | 0.15 um | 0.2 um or more, as minWidth_um says',
      '/vias/0/size_um | a pad of 0.36 um for "lower-plate" | a size and twice an enclosure of 0.15 um at most, the maxWidth_um of "lower-metal"',
    ],
  ],
  [['layers', 0, 'wideSpacing_um'], 0.1, ['/layers/0/wideSpacing_um | 0.1 um | 0.2 um or more, as minSpacing_um says']],
  [['layers', 0, 'wideFrom_um'], undefined, ['/layers/0 | "wideSpacing_um" without "wideFrom_um" | both or neither']],
  [
    ['layers', 0, 'minWidth_um'],
    undefined,
    ['/layers/0 | no key "minWidth_um" in a layer of kind "metal" | "minWidth_um": a number above 0'],
  ],
  [
    ['layers', 3, 'stream', 'layer'],
    21,
    ['/layers/3/stream | stream number 21/0 of "lower-metal" | a stream number of its own for each layer and via'],
  ],
  [
    ['vias', 2, 'stream', 'layer'],
    26,
    ['/vias/2/stream | stream number 26/0 of "top-plate-upper" | a stream number of its own for each layer and via'],
  ],
  [
    ['layers', 10, 'name'],
    'boundary',
    [
      '/layers/12/name | "boundary" once more | each layer and via once',
      '/roles/marker | "capacitor-marker" | a known layer: "lower-metal", "plate-metal", "top-plate", "upper-metal", "lower-metal-pin", "plate-metal-pin", "upper-metal-pin", "lower-metal-label", "plate-metal-label", "upper-metal-label", "boundary", "fill-exclusion", "boundary"',
      '/roles/boundary | a layer of kind "marker" | a layer of kind "outline"',
    ],
  ],
  [['layers', 3, 'lefName'], 'LOWER', ['/layers/3/lefName | "LOWER" once more | a name of its own for each layer']],
  [['layers', 4, 'of'], 'lower-mtal', ['/layers/4/of | "lower-mtal" | "lower-metal", the nearest known layer']],
  [['layers', 4, 'of'], undefined, ['/layers/4 | no key "of" in a layer of kind "pin" | "of": the name of its metal']],
  [['layers', 4, 'of'], 'boundary', ['/layers/4/of | a layer of kind "outline" | a layer of kind "metal" or "plate"']],
  [
    ['layers', 4, 'of'],
    'plate-metal',
    ['/layers | no layer of kind "pin" of "lower-metal" | one: the pins of the bits are drawn on it'],
  ],
  [
    ['layers', 6, 'kind'],
    'label',
    ['/layers | no layer of kind "pin" of "upper-metal" | one: the pins of TOP are drawn on it'],
  ],
  [
    ['layers', 0, 'of'],
    'top-plate',
    ['/layers/0/of | "of" in a layer of kind "metal" | it only in layers of kind "pin" or "label"'],
  ],
  [
    ['vias', 0, 'lower'],
    'plate-metal',
    [
      '/vias | no via between "lower-metal" and "plate-metal" | one: trunk and stub meet in every array',
      '/vias | no via between "lower-metal" and "plate-metal" | one: trunk and bus meet in every array',
      '/vias/0/upper | "plate-metal" | another layer than "lower"',
    ],
  ],
  [
    ['layers', 2, 'height_um'],
    2,
    [
      '/roles/bottomPlate | "plate-metal" at a height of 2.3 um | it below topPlate at 2 um: the top plate lies on the bottom plate',
    ],
  ],
  [
    ['layers', 0, 'height_um'],
    3,
    [
      '/vias/0/lower | "lower-metal" at 3 um | a layer below "plate-metal" at 2.3 um',
      '/roles/trunk | "lower-metal" at a height of 3 um | it below stub at 2.3 um: trunks run below the stubs that reach them',
    ],
  ],
  [['roles', 'marker'], 'boundary', ['/roles/marker | a layer of kind "outline" | a layer of kind "marker"']],
  [
    ['unit', 'topPlate_um', 0],
    0.5,
    [
      "/unit/topPlate_um | a top plate of 2.2 um2 | 4 um2 or more, its layer's minArea_um2",
      '/unit/topPlate_um/0 | a top plate of 0.5 um | 1 um or more, the minWidth_um of "top-plate"',
      '/unit/topPlate_um/0 | a top plate of 0.5 um | 0.56 um or more: via "top-plate-upper" with its enclosure',
      '/unit/terminals/bottom/at_um/0 | 2.4 um | -0.65 um to 0.65 um, on the plate',
    ],
  ],
  [
    ['unit', 'topPlate_um', 0],
    20,
    ['/unit/topPlate_um/0 | a bottom plate of 20.8 um | 20 um at most, the maxWidth_um of "plate-metal"'],
  ],
  [
    ['unit', 'terminals', 'top', 'at_um', 0],
    2,
    ['/unit/terminals/top/at_um/0 | 2 um | -1.92 um to 1.92 um, so that the via fits on the plate'],
  ],
  [
    ['unit', 'terminals', 'top', 'layer'],
    'upper-metal',
    ['/unit/terminals/top/layer | "upper-metal" | "top-plate", the layer of topPlate'],
  ],
  [
    ['unit', 'tabLevel_um'],
    2.5,
    ["/unit/tabLevel_um | 2.5 um | 2.42 um at most, so that the tab lies on the plate's edge"],
  ],
  [
    ['unit', 'tab_um', 1],
    0.2,
    ["/unit/tab_um/1 | 0.2 um | 0.28 um or more, the minWidth_um of the bottom plate's layer"],
  ],
  [
    ['device', 'terminals'],
    ['top', 'top'],
    ['/device/terminals | "top" 2 times | "top" once', '/device/terminals | "bottom" missing | "bottom" once'],
  ],
  [
    ['device', 'parameters'],
    { 'w\n.end': '1' },
    ['/device/parameters/w\\u000a.end | parameter "w\\n.end" | a letter, then letters, digits or _, 64 at most'],
  ],
  [['device', 'multiplicity'], 'w', ['/device/multiplicity | "w" | a key that is no size parameter']],
  [
    ['device', 'terminals'],
    ['top', 'bottom', 'well'],
    ['/device | terminal "well" without "bulk" | "bulk": the net that it is on'],
  ],
  [['device', 'bulk'], 'VSS', ['/device/bulk | "VSS" | no net, or a terminal for it beside "top" and "bottom"']],
  [
    ['device', 'parameters', 'w'],
    '4u\n.end',
    ['/device/parameters/w | "4u\\n.end" | a value without blanks: letters, digits and _ . + - * / ( )'],
  ],
  [
    ['mismatch', 'correlationLength_um'],
    undefined,
    ['/mismatch | "correlatedSigma_percent" without "correlationLength_um" | both or neither'],
  ],
];

const label = ([path, value]: Case): string => `${path.join('.')} = ${JSON.stringify(value)}`.slice(0, 70);
const expectProblems = (
  parse: (text: string, file: string) => Result<unknown>,
  text: string,
  [path, value, problems]: Case,
): void => expect(linesOf(parse(changed(text, path, value), 'x')).sort()).toEqual([...problems].sort());

describe('broken floorplans', () => {
  it.each(floorplans.map((c) => [label(c), c] as const))('%s', (_, c) =>
    expectProblems(parseFloorplan, files.floorplan, c),
  );

  it('name the place of every wrong cell', () => {
    const text =
      '{"format": "steelyard/floorplan", "version": 1, "core": {"rows": 2, "columns": 2, "pitch_um": [1, 1]},\n"capacitors": [{"name": "A", "role": "bit", "weight": 1, "units": 2}],\n"cells": [\n  ["A", "B"],\n  ["C", 7]\n]}';
    const result = parseFloorplan(text, 'f');
    expect(result.ok ? [] : result.issues.map((p) => [p.line, p.column, p.pointer])).toEqual([
      [2, 67, '/capacitors/0/units'],
      [4, 9, '/cells/0/1'],
      [5, 4, '/cells/1/0'],
      [5, 9, '/cells/1/1'],
    ]);
  });

  it('are none where only core, capacitors and cells are there, or a hookup no longer fits', () => {
    const { format, version, core, capacitors, cells } = JSON.parse(files.floorplan);
    const bare = { format, version, core, capacitors: capacitors.slice(0, 4), cells };
    expect(linesOf(parseFloorplan(JSON.stringify(bare), 'f'))).toEqual([]);
    expect(linesOf(parseFloorplan(changed(files.floorplan, ['hookup', 'sides', 0], ['L']), 'f'))).toEqual([]);
  });
});

describe('broken polygon lists', () => {
  it.each(lists.map((c) => [label(c), c] as const))('%s', (_, c) => expectProblems(parsePolygons, files.polygons, c));

  it('whose structures hold each other a thousand deep are read', () => {
    const list = JSON.parse(files.polygons);
    for (let i = 0; i < 1000; i++)
      list.structures.push({ ...structureOf([reference(i ? `x${i - 1}` : 'kiln4')]), name: `x${i}` });
    expect(linesOf(parsePolygons(JSON.stringify(list), 'p'))).toEqual([]);
  });

  it('whose references double forty times are too many shapes, and are not unfolded', () => {
    const list = JSON.parse(files.polygons);
    for (let i = 0; i < 40; i++) {
      const below = reference(i ? `x${i - 1}` : 'kiln4');
      list.structures.push({ ...structureOf([below, below]), name: `x${i}` });
    }
    expect(linesOf(parsePolygons(JSON.stringify(list), 'p')).join()).toMatch(/more than 10000000 shapes/);
  });
});

describe('broken technologies', () => {
  it.each(technologies.map((c) => [label(c), c] as const))('%s', (_, c) =>
    expectProblems(parseTechnology, files.technology, c),
  );
});

describe('any damage at all', () => {
  const parsers = [parseArray, parseFloorplan, parsePolygons, parseTechnology, parseLayerMap, parsePins];
  const texts = [kiln4('kiln4.array.json'), files.floorplan, files.technology];

  it('to the text ends in a result', () => {
    const piece = fc.constantFrom('', '{', '}', '[', ']', '"', ',', ':', 'null', '-', '0', '1e9', '\\', '\n', '\u0000');
    fc.assert(
      fc.property(fc.constantFrom(...texts), fc.nat(), fc.nat(40), piece, (text, at, length, put) => {
        const start = at % text.length;
        const damaged = text.slice(0, start) + put + text.slice(start + length);
        for (const parse of parsers) {
          const result = parse(damaged, 'x');
          if (!result.ok) expect(result.issues.length).toBeGreaterThan(0);
        }
      }),
      { numRuns: 200 },
    );
  });

  it('to the values ends in a result that points into the file', () => {
    const pathsOf = (value: unknown, path: (string | number)[] = []): (string | number)[][] =>
      typeof value !== 'object' || value === null
        ? [path]
        : [
            ...(path.length > 0 ? [path] : []),
            ...Object.entries(value).flatMap(([k, v]) => pathsOf(v, [...path, Array.isArray(value) ? Number(k) : k])),
          ];
    const pairs = texts.map((text) => ({ text, paths: pathsOf(JSON.parse(text)) }));
    fc.assert(
      fc.property(fc.constantFrom(...pairs), fc.nat(), fc.jsonValue(), ({ text, paths }, at, value) => {
        const damaged = changed(text, paths[at % paths.length], value);
        for (const parse of parsers) {
          const result = parse(damaged, 'x');
          for (const { line, column, pointer } of result.ok ? [] : result.issues) {
            expect(pointer).toMatch(/^(\/|$)/);
            expect(damaged.split('\n')[line! - 1].length).toBeGreaterThanOrEqual(column! - 1);
          }
        }
      }),
      { numRuns: 200 },
    );
  });
});
