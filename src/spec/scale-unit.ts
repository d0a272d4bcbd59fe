import { figure } from '../core/figure.js';
import { Infeasible } from '../core/problem.js';
import { nm } from '../core/units.js';
import { Report } from './report.js';
import { Examination } from './technology-examination.js';
import { checkGrid } from './technology-rules.js';
import { checkUnit } from './technology-unit.js';
import type { FramedFingersUnit, ParallelPlateUnit, Technology, Unit } from './technology.js';
import { tabLevelsApart } from './tracks.js';
import { drawnCapacitance_fF, fingerSizes, unitSize_um } from './unit-geometry.js';

type Scalable = ParallelPlateUnit | FramedFingersUnit;

/** Steps of twice the grid by which a plate may leave its template's shape to come nearer to a capacitance. */
const mostSkew = 1;
const mostFingers = 200;

/**
 * The technology with its unit drawn larger or smaller: plates by their sides, fingers by their length and number, all on the grid. The
 * densities scale from the template's own unit, whatever capacitance that states; what the drawing comes to is the new unit's capacitance.
 * @throws Infeasible where the unit is a cell that is not drawn, or the rules leave no room: which rule, and what they allow.
 */
export function withUnitOf(technology: Technology, wanted_fF: number): Technology {
  const { unit, name } = technology;
  if (unit.capacitance_fF === wanted_fF) return technology;
  if (unit.kind === 'named-cell')
    throw new Infeasible(
      `The unit of technology "${name}" is the cell ${unit.cell} of ${unit.capacitance_fF} fF, which is not drawn here; ${wanted_fF} fF are asked for.`,
      `Leave "unit_fF" out, or name another cell in the technology.`,
    );
  const scaled = redrawn(technology, unit, wanted_fF);
  const [problem] = problemsOf(scaled);
  if (problem === undefined) return scaled;
  const least = leastUnit_fF(technology);
  const most = figure(Math.floor(1000 * lastThatFits(technology, unit, unit.capacitance_fF * 1e4)) / 1000);
  throw new Infeasible(
    `A unit of ${wanted_fF} fF does not keep the rules of technology "${name}": ${problem}.`,
    `Ask for ${least} to ${most} fF, or change the rule.`,
  );
}

/** The smallest unit (fF) that the technology's rules allow; of a cell that is not drawn, its own. */
export function leastUnit_fF(technology: Technology): number {
  const { unit } = technology;
  if (unit.kind === 'named-cell') return unit.capacitance_fF;
  // Rounded inwards, so that what is offered can be had.
  return figure(Math.ceil(1000 * lastThatFits(technology, unit, unit.capacitance_fF / 1e4)) / 1000);
}

/** The technology with its unit redrawn for a capacitance, whatever the rules say to it. */
export const redrawn = (technology: Technology, unit: Scalable, wanted_fF: number): Technology =>
  unit.kind === 'parallel-plate'
    ? rebuilt(technology, plateOf(technology, unit, wanted_fF))
    : rebuilt(technology, fingersOf(technology, unit, wanted_fF));

function problemsOf(technology: Technology): string[] {
  const report = new Report({ text: '', file: '' });
  const examination = new Examination({ ...technology }, report, '');
  checkGrid(examination);
  checkUnit(examination);
  return report.problems().map(({ found, wanted }) => `found ${found}, wanted ${wanted}`);
}

/** The capacitance nearest to `far` that the rules allow, by halving the stretch from the template's own unit, which they do. */
function lastThatFits(technology: Technology, unit: Scalable, far: number): number {
  let good = unit.capacitance_fF;
  let bad = far;
  for (let i = 0; i < 40; i++) {
    const middle = Math.sqrt(good * bad);
    if (problemsOf(redrawn(technology, unit, middle)).length === 0) good = middle;
    else bad = middle;
  }
  return good;
}

