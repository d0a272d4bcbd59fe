import { describe, expect, it } from 'vitest';
import { checkPolygons } from '../../src/check/polygons.js';
import { flatten, streamKey } from '../../src/core/flatten.js';
import { Infeasible } from '../../src/core/problem.js';
import { Random } from '../../src/core/random.js';
import { drawingRules } from '../../src/hookup/style.js';
import { drawFloorplan } from '../../src/pipeline.js';
import { formatFloorplan, formatPolygons } from '../../src/spec/format.js';
import { parseFloorplan } from '../../src/spec/parse-floorplan.js';
import { parsePolygons } from '../../src/spec/parse-polygons.js';
import { parseTechnology } from '../../src/spec/parse-technology.js';
import { resolveArray } from '../../src/spec/resolve.js';
import type { Technology } from '../../src/spec/technology.js';
import { faults, names, underPlateFaults } from '../check/plant-faults.js';
import { drawn, type Given, template } from '../pipeline/drawn.js';
import { changed, linesOf, template as textOf, valueOf } from '../spec/kiln4.js';

const emphases = ['balanced', 'wiring', 'gradient', 'dispersed'] as const;
const technologies = ['under-plate', 'under-fingers'] as const;

const quick = (name: string, given: Given) => drawn({ effort: 'quick', ...given }, undefined, 1e6, template(name));

describe('arrays with trunks under the plates have no findings, and no crossing', () => {
  // The bench has them all: npm run bench -- arrays.
  for (const [t, name] of technologies.entries())
    for (const bits of t === 0 ? [2, 3, 4, 5, 6, 7, 8, 9, 10, 12] : [2, 3, 4, 5, 6, 7, 8, 11]) {
      const rings = (bits + t) % 3;
      const emphasis = emphases[(bits + 2 * t + Math.floor(bits / 4)) % 4];
      const fillTop = Math.floor((bits + t) / 2) % 2 === 0 ? 'VSS' : 'TOP';
      it(`${name}: ${bits} bits, ${rings} rings, ${emphasis}, fill on ${fillTop}`, () => {
        const { findings, metrics } = quick(name, { bits, rings, emphasis, fillTop });
        expect(findings).toEqual([]);
        expect(metrics.hookup).toMatchObject({ crossovers: 0, sameMetalCrossings: 0 });
        expect(metrics.hookup.tracksPerChannel).toBeLessThanOrEqual(8);
      });
    }

  for (const given of [
    { bits: 5, core: { rows: 7, columns: 7 }, rings: 2, fillTop: 'VSS' },
    { bits: 4, core: { rows: 5, columns: 5 }, rings: 0, fillTop: 'VSS', termination: 'core' },
    { weights: [3, 3, 3, 7], rings: 3 },
    { bits: 8, tracksPerChannel: 3 },
    { bits: 8, tracksPerChannel: 4, termination: 'core' },
    { bits: 6, unit_fF: 5 },
    { bits: 5, rings: 2, pins: { bits: { side: 'top' }, top: { side: 'bottom' } } },
    {
      bits: 6,
      pins: { bits: { side: 'bottom', order: ['B5', 'B4', 'B3', 'B2', 'B1', 'B0'] }, top: { side: 'bottom' } },
    },
    { bits: 6, unit_fF: 90, fillTop: 'VSS' },
  ] satisfies Given[])
    it(`under-plate: ${JSON.stringify(given)}`, () => {
      const { findings, metrics } = quick('under-plate', given);
      expect(findings).toEqual([]);
      if (given.tracksPerChannel !== undefined)
        expect(metrics.hookup.tracksPerChannel).toBeLessThanOrEqual(given.tracksPerChannel);
    });

  it('a cell of the own library may stand over trunks, where its owner says so', () => {
    const technology = { ...template('named-cell'), hookup: 'under-plate', wiresUnderPlate: true } as const;
    for (const given of [
      { bits: 5, fillTop: 'VSS' },
      { bits: 6, rings: 2 },
    ] satisfies Given[])
      expect(drawn({ effort: 'quick', ...given }, undefined, 1e6, technology).findings).toEqual([]);
  });
});

