import { figure } from '../core/figure.js';
import type { Polygons } from '../spec/polygons.js';
import type { Technology } from '../spec/technology.js';
import { conductorsOf, type Level, levelsOf, TOP, VSS } from './conductors.js';
import type { Coupling } from './coupling.js';
import { countCrossings } from './crossings.js';
import { EPSILON0 } from './field.js';
import type { Stack } from './section-library.js';
import { countAcrossColumns, countAlongColumns, latticeOf, rowsOf, UNIT_ERROR } from './sections.js';
import { Tally } from './tally.js';

/** What is drawn, as capacitances. */
export interface Extraction {
  readonly coupling: Coupling;
  /** Of each net with units: what their bottoms have to `TOP` beyond as many interior units, fF; interior is the middle one of all bits'. */
  readonly unitExcess_fF: Readonly<Record<string, number>>;
  /** Different cross-sections that were solved. */
  readonly sections: number;
}

/**
 * Capacitances of a drawing, from its polygons and its technology alone.
 *
 * Each unit has the technology's capacitance between its terminals where it looks like the units around it. What it has more or less, and
 * what wires have to `TOP`, to `VSS` and to each other, comes from the field of the cross-sections that are drawn: across the columns
 * (`countAcrossColumns`) and along them (`countAlongColumns`); beyond the rows of units from formulas (`countCrossings`).
 *
 * @returns in words why not, where the technology does not say enough.
 * @throws InputError if the structures cannot be flattened.
 */
export function extractCoupling(p: Polygons): Extraction | string {
  const { technology, capacitors } = p;
  const levels = levelsOf(technology);
  if (typeof levels === 'string') return levels;
  const conductors = conductorsOf(p, levels);
  const tally = new Tally(conductors);
  const lattice = latticeOf(conductors);
  if (lattice.x.length === 0) return 'no unit is drawn';
  const stack = stackOf(technology, levels);
  const topLevel = levels.findIndex(({ name }) => name === technology.roles.topPlate);
  const sections = countAcrossColumns(tally, lattice, stack) + countAlongColumns(tally, lattice, stack, topLevel);
  countCrossings(tally, rowsOf(lattice), stack.permittivity);

  const { nets, net, box, level, cell } = conductors;
  const [vss, top] = [nets.length - 2, nets.length - 1];
  const isBit = capacitors.map(({ role }) => role === 'bit');
  const ofBits = [...tally.unit].filter((_, u) => isBit[tally.bottom[u]]).sort((a, b) => a - b);
  const interior = ofBits[ofBits.length >> 1] ?? 0;
  const excess = new Float64Array(nets.length);
  tally.unit.forEach((aF, u) => {
    const bottom = tally.bottom[u];
    if (bottom < 0) return;
    excess[bottom] += aF - interior;
    tally.addPair(bottom, top, 1000 * technology.unit.capacitance_fF, 0);
    tally.addPair(bottom, top, aF - interior, UNIT_ERROR);
  });
  const fF = (aF: number) => figure(aF / 1000);
  const listed = [...capacitors.map(({ name }) => name), TOP, VSS];
  const pairs = listed.flatMap((a, i) =>
    listed.slice(i + 1).flatMap((b) => {
      const [m, n] = [nets.indexOf(a), nets.indexOf(b)].sort((one, other) => one - other);
      const at = m * nets.length + n;
      return tally.pair[at] === 0 ? [] : [{ a, b, fF: fF(tally.pair[at]), error_fF: fF(tally.pairError[at]) }];
    }),
  );
  const wires = [...net.keys()]
    .filter((i) => cell[i] < 0 && net[i] < vss)
    .map((i) => ({
      net: nets[net[i]],
      layer: levels[level[i]].name,
      x0: box.x0[i],
      y0: box.y0[i],
      x1: box.x1[i],
      y1: box.y1[i],
      top_fF: fF(tally.top[i]),
      load_fF: fF(tally.rest[i]),
    }));
  const unitExcess_fF = Object.fromEntries(capacitors.map(({ name }, i) => [name, fF(excess[i])]));
  return { coupling: { nets: listed, pairs, wires }, unitExcess_fF, sections };
}

/** Cells of the grid beside an edge are this share of the stack's height: the coupling's INL is then within 4 % of what finer grids give. */
const LEAST_CELL = 1 / 22;

function stackOf({ dielectric, roles, unit }: Technology, levels: readonly Level[]): Stack {
  const highest = levels[levels.length - 1].z1;
  const topLevel = levels.findIndex(({ name }) => name === roles.topPlate);
  const density = dielectric.plateCapacitance_fF_per_um2;
  const thin =
    unit.kind === 'parallel-plate' && density !== undefined && topLevel > 0
      ? { level: topLevel, permittivity: (density * (levels[topLevel].z0 - levels[topLevel - 1].z1)) / EPSILON0 }
      : undefined;
  return {
    levels,
    permittivity: dielectric.relativePermittivity,
    ...(thin && { below: thin }),
    height: 2 * highest,
    least: Math.max(1, Math.round(highest * LEAST_CELL)),
    split: 1,
  };
}
