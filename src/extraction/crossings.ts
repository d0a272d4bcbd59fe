import { BoxIndex } from '../core/boxes.js';
import { boxesOverlap } from '../core/components.js';
import type { Tally } from './tally.js';
import { betweenNeighbours, overPlane } from './wire-formulas.js';

/** Of a wire over the substrate, across another, or beside one: the formulas' own 6 and 10 %, and what else is near. */
const FORMULA_ERROR = 0.3;

/**
 * Adds what wires have to each other and to the substrate beyond the rows of units, where buses and drops lie: by Sakurai's and Tamaru's
 * formulas, over the substrate as over a plane, between neighbours on a level, and at a crossing as over a plane that is as long as the
 * lower wire is wide.
 * @param rows from where to where the sections count
 */
export function countCrossings(tally: Tally, rows: readonly [number, number], permittivity: number): void {
  const { box, level, levels, net, nets, cell } = tally.conductors;
  const vss = nets.length - 2;
  const index = new BoxIndex(box);
  const beyond = [
    [-Infinity, rows[0]],
    [rows[1], Infinity],
  ] as const;
  /** Of a stretch from y0 to y1: what lies beyond the rows, nm. */
  const outside = (y0: number, y1: number): number =>
    beyond.reduce((sum, [from, to]) => sum + Math.max(0, Math.min(y1, to) - Math.max(y0, from)), 0);
  const add = (i: number, j: number, aF: number) => {
    tally.add(i, net[j], aF, FORMULA_ERROR);
    tally.add(j, net[i], aF, FORMULA_ERROR);
  };
  for (let i = 0; i < net.length; i++) {
    const height = outside(box.y0[i], box.y1[i]);
    if (cell[i] >= 0 || net[i] >= vss || height === 0) continue;
    const { z0, z1, minSpacing } = levels[level[i]];
    const across = box.x1[i] - box.x0[i];
    const [width, length] = [Math.min(across, height), Math.max(across, height)];
    tally.add(i, vss, (overPlane(width, z1 - z0, z0, permittivity) * length) / 1000, FORMULA_ERROR);
    const reach = 2 * minSpacing;
    for (const j of index.search(box.x0[i] - reach, box.y0[i] - reach, box.x1[i] + reach, box.y1[i] + reach)) {
      // A pair of bits' wires is found from both sides, and counts once.
      if (net[j] === net[i] || cell[j] >= 0 || (net[j] < vss && j < i)) continue;
      const dx = Math.min(box.x1[i], box.x1[j]) - Math.max(box.x0[i], box.x0[j]);
      const [y0, y1] = [Math.max(box.y0[i], box.y0[j]), Math.min(box.y1[i], box.y1[j])];
      if (level[i] === level[j]) {
        const [gap, beside] = dx <= 0 ? [-dx, outside(y0, y1)] : [y0 - y1, outside(y1, y0) > 0 ? dx : 0];
        if (gap <= 0 || gap > reach || beside <= 0) continue;
        const narrower = Math.min(width, box.x1[j] - box.x0[j], box.y1[j] - box.y0[j]);
        add(i, j, (betweenNeighbours(narrower, z1 - z0, z0, gap, permittivity) * beside) / 1000);
      } else if (boxesOverlap(box, i, box, j)) {
        const dy = outside(y0, y1);
        const [lower, upper] = level[i] < level[j] ? [level[i], level[j]] : [level[j], level[i]];
        const [least, most] = [Math.min(dx, dy), Math.max(dx, dy)];
        if (least <= 0) continue;
        const thickness = levels[upper].z1 - levels[upper].z0;
        const apart = levels[upper].z0 - levels[lower].z1;
        add(i, j, (overPlane(least, thickness, apart, permittivity) * most) / 1000);
      }
    }
  }
}