describe.each(technologies)('%s', (name) => {
  const { polygons, floorplan, metrics } = quick(name, { bits: 3, rings: 1 });

  it('a planted fault is found, by its kind and within a pitch of its place', () => {
    expect(floorplan.cells.flat()).toContain('-');
    for (const [kind, plant] of Object.entries({ ...faults, ...underPlateFaults })) {
      if (kind === 'via under a top plate' && template(name).viaUnderTopPlate) continue;
      for (let seed = 1; seed <= 5; seed++) {
        const planted = plant(polygons!, new Random(seed));
        expect(planted, `${kind}, seed ${seed}`).toBeDefined();
        const findings = checkPolygons(planted!.polygons);
        const found = findings.some((finding) => names(finding, planted!));
        expect(found, `${kind}, seed ${seed}: ${JSON.stringify(findings.slice(0, 5))}`).toBe(true);
      }
    }
  });

  it('its files are read again as they were written, and drawn again as they were', () => {
    expect(parsePolygons(formatPolygons(polygons!), 'p')).toEqual({ ok: true, value: polygons });
    const again = valueOf(parseFloorplan(formatFloorplan(floorplan), 'f'));
    expect(again.technology).toEqual(template(name));
    const redrawn = drawFloorplan(again, template(name), { keepHookup: true });
    expect(redrawn.notes).toEqual([]);
    expect(formatPolygons(redrawn.polygons!)).toBe(formatPolygons(polygons!));
  });

  it('its wires are as long and as many as the drawing has them', () => {
    const { roles, layers, vias } = template(name);
    const { structures, topStructure } = polygons!;
    const top = structures.find((s) => s.name === topStructure)!;
    const bits = new Set(floorplan.capacitors.flatMap((c) => (c.role === 'bit' ? [c.name] : [])));
    const on = (layer: string) => streamKey([...layers, ...vias].find((l) => l.name === layer)!.stream);
    const shapes = (...of: string[]) =>
      top.polygons.filter((p) => bits.has(p.net ?? '') && of.includes(streamKey(p)) && p.part !== 'pin');
    const joint = vias.find((v) => v.lower === roles.trunk && v.upper === roles.stub)!;
    expect(metrics.hookup.vias).toBe(shapes(on(joint.name)).length);
    expect(metrics.hookup.trunks).toBe(shapes(on(roles.trunk)).filter((p) => p.part === 'trunk').length);
    // Each wire is half a width longer than its centre line at either end but at the block's edge.
    const { trackWidth } = drawingRules(template(name));
    let length = 0;
    for (const { xy } of shapes(on(roles.trunk), on(roles.bus))) {
      const [xs, ys] = [xy.map(([x]) => x), xy.map(([, y]) => y)];
      const [low, high] = [Math.min(...ys), Math.max(...ys)];
      const whole = Math.max(Math.max(...xs) - Math.min(...xs), high - low);
      length += whole - (low === 0 ? trackWidth / 2 : trackWidth);
    }
    expect(metrics.hookup.wireLength_um).toBeCloseTo(length / 1000, 9);
  });

  it('trunks lie half a micron inside the plates, and the strap is not above them', () => {
    const flat = flatten(polygons!.structures, polygons!.topStructure);
    const { roles, layers } = template(name);
    const boxes = (layer: string) => flat.layers.get(streamKey(layers.find((l) => l.name === layer)!.stream))!;
    const part = (of: ReturnType<typeof boxes>, i: number) => flat.shapes.polygon[of.shape[i]].part;
    const plates = boxes(roles.stub);
    const [wires, straps] = [boxes(roles.trunk), boxes(roles.strap)];
    let below = 0;
    wires.x0.forEach((x0, w) => {
      if (part(wires, w) !== 'trunk') return;
      plates.x0.forEach((left, p) => {
        const over = plates.y0[p] < wires.y1[w] && plates.y1[p] > wires.y0[w];
        if (part(plates, p) !== 'plate' || !over || left >= wires.x1[w] || plates.x1[p] <= x0) return;
        below++;
        expect(x0 - left).toBeGreaterThanOrEqual(500);
        expect(plates.x1[p] - wires.x1[w]).toBeGreaterThanOrEqual(500);
      });
      straps.x0.forEach((left, s) => {
        const tall = straps.y1[s] - straps.y0[s] > 2 * (straps.x1[s] - left);
        const inColumn = part(straps, s) === 'strap' && tall;
        if (inColumn) expect(left >= wires.x1[w] || straps.x1[s] <= x0).toBe(true);
      });
    });
    expect(below).toBeGreaterThan(6);
  });
});