/** What a capacitance asks for in terms of the technology's densities: those come to `1 / calibration` of what its own unit states. */
const densityTarget = (technology: Technology, wanted_fF: number): number =>
  (wanted_fF * (drawnCapacitance_fF(technology) ?? 0)) / technology.unit.capacitance_fF;

function plateOf(technology: Technology, unit: ParallelPlateUnit, wanted_fF: number): ParallelPlateUnit {
  const { plateCapacitance_fF_per_um2: density = 0, plateFringe_fF_per_um: fringe = 0 } = technology.dielectric;
  const target = densityTarget(technology, wanted_fF);
  const step = (2 * technology.grid_nm) / 1000;
  const shape = unit.topPlate_um[1] / unit.topPlate_um[0];
  // width x height density + 2 (width + height) fringe = target, with height = shape x width.
  const edges = 2 * (1 + shape) * fringe;
  const width = (Math.sqrt(edges * edges + 4 * shape * density * target) - edges) / (2 * shape * density);
  let best: ParallelPlateUnit | undefined;
  let least = Infinity;
  for (let skew = -mostSkew; skew <= mostSkew; skew++) {
    const across = Math.max(1, Math.round(width / step) + skew);
    const w = across * step;
    const up = Math.max(1, Math.round((target - 2 * w * fringe) / (w * density + 2 * fringe) / step));
    const candidate = { ...unit, topPlate_um: [onGrid(w), onGrid(up * step)] as const };
    const off = Math.abs((drawnCapacitance_fF({ ...technology, unit: candidate }) ?? 0) - target);
    if (off >= least) continue;
    least = off;
    best = candidate;
  }
  return best ?? unit;
}

function fingersOf(technology: Technology, unit: FramedFingersUnit, wanted_fF: number): FramedFingersUnit {
  const density = technology.dielectric.facingCapacitance_fF_per_um ?? 0;
  const facing = (1000 * densityTarget(technology, wanted_fF)) / density;
  const step = 2 * technology.grid_nm;
  const shapeOf = (candidate: FramedFingersUnit) => {
    const { frame } = fingerSizes(candidate);
    return frame[0] / frame[1];
  };
  const shape = shapeOf(unit);
  let best: FramedFingersUnit = unit;
  let least = Infinity;
  for (let fingers = 2; fingers <= mostFingers; fingers++) {
    // Every nanometre of length adds two faces to each finger of the comb.
    const more = facing - fingerSizes({ ...unit, fingers }).facing;
    const length = nm(unit.fingerLength_um) + step * Math.round(more / (2 * fingers) / step);
    if (length <= nm(unit.gap_um)) break;
    const candidate = { ...unit, fingers, fingerLength_um: length / 1000 };
    const ratio = shapeOf(candidate) / shape;
    const off = Math.max(ratio, 1 / ratio);
    if (off >= least) continue;
    least = off;
    best = candidate;
  }
  if (least < Infinity) return best;
  // Too little for two fingers: as short as it would take, so that the rules say why not.
  return { ...unit, fingers: 2, fingerLength_um: unit.gap_um };
}

const snapped = (grid: number, length_um: number): number => (grid * Math.round((length_um * 1000) / grid)) / 1000;
const inwards = (grid: number, length_um: number): number =>
  (grid * Math.trunc(figure((length_um * 1000) / grid))) / 1000;
const onGrid = (length_um: number): number => Math.round(length_um * 1000) / 1000;

