import { readFileSync, writeFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { checkPolygons } from '../../src/check/polygons.js';
import { flatten } from '../../src/core/flatten.js';
import { Infeasible } from '../../src/core/problem.js';
import { writeStream } from '../../src/export/gdsii.js';
import { drawingRules } from '../../src/hookup/style.js';
import { parseTechnology } from '../../src/spec/parse-technology.js';
import { resolveArray } from '../../src/spec/resolve.js';
import { technologyMarkdown } from '../../src/spec/schema-technology.js';
import { schema } from '../../src/spec/schema.js';
import type { Technology } from '../../src/spec/technology.js';
import { drawnCapacitance_fF } from '../../src/spec/unit-geometry.js';
import { drawn, template } from '../pipeline/drawn.js';
import { changed, linesOf, template as textOf, valueOf } from '../spec/kiln4.js';
import { readRecords, sayable } from '../stream.js';

type Case = [path: (string | number)[], value: unknown, problems: string[]];

const lines = (name: string, path: (string | number)[], value: unknown): string[] =>
  linesOf(parseTechnology(changed(textOf(name), path, value), 't'));

describe('what a template cannot be is said with its reason', () => {
  const fingers: Case[] = [
    [
      ['unit', 'fingerWidth_um'],
      0.18,
      ['/unit/fingerWidth_um | 0.18 um | 0.2 um or more, the minWidth_um of "finger-metal"'],
    ],
    [['unit', 'gap_um'], 0.195, ['/unit/gap_um | 0.195 um | 0.2 um or more, the minSpacing_um of "finger-metal"']],
    [
      ['unit', 'barWidth_um'],
      0.3,
      ['/unit/barWidth_um | 0.3 um | 0.4 um or more: via "finger-upper" with its enclosure'],
    ],
    [
      ['unit', 'fingerLength_um'],
      0.3,
      [
        '/unit/fingerLength_um | 0.3 um | 0.4 um or more: the gap, and a face as long as the minWidth_um of "finger-metal"',
      ],
    ],
    [
      ['unit', 'fingerLength_um'],
      2.205,
      [
        '/unit/barWidth_um | a frame 3.405 um high | a multiple of 0.01 um, twice the grid: it is drawn about a centre on the grid',
      ],
    ],
    [['unit', 'tab_um', 0], 0.1, ['/unit/tab_um/0 | 0.1 um | 0.2 um or more, so that a via fits on tab and frame']],
    [
      ['unit', 'capacitance_fF'],
      2,
      ['/unit/capacitance_fF | 2 fF | 1.696 within 5 percent: 21.2 um of facing edges at 0.08 fF per um'],
    ],
    [['unit', 'capacitance_fF'], 1.75, []],
    [
      ['unit', 'terminals', 'top', 'at_um', 1],
      0,
      ["/unit/terminals/top/at_um/1 | 0 um | -1.1 um to -1.1 um, so that the via fits on the comb's bar"],
    ],
    [
      ['dielectric', 'facingCapacitance_fF_per_um'],
      undefined,
      [
        '/dielectric | no key "facingCapacitance_fF_per_um" for a unit of kind "framed-fingers" | "facingCapacitance_fF_per_um": a number above 0',
      ],
    ],
    [
      ['roles', 'extractionExclusion'],
      undefined,
      [
        '/roles | no key "extractionExclusion" for a unit of kind "framed-fingers" | "extractionExclusion": a marker layer over the fingers',
      ],
    ],
    [
      ['vias', 1, 'size_um'],
      0.4,
      [
        '/unit/barWidth_um | 0.4 um | 0.52 um or more: via "finger-upper" with its enclosure',
        '/unit/tab_um/0 | 0.2 um | 0.32 um or more, so that a via fits on tab and frame',
      ],
    ],
  ];
  const cells: Case[] = [
    [
      ['unit', 'outline_um', 1],
      [6, -1],
      ['/unit/outline_um/1/1 | -1 um | more than 0 um: the upper right corner comes second'],
    ],
    [
      ['unit', 'outline_um', 1, 0],
      6.005,
      ['/unit/outline_um/1/0 | a middle at 3.0025 um | one on the grid of 0.005 um: the cell is placed by it'],
    ],
    [
      ['unit', 'terminals', 'bottom', 'at_um', 0],
      0.1,
      ['/unit/terminals/bottom/at_um/0 | 0.1 um | 0.18 um to 5.82 um, so that the via fits within the outline'],
    ],
    [['unit', 'cell'], 'a cell', ['/unit/cell | "a cell" | letters, digits, _, ? or $, 127 at most']],
    [
      ['viaUnderTopPlate'],
      false,
      ['/viaUnderTopPlate | false | true: "upper-metal" is the straps\' metal too, and straps run over vias'],
    ],
    [['unit', 'shield'], true, [expect.stringMatching(/^\/unit\/shield \| unknown key "shield"/)]],
  ];
  const plates: Case[] = [
    [
      ['dielectric', 'plateCapacitance_fF_per_um2'],
      undefined,
      [
        '/dielectric | no key "plateCapacitance_fF_per_um2" for a unit of kind "parallel-plate" | "plateCapacitance_fF_per_um2": a number above 0',
      ],
    ],
  ];
  for (const [name, cases] of [
    ['framed-fingers', fingers],
    ['named-cell', cells],
    ['parallel-plate', plates],
  ] as const)
    it.each(cases)(`${name}: %j = %j`, (path, value, problems) => {
      // One wrong size may upset several rules.
      const said = lines(name, path, value);
      if (problems.length === 0) expect(said).toEqual([]);
      else expect(said).toEqual(expect.arrayContaining(problems));
    });

  it('and so is what cannot be drawn though each rule by itself could be kept', () => {
    const cannot = (name: string, path: (string | number)[], value: unknown) =>
      expect(() => drawingRules(valueOf(parseTechnology(changed(textOf(name), path, value), 't'))));
    cannot('framed-fingers', ['unit', 'tabLevel_um'], 0.4).toThrow(/two tab levels stand 0.8 um apart.*need 0.9 um/);
    cannot('framed-fingers', ['layers', 2, 'minSpacing_um'], 0.5).toThrow(/stands 0.4 um .* 0.5 um are needed/);
    cannot('parallel-plate', ['unit', 'tabLevel_um'], 2.3).toThrow(Infeasible);
  });
});

it('every key of a template is documented, once for each kind of unit that has it', () => {
  const table = technologyMarkdown().split('\n');
  const keys = new Set(table.map((row) => row.split('`')[1]));
  const given = new Set<string>();
  const visit = (value: unknown, path: string): void => {
    if (Array.isArray(value)) return value.forEach((entry) => visit(entry, `${path}[]`));
    if (typeof value !== 'object' || value === null) return;
    for (const [key, inner] of Object.entries(value)) {
      const here = path === '' ? key : `${path}.${key}`;
      if (!['format', 'version'].includes(here) && !/^device\.parameters\.|\.stream\./.test(here))
        given.add(
          Array.isArray(inner) && typeof inner[0] === 'object' && !Array.isArray(inner[0]) ? `${here}[]` : here,
        );
      if (!/^device\.parameters|\.stream$|^gradient$/.test(here)) visit(inner, here);
    }
  };
  for (const name of ['parallel-plate', 'framed-fingers', 'named-cell']) visit(JSON.parse(textOf(name)), '');
  for (const key of given) expect([key, keys.has(key)]).toEqual([key, true]);
  const undescribed = Object.entries(schema('technology').properties!).filter(([, part]) => !part.description);
  expect(undescribed.map(([key]) => key)).toEqual(['$schema', 'format', 'version']);
});

it('the table of keys beside the templates is the one that the schema gives', () => {
  const file = 'templates/README.md';
  const text = readFileSync(file, 'utf8');
  const part = /(<!-- keys -->\n\n)[\s\S]*?(\n<!-- end of keys -->)/;
  expect(text).toMatch(part);
  const now = text.replace(part, (_, start: string, end: string) => start + technologyMarkdown() + end);
  if (process.env.GOLDEN === 'update') writeFileSync(file, now);
  else expect(text).toBe(now);
});

describe("a template of one's own, made from the printed one", () => {
  /** Every layer and via on another number, ten rules changed. */
  function mine(): Technology {
    const own = JSON.parse(textOf('parallel-plate'));
    own.name = 'mine';
    own.layers.forEach((l: { stream: object }, i: number) => (l.stream = { layer: 100 + i, datatype: 2 }));
    own.vias.forEach((v: { stream: object }, i: number) => (v.stream = { layer: 180 + i, datatype: 3 }));
    const [lower, plate, topPlate, upper] = own.layers;
    Object.assign(lower, { minWidth_um: 0.24, minSpacing_um: 0.26 });
    Object.assign(plate, { minWidth_um: 0.3, minSpacing_um: 0.32, wideFrom_um: 2.5, wideSpacing_um: 0.6 });
    Object.assign(topPlate, { minSpacing_um: 1.4 });
    Object.assign(upper, { minSpacing_um: 0.42, minArea_um2: 0.4 });
    Object.assign(own.vias[0], { enclosure_um: 0.07 });
    return valueOf(parseTechnology(JSON.stringify(own), 'mine'));
  }

  it('draws nine bits that are clean, and clean when read back from the stream', () => {
    const { polygons, findings } = drawn({ bits: 9, effort: 'quick' }, undefined, 1e6, mine());
    expect(findings).toEqual([]);
    const { structures } = readRecords(writeStream(polygons!));
    expect(structures).toEqual(sayable(polygons!.structures));
    const { layers } = flatten(structures, polygons!.topStructure);
    for (const { layer } of layers.values()) expect(layer).toBeGreaterThanOrEqual(100);
    // The stream says nothing of cells; the check counts the units all the same.
    expect(checkPolygons({ ...polygons!, structures })).toEqual([]);
  });
});

describe('unit_fF', () => {
  const resolved = (name: string, unit_fF: number): Technology =>
    valueOf(resolveArray({ format: 'steelyard/array', version: 1, bits: 4, unit_fF }, template(name))).technology;

  it.each([
    ['parallel-plate', [5, 12, 20.064, 37, 100, 370]],
    ['framed-fingers', [0.5, 1, 1.5, 1.696, 2, 7]],
  ] as const)('%s: the unit that is drawn has the capacitance within half a step of the grid', (name, list) => {
    const own = template(name);
    for (const wanted of list) {
      const technology = resolved(name, wanted);
      const { unit } = technology;
      // From the densities, without the template's own calibration: both shipped units keep to theirs.
      expect(drawnCapacitance_fF(technology)).toBeCloseTo(unit.capacitance_fF, 9);
      const step =
        unit.kind === 'parallel-plate'
          ? 0.01 * (own.dielectric.plateCapacitance_fF_per_um2! * Math.max(...unit.topPlate_um) + 0.08)
          : unit.kind === 'framed-fingers'
            ? 0.01 * 2 * unit.fingers * own.dielectric.facingCapacitance_fF_per_um!
            : 0;
      expect(Math.abs(unit.capacitance_fF - wanted)).toBeLessThanOrEqual(step / 2 + 1e-9);
      expect(linesOf(parseTechnology(JSON.stringify(technology), 't'))).toEqual([]);
    }
  });

  it.each([
    ['parallel-plate', 6],
    ['parallel-plate', 45],
    ['framed-fingers', 0.8],
    ['framed-fingers', 3.3],
  ] as const)('%s: an array of %d fF is clean and carries its unit', (name, unit_fF) => {
    const given = { bits: 4, unit_fF, core: { rows: 5, columns: 5 }, effort: 'quick', fillTop: 'VSS' } as const;
    const { findings, floorplan, polygons } = drawn(given, undefined, 1e6, template(name));
    expect(findings).toEqual([]);
    expect(floorplan.array!.unit_fF).toBe(unit_fF);
    expect(floorplan.technology).toEqual(resolved(name, unit_fF));
    expect(polygons!.technology).toEqual(floorplan.technology);
    expect(floorplan.technology!.device.parameters).not.toEqual(template(name).device.parameters);
  });

  it('leaves the template as it is where its own is asked for, and a calibrated one calibrated', () => {
    expect(resolved('parallel-plate', 20.064)).toEqual(template('parallel-plate'));
    const measured = changed(textOf('parallel-plate'), ['unit', 'capacitance_fF'], 40.128);
    const technology = valueOf(parseTechnology(measured, 't'));
    const { unit } = valueOf(
      resolveArray({ format: 'steelyard/array', version: 1, bits: 4, unit_fF: 80 }, technology),
    ).technology;
    expect(unit.capacitance_fF).toBeCloseTo(80, 0);
    expect(unit.kind === 'parallel-plate' && unit.topPlate_um[0]).toBeCloseTo(6.25, 1);
  });

  it('is impossible outside the rules, with the rule and what they allow', () => {
    const refused = (name: string, unit_fF: number) => expect(() => resolved(name, unit_fF));
    refused('parallel-plate', 2).toThrow(/2 fF does not keep .* 4 um2 or more.*Ask for 4.3\d* to 371.\d+ fF/);
    refused('parallel-plate', 500).toThrow(/20 um at most, the maxWidth_um of "plate-metal"/);
    refused('framed-fingers', 0.1).toThrow(/0.4 um or more: the gap.*Ask for 0.28/);
    refused('named-cell', 20).toThrow(/the cell unit_capacitor of 25 fF.*name another cell/);
    for (const name of ['parallel-plate', 'named-cell']) refused(name, 2).toThrow(Infeasible);
    expect(resolved('named-cell', 25)).toEqual(template('named-cell'));
  });

  it.each(['parallel-plate', 'framed-fingers'])('%s: what is offered instead can be had', (name) => {
    let message = '';
    try {
      resolved(name, 1e-3);
    } catch (error) {
      message = (error as Error).message;
    }
    const offered = /Ask for ([\d.]+) to ([\d.]+) fF/.exec(message)!.slice(1).map(Number);
    for (const unit_fF of offered) expect(resolved(name, unit_fF).unit.capacitance_fF / unit_fF).toBeCloseTo(1, 2);
  });
});