describe('what a template for trunks under its units cannot be is said with its reason', () => {
  const lines = (name: string, path: (string | number)[], value: unknown): string[] =>
    linesOf(parseTechnology(changed(textOf(name), path, value), 't'));
  it.each([
    [
      'under-plate',
      ['wiresUnderPlate'],
      false,
      '/wiresUnderPlate | false | true: the trunks of the hookup "under-plate" run below the plates',
    ],
    [
      'under-plate',
      ['unit', 'strip_um'],
      undefined,
      '/unit | no key "strip_um" for the hookup "under-plate" | "strip_um": the height of the landing strip along the lower edge',
    ],
    [
      'under-plate',
      ['unit', 'tabLevel_um'],
      1,
      '/unit/tabLevel_um | "tabLevel_um" for the hookup "under-plate" | "strip_um" in its place',
    ],
    ['under-plate', ['unit', 'strip_um'], 0.003, '/unit/strip_um | 0.003 um | a multiple of 0.005 um, the grid'],
    [
      'under-plate',
      ['vias', 0, 'size_um'],
      0.8,
      "/unit/strip_um | 0.8 um from the top plate's edge to the strip's | 0.9 um or more, so that a via to a trunk fits beside the top plate: 0.5 um or more",
    ],
    [
      'parallel-plate',
      ['hookup'],
      'under-plate',
      '/wiresUnderPlate | false | true: the trunks of the hookup "under-plate" run below the plates',
    ],
    [
      'under-fingers',
      ['viaUnderTopPlate'],
      false,
      '/viaUnderTopPlate | false | true: the vias to the trunks lie below the frame',
    ],
    [
      'under-fingers',
      ['roles', 'stub'],
      'finger-metal',
      '/roles/stub | "finger-metal" | a metal between "lower-metal" and "finger-metal": a plate on it shields the comb from the trunks',
    ],
    [
      'under-fingers',
      ['roles', 'bus'],
      'finger-metal',
      '/roles/bus | "finger-metal" | "floor-metal", the metal of stub',
    ],
    [
      'under-fingers',
      ['unit', 'shield'],
      true,
      "/unit/shield | true | false or none: trunks are on the shield's metal under plates",
    ],
    [
      'under-fingers',
      ['vias', 1, 'upper'],
      'upper-metal',
      '/vias | no via between "floor-metal" and "finger-metal" | one: it joins the frame to the plate under it',
    ],
    [
      'under-fingers',
      ['unit', 'strip_um'],
      0.05,
      '/unit/strip_um | 0.25 um of strip and frame | 0.3 um or more, so that via "floor-finger" fits: a strip of 0.1 um or more',
    ],
    [
      'framed-fingers',
      ['unit', 'strip_um'],
      0.2,
      '/unit/strip_um | "strip_um" for the hookup "channel" | "tab_um" and "tabLevel_um" in its place',
    ],
  ])('%s: %j = %j', (name, path, value, problem) => {
    expect(lines(name, path, value)).toContainEqual(problem);
  });
});

describe('more nets than fit', () => {
  const small = (): Technology => {
    const resolved = resolveArray(
      { format: 'steelyard/array', version: 1, bits: 4, unit_fF: 5 },
      template('under-plate'),
    );
    return valueOf(resolved).technology;
  };

  it('are kept out of the columns by the search', () => {
    const { findings, metrics } = drawn({ bits: 8, effort: 'quick' }, undefined, 1e6, small());
    expect(findings).toEqual([]);
    expect(metrics.hookup.tracksPerChannel).toBeLessThanOrEqual(4);
  });

  it('are refused with the rule and the way out', () => {
    const text = (given: Given): string => {
      try {
        quick('under-plate', given);
      } catch (error) {
        if (error instanceof Infeasible) return error.message;
        throw error;
      }
      return '';
    };
    expect(text({ bits: 8, tracksPerChannel: 1 })).toMatch(/need 19 trunks at least; 1 is asked for .*Raise tracks/);
    expect(text({ bits: 8, tracksPerChannel: 9 })).toMatch(
      /9 trunks .* 8 fit below this unit\. Lower tracksPerChannel/,
    );
    const crowded = drawn(
      { weights: Array<number>(20).fill(1), core: { rows: 20, columns: 1 }, termination: 'none', effort: 'quick' },
      [5, 5],
    ).floorplan;
    const { hookup: _hookup, ...array } = crowded.array!;
    expect(() => drawFloorplan({ ...crowded, array }, template('under-plate'))).toThrow(
      /^20 nets \(B0, .*, B19\) need a trunk each below column 0; 8 fit\. Take a larger unit, place with fewer nets/,
    );
    const unit = { ...template('under-plate').unit, topPlate_um: [0.6, 6] } as Technology['unit'];
    expect(() => drawingRules({ ...template('under-plate'), unit })).toThrow(Infeasible);
  });
});