/** The unit in its technology: tabs, terminals, capacitance and the device's size parameters follow its new sides. */
function rebuilt(technology: Technology, resized: Scalable): Technology {
  const before = technology.unit as Scalable;
  const [sizes, former] = [unitSize_um(resized), unitSize_um(before)];
  const grid = technology.grid_nm;
  const within = (value: number, most: number) => Math.max(-most, Math.min(most, value));

  const tabLevel_um = tabLevelOf(technology, before, resized);

  const { bottom, top } = before.terminals;
  const room = topRoom_um(technology, resized);
  const level = Math.abs(top.at_um[1]) === before.tabLevel_um;
  const topY =
    resized.kind === 'framed-fingers'
      ? top.at_um[1] + (fingerSizes(resized).barY - fingerSizes(before as FramedFingersUnit).barY) / 1000
      : level
        ? Math.sign(top.at_um[1]) * (tabLevel_um ?? 0)
        : (top.at_um[1] * sizes[1]) / former[1];
  const terminals = {
    bottom: {
      ...bottom,
      at_um: [0, 1].map((i) => inwards(grid, (bottom.at_um[i] * sizes[i]) / former[i])) as [number, number],
    },
    top: {
      ...top,
      at_um: [inwards(grid, within(top.at_um[0], room[0])), snapped(grid, within(topY, room[1]))] as [number, number],
    },
  };
  const unit: Unit = { ...resized, ...(tabLevel_um !== undefined && { tabLevel_um }), terminals };
  const drawn = drawnCapacitance_fF({ ...technology, unit }) ?? 0;
  const calibration = before.capacitance_fF / (drawnCapacitance_fF(technology) ?? 1);
  return {
    ...technology,
    unit: { ...unit, capacitance_fF: figure(drawn * calibration) },
    device: { ...technology.device, ...parametersFor(technology, before, resized) },
  };
}

/** The level of the tabs in proportion to the unit's height, as far as stubs and their spacing leave the choice. */
function tabLevelOf(technology: Technology, before: Scalable, resized: Scalable): number | undefined {
  if (before.tabLevel_um === undefined || resized.tab_um === undefined) return undefined;
  const grid = technology.grid_nm;
  const [height, former] = [unitSize_um(resized)[1], unitSize_um(before)[1]];
  const apart = tabLevelsApart({ ...technology, unit: resized }) / 1000;
  const spacing = technology.layers.find((layer) => layer.name === technology.roles.bottomPlate)?.minSpacing_um ?? 0;
  const highest = inwards(grid, Math.min((height + spacing - apart) / 2, (height - resized.tab_um[1]) / 2));
  const lowest = (grid * Math.ceil(figure((apart * 500) / grid))) / 1000;
  return Math.max(lowest, Math.min(highest, snapped(grid, (before.tabLevel_um * height) / former)));
}

/** How far from the middle the via to the straps may stand. */
function topRoom_um({ vias, roles }: Technology, unit: Scalable): [x: number, y: number] {
  const via = vias.find(({ lower, upper }) => lower === roles.topPlate && upper === roles.strap);
  const pad = via === undefined ? 0 : via.size_um + 2 * via.enclosure_um;
  if (unit.kind === 'parallel-plate') return [(unit.topPlate_um[0] - pad) / 2, (unit.topPlate_um[1] - pad) / 2];
  const { comb } = fingerSizes(unit);
  return [(comb[0] / 1000 - pad) / 2, Infinity];
}

/** Size parameters that name a size of the unit, in micrometres with or without a "u", or its number of fingers. */
function parametersFor(
  { device }: Technology,
  before: Scalable,
  after: Scalable,
): { readonly parameters?: Readonly<Record<string, string>> } {
  if (device.parameters === undefined) return {};
  const sizes = (unit: Scalable): number[] =>
    unit.kind === 'parallel-plate' ? [...unit.topPlate_um] : [unit.fingers, unit.fingerLength_um];
  const [old, now] = [sizes(before), sizes(after)];
  // In order, each size once: of two equal sides the first parameter is the width.
  const left = new Set(old.keys());
  const parameters = Object.entries(device.parameters).map(([key, value]): [string, string] => {
    for (const i of left)
      for (const unit of ['u', ''])
        if (value === `${old[i]}${unit}`) {
          left.delete(i);
          return [key, `${now[i]}${unit}`];
        }
    return [key, value];
  });
  return { parameters: Object.fromEntries(parameters) };
}
