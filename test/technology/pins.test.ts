import { describe, expect, it } from 'vitest';
import { checkPolygons } from '../../src/check/polygons.js';
import { flatten } from '../../src/core/flatten.js';
import { Infeasible } from '../../src/core/problem.js';
import type { Drawn } from '../../src/pipeline.js';
import { drawFloorplan } from '../../src/pipeline.js';
import { formatFloorplan } from '../../src/spec/format.js';
import { parseFloorplan } from '../../src/spec/parse-floorplan.js';
import type { Polygons } from '../../src/spec/polygons.js';
import { flatBoxes } from '../check/plant-faults.js';
import { drawn, type Given, template } from '../pipeline/drawn.js';

const draw = (given: Given, technology = 'parallel-plate'): Drawn =>
  drawn({ effort: 'quick', ...given }, undefined, 1e6, template(technology));

/** Middles of the pins by name, and the block's size, in nanometres. */
function pinsOf({ structures, topStructure, technology }: Polygons) {
  const top = structures.find(({ name }) => name === topStructure)!;
  const outline = technology.layers.find(({ name }) => name === technology.roles.boundary)!.stream;
  const block = top.polygons.find(({ layer, datatype }) => layer === outline.layer && datatype === outline.datatype)!;
  const shapes = top.polygons.filter(({ part }) => part === 'pin');
  const edges = shapes.map(({ net, xy }) => {
    const [xs, ys] = [0, 1].map((axis) => xy.map((point) => point[axis]));
    const [width, height] = block.xy[2];
    return {
      net: net!,
      left: Math.min(...xs),
      sides: [
        ...(Math.min(...xs) === 0 ? ['left'] : []),
        ...(Math.max(...xs) === width ? ['right'] : []),
        ...(Math.min(...ys) === 0 ? ['bottom'] : []),
        ...(Math.max(...ys) === height ? ['top'] : []),
      ],
    };
  });
  return edges.sort((a, b) => a.left - b.left);
}

/** Wires of bits and of the termination that cross one of `TOP`, seen from above. */
function crossings(p: Polygons): number {
  const flat = flatten(p.structures, p.topStructure);
  const shapes = [...flat.layers.values()].flatMap((layer) => flatBoxes(flat, layer));
  const wires = shapes.filter(({ part }) => ['trunk', 'stub', 'bus', 'drop'].includes(part ?? ''));
  const tops = shapes.filter(({ net, part }) => net === 'TOP' && (part === 'strap' || part === 'spine'));
  return wires.filter(
    (a) => a.net !== 'VSS' && tops.some((b) => a.x0 < b.x1 && b.x0 < a.x1 && a.y0 < b.y1 && b.y0 < a.y1),
  ).length;
}

const sides = ['bottom', 'top'] as const;
const reversed = (bits: number) => Array.from({ length: bits }, (_, i) => `B${bits - 1 - i}`);

describe('pins where they are wanted', () => {
  // Every pair of two of these choices comes up.
  const cases = ['parallel-plate', 'framed-fingers', 'named-cell'].flatMap((technology, t) =>
    sides.flatMap((side, s) =>
      sides.map((top, u) => ({ technology, side, top, rings: (t + s + 2 * u) % 3, bits: 3 + ((2 * t + s + u) % 4) })),
    ),
  );
  for (const { technology, side, top, rings, bits } of cases)
    it(`${technology}, ${bits} bits at the ${side}, TOP at the ${top}, ${rings} rings`, () => {
      const order = (bits + rings) % 2 === 0 ? undefined : reversed(bits);
      const given = { bits, rings, pins: { bits: { side, ...(order && { order }) }, top: { side: top } } };
      const { floorplan, polygons, findings, metrics } = draw(given, technology);
      expect(findings).toEqual([]);
      expect(metrics.hookup.sameMetalCrossings).toBe(0);
      expect(crossings(polygons!)).toBe(0);
      const pins = pinsOf(polygons!);
      const row = pins.filter(({ net }) => net !== 'TOP' && net !== 'VSS');
      const wanted = [...(rings > 0 ? ['TERM'] : []), ...(order ?? reversed(bits).reverse())];
      expect(row.map(({ net }) => net)).toEqual(wanted);
      for (const pin of row) expect(pin.sides).toContain(side);
      expect(pins.find(({ net }) => net === 'TOP')!.sides).toContain(top);
      const ground = new Set(pins.filter(({ net }) => net === 'VSS').flatMap((pin) => pin.sides));
      expect(ground.size).toBeGreaterThanOrEqual(2);
      // The file says all that the drawing takes, wires included.
      const again = parseFloorplan(formatFloorplan(floorplan), 'f');
      expect(again.ok && drawFloorplan(again.value, floorplan.technology!, { keepHookup: true }).polygons).toEqual(
        polygons,
      );
    });

  it.each([
    ['bottom', 3.5, undefined, 8],
    ['top', 5, 'reversed', 6],
    ['bottom', 0.6, undefined, 6],
    ['bottom', 9.995, 'reversed', 7],
  ] as const)('at the %s on a pitch of %f um', (side, pitch_um, order, bits) => {
    const pins = { bits: { side, pitch_um, ...(order && { order: reversed(bits) }) }, top: { side: 'top' as const } };
    const { floorplan, polygons, findings } = draw({ bits, pins });
    expect(findings).toEqual([]);
    expect(crossings(polygons!)).toBe(0);
    const row = pinsOf(polygons!).filter(({ net }) => net !== 'TOP' && net !== 'VSS');
    expect(row).toHaveLength(bits + 1);
    row.forEach(({ left }, i) => i > 0 && expect(left - row[i - 1].left).toBe(Math.round(1000 * pitch_um)));
    expect(drawFloorplan(floorplan, floorplan.technology!, { keepHookup: true }).polygons).toEqual(polygons);
  });

  it('or the rule that stands against it, and a way out', () => {
    const at = (pitch_um: number) => () => draw({ bits: 4, pins: { bits: { pitch_um } } });
    expect(at(0.5)).toThrow(Infeasible);
    expect(at(0.5)).toThrow('Ask for a pitch of 0.56 um or more.');
    expect(at(40)).toThrow('Ask for a smaller pitch');
    expect(at(2.0025)).toThrow('Ask for a pitch of 2.005 um.');
  });

  it('in a floorplan whose file turns to another side: units of the ring move with them', () => {
    const { floorplan } = draw({ bits: 4 });
    const array = { ...floorplan.array!, pins: { bits: { side: 'top' as const } } };
    const { polygons, findings, notes, ...other } = drawFloorplan({ ...floorplan, array }, floorplan.technology!);
    expect(findings).toEqual([]);
    expect(notes.join()).toMatch('were moved');
    expect(other.floorplan.ringUnits).toMatchObject([{ capacitor: 'TERM', row: -1 }]);
    expect(other.floorplan.cells).toEqual(floorplan.cells);
    expect(checkPolygons(polygons!)).toEqual([]);
  });
});
