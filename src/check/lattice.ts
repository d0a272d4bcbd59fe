import { BoxIndex, BoxList } from '../core/boxes.js';
import type { Rectangle } from '../core/rectangle.js';
import { nm } from '../core/units.js';
import type { Drawing } from './drawing.js';
import type { Finding } from './finding.js';
import { placeUm } from './finding.js';
import type { Unit } from './unit-recognition.js';

/** The box around all that a unit covers, grown on all sides. */
export function extentOf({ body }: Unit, by = 0): Rectangle {
  const least = (key: 'x0' | 'y0') => Math.min(...body.map((box) => box[key])) - by;
  const most = (key: 'x1' | 'y1') => Math.max(...body.map((box) => box[key])) + by;
  return { x0: least('x0'), y0: least('y0'), x1: most('x1'), y1: most('y1') };
}

/**
 * Units of bits have the same units around them, dummies too. Where most have a neighbour within the technology's proximity reach at some
 * distance, and one has none there although the array goes on beyond, a unit is missing or out of place. That an array ends sooner than
 * the reach is no fault: fewer rings were asked for.
 * @param parts units of bits with all units that they stand among, each part an array by itself.
 */
export function checkLattice(
  drawing: Drawing,
  parts: readonly { readonly all: readonly Unit[]; readonly ofBits: readonly Unit[] }[],
): Finding[] {
  const reach = nm(drawing.technology.proximityReach_um);
  return parts
    .flatMap(({ all, ofBits }) => gaps(all, ofBits, reach))
    .map(([x, y]) => ({
      rule: 'neighbour',
      layer: drawing.technology.roles.bottomPlate,
      at_um: placeUm(x, y),
      text: 'no unit here, where other units of bits have a neighbour',
    }));
}

/** Places where a unit is missing. */
function gaps(all: readonly Unit[], ofBits: readonly Unit[], reach: number): (readonly [x: number, y: number])[] {
  const boxes = new BoxList();
  for (const unit of all) {
    const { x0, y0, x1, y1 } = extentOf(unit);
    boxes.push(x0, y0, x1, y1);
  }
  const index = new BoxIndex(boxes.finish());
  const there = new Set(all.map(({ x, y }) => `${x} ${y}`));
  const xs = all.map(({ x }) => x);
  const ys = all.map(({ y }) => y);
  const ends = [xs, ys].map((values) =>
    values.reduce(([a, b], v) => [Math.min(a, v), Math.max(b, v)], [Infinity, -Infinity]),
  );
  const [[left, right], [low, high]] = ends;
  const isWithin = (x: number, y: number) => x >= left && x <= right && y >= low && y <= high;

  const seen = new Map<string, { readonly dx: number; readonly dy: number; count: number }>();
  for (const unit of ofBits) {
    const { x0, y0, x1, y1 } = extentOf(unit, reach);
    for (const i of index.search(x0, y0, x1, y1)) {
      const [dx, dy] = [all[i].x - unit.x, all[i].y - unit.y];
      const key = `${dx} ${dy}`;
      const known = seen.get(key);
      if (known) known.count++;
      else seen.set(key, { dx, dy, count: 1 });
    }
  }
  const found = new Map<string, readonly [number, number]>();
  for (const { dx, dy, count } of seen.values()) {
    const could = ofBits.filter(({ x, y }) => isWithin(x + dx, y + dy));
    if (2 * count <= could.length) continue;
    for (const { x, y } of could) {
      const key = `${x + dx} ${y + dy}`;
      if (!there.has(key)) found.set(key, [x + dx, y + dy]);
    }
  }
  return [...found.values()];
}