describe('a hookup from a file', () => {
  const technology = template('under-plate');
  const { floorplan } = quick('under-plate', { bits: 3 });
  const redrawn = (change: object) => drawFloorplan({ ...floorplan, ...change }, technology, { keepHookup: true });
  const plan = floorplan.hookup!;
  const columns = plan.columns!;

  it('may have its trunks in another order', () => {
    const reversed = columns.map((list) => [...list].reverse());
    const { notes, findings, floorplan: now } = redrawn({ hookup: { columns: reversed, buses: plan.buses } });
    expect([notes, findings]).toEqual([[], []]);
    expect(now.hookup!.columns).toEqual(reversed);
  });

  it.each([
    ['its columns are for another core', { columns: columns.slice(1), buses: plan.buses }],
    [
      'column 0 lists a net twice',
      { columns: columns.map((list, c) => (c === 0 ? [...list, list[0]] : list)), buses: plan.buses },
    ],
    [
      'column 0 has no trunk for TERM',
      { columns: columns.map((list, c) => (c === 0 ? list.slice(1) : list)), buses: plan.buses },
    ],
    [
      'column 1 has a trunk for B9, which no unit uses',
      { columns: columns.map((list, c) => (c === 1 ? [...list, 'B9'] : list)), buses: plan.buses },
    ],
    ['a bus is listed twice', { columns, buses: [...plan.buses, 'VSS'] }],
    ['bus B9 is of no capacitor', { columns, buses: [...plan.buses, 'B9'] }],
    [expect.stringMatching(/^B\d has \d trunks and no bus$/), { columns, buses: ['VSS'] }],
    [
      'its trunks run in channels',
      { sides: floorplan.cells.map((row) => row.map(() => 'L')), channels: [[], []], buses: [] },
    ],
  ])('%j: routed anew', (reason, hookup) => {
    const { notes, findings } = redrawn({ hookup });
    expect(findings).toEqual([]);
    expect(notes).toHaveLength(1);
    expect(/\((.*)\); it was routed anew/.exec(notes[0])?.[1]).toEqual(reason);
  });

  it('in channels does not take one that runs under plates', () => {
    const { notes } = drawFloorplan(floorplan, template('parallel-plate'), { keepHookup: true });
    expect(notes.join()).toMatch(/its trunks run under the plates.*routed anew/);
  });

  it.each([
    [
      { buses: [] },
      '/hookup | neither "columns" nor "sides" and "channels" | "sides" and "channels", or "columns" alone for trunks under the plates',
    ],
    [
      { columns: [], channels: [], buses: [] },
      '/hookup | "channels" and "columns" | "sides" and "channels", or "columns" alone for trunks under the plates',
    ],
    [
      { sides: [], buses: [] },
      '/hookup | "sides" | "sides" and "channels", or "columns" alone for trunks under the plates',
    ],
  ])('%j is no hookup', (hookup, problem) => {
    expect(linesOf(parseFloorplan(JSON.stringify({ ...floorplan, hookup }), 'f'))).toEqual([problem]);
  });

  it('has units in the ring where trunks come, or is refused', () => {
    const at = (row: number, column: number) =>
      redrawn({ ringUnits: [{ capacitor: 'TERM', row, column }], hookup: undefined });
    const { notes, findings } = at(-1, 0);
    expect([notes.length, findings]).toEqual([1, []]);
    expect(() => at(floorplan.core.rows, -1)).toThrow(
      /TERM stands in row \d, column -1 of the ring, where no trunk comes/,
    );
  });
});
