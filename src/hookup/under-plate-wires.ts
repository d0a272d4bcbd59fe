import type { PinsWanted } from '../spec/pins.js';
import type { Placed } from './plan.js';
import { underPlateFrame, type UnderPlateFrame } from './under-plate-frame.js';
import { placesFor, topRows, type UnderPlatePlan } from './under-plate-plan.js';
import type { UnderPlateRules } from './under-plate-rules.js';
import { busWires, type Joint, lowEnd, pinsAlong, type Wire, type Wires } from './wires.js';

/**
 * Trunks below the plates, from a net's topmost unit in the column down to its bus, and a via where one meets a unit's landing strip.
 *
 *     |  o       |      o B3     the strips of two units, one below the other, on trunks of their own
 *     |  |       |      |
 *     |  |  o B1 |      |
 *     |  |  |    |      |
 */
export interface UnderPlateHookup extends Wires {
  readonly style: 'under-plate';
  readonly frame: UnderPlateFrame;
  readonly plan: UnderPlatePlan;
  /** Where a trunk meets a landing strip. */
  readonly landings: readonly Joint[];
  /** Where the fill dummies' trunks meet the frame. */
  readonly grounds: readonly Joint[];
}

/**
 * Turns a plan into wires.
 * @param buses the nets that are to have a bus, from the ring down; chosen where absent.
 * @throws Infeasible where the pins do not fit the bottom edge.
 */
export function layUnderPlateWires(
  rules: UnderPlateRules,
  placed: Placed,
  plan: UnderPlatePlan,
  wanted: PinsWanted,
  buses?: readonly string[],
): UnderPlateHookup {
  const { cells, rings } = placed;
  const size = { rows: cells.length, columns: cells[0].length, rings, topAside: wanted.top === wanted.bits };
  const half = rules.trackWidth / 2;
  // Positions along x do not depend on the number of buses, so the pins come first.
  const flat = underPlateFrame(rules, { ...size, buses: 0 });
  const lefts = plan.columns.map((list, column) => {
    const places = placesFor(rules, list.length);
    return new Map(list.map((net, i) => [net, flat.placeX(column, places[i])]));
  });
  const nets = wanted.order.map((net) => ({ net, trunks: lefts.flatMap((left) => left.get(net) ?? []) }));
  const pins = pinsAlong(rules, flat.width, nets, wanted, buses);
  const frame = underPlateFrame(rules, { ...size, buses: pins.buses.length });

  const vertical: Wire[] = [];
  const joints: Joint[] = [];
  const grounds: Joint[] = [];
  const ground = frame.frameLow + rules.frameWidth / 2;
  lefts.forEach((left, column) => {
    for (const [net, row] of topRows(placed, column)) {
      const x = left.get(net)! + half;
      const low = net === 'VSS' ? ground : lowEnd(frame, pins, net);
      vertical.push({ net, part: 'trunk', x0: x, y0: low, x1: x, y1: frame.landingY(row) });
      if (net === 'VSS') grounds.push({ net, x, y: low });
      else if (pins.buses.includes(net)) joints.push({ net, x, y: low });
    }
  });
  const landing = (name: string, row: number, column: number): Joint => {
    const net = name === '-' ? 'VSS' : name;
    return { net, x: lefts[column].get(net)! + half, y: frame.landingY(row) };
  };
  const landings = [
    ...cells.flatMap((names, row) => names.map((name, column) => landing(name, row, column))),
    ...placed.ringUnits.map(({ capacitor, row, column }) => landing(capacitor, row, column)),
  ];
  const below = busWires(frame, nets, pins);
  return {
    style: 'under-plate',
    frame,
    plan,
    horizontal: below.horizontal,
    vertical: [...vertical, ...below.vertical],
    joints: [...joints, ...below.joints],
    landings,
    grounds,
    pins: nets.map(({ net }, i) => ({ net, x: pins.x[i] })),
    buses: pins.buses,
  };
}
