import type { Capacitor } from '../spec/floorplan.js';
import { type Frame, frameOf } from './frame.js';
import { placePins } from './pins.js';
import { channelStubs, nearestVss, needsTrack, type Placed, type Plan, type Side, trunkTop } from './plan.js';
import type { Rules } from './rules.js';

/** A straight wire by its centre line, in nanometres: horizontal ones run from x0 to x1, vertical ones from y0 to y1. */
export interface Wire {
  readonly net: string;
  readonly part: 'stub' | 'trunk' | 'bus' | 'drop' | 'shield';
  readonly x0: number;
  readonly y0: number;
  readonly x1: number;
  readonly y1: number;
  /** Of a stub: which side of its unit it leaves on. */
  readonly side?: Side;
}

/** A joint of a horizontal and a vertical wire of one net. */
interface Joint {
  readonly net: string;
  readonly x: number;
  readonly y: number;
}

/** Stubs cut the shield of their channel where they stand. */
interface StubCut {
  readonly channel: number;
  readonly side: Side;
  readonly track: number;
  readonly y: number;
}

export interface Hookup {
  readonly frame: Frame;
  readonly plan: Plan;
  /** Horizontal on the plates' metal: stubs and buses. */
  readonly horizontal: readonly Wire[];
  /** Vertical on the lower metal: trunks, drops, and the `VSS` lines on what is left of the tracks. */
  readonly vertical: readonly Wire[];
  readonly joints: readonly Joint[];
  readonly cuts: readonly StubCut[];
  /** Units in the ring with a line of their own straight down: its left edge. */
  readonly ringLines: readonly { readonly capacitor: string; readonly column: number; readonly x: number }[];
  /** Left edge of each pin, in the order of the pins. */
  readonly pins: readonly { readonly net: string; readonly x: number }[];
  readonly buses: readonly string[];
}

/** Pin order from left to right: the termination where there is one, then the bits from the least. */
const pinOrder = (capacitors: readonly Capacitor[]): string[] => [
  ...capacitors.filter((capacitor) => capacitor.role === 'termination').map((capacitor) => capacitor.name),
  ...capacitors.filter((capacitor) => capacitor.role === 'bit').map((capacitor) => capacitor.name),
];

/**
 * Turns a plan into wires.
 * @param buses the nets that are to have a bus, from the ring down; chosen where absent.
 * @throws Infeasible where the pins do not fit the bottom edge.
 */
export function layWires(rules: Rules, placed: Placed, plan: Plan, buses?: readonly string[]): Hookup {
  const rows = placed.cells.length;
  const columns = placed.cells[0].length;
  const tracks = plan.channels[0].length;
  const size = { rows, columns, rings: placed.rings, tracks };
  const half = rules.trackWidth / 2;
  // Positions along x do not depend on the number of buses, so the pins come first.
  const flat = frameOf(rules, { ...size, buses: 0 });
  const ringLines = placed.ringUnits
    .filter((unit) => !needsTrack(unit, placed))
    .map((unit) => ({
      capacitor: unit.capacitor,
      column: unit.column,
      x: flat.columnX(unit.column) + rules.pad[0] - half,
    }));
  const nets = pinOrder(placed.capacitors).map((net) => ({
    net,
    trunks: [
      ...plan.channels.flatMap((list, channel) =>
        list.flatMap((name, track) => (name === net ? [flat.trackX(channel, track)] : [])),
      ),
      ...ringLines.filter((line) => line.capacitor === net).map((line) => line.x),
    ],
  }));
  const pins = placePins(
    nets,
    {
      first: rules.spacing,
      last: flat.width - rules.frameWidth - rules.spacing - rules.trackWidth,
      pitch: rules.trackWidth + rules.dropSpacing,
      grid: rules.grid,
    },
    buses,
  );
  const frame = frameOf(rules, { ...size, buses: pins.buses.length });

  const horizontal: Wire[] = [];
  const vertical: Wire[] = [];
  const joints: Joint[] = [];
  const cuts: StubCut[] = [];
  const busMiddle = (net: string) => frame.busY(pins.buses.indexOf(net)) + frame.busWidth / 2;
  const trunkEnd = (net: string) => (pins.buses.includes(net) ? busMiddle(net) : 0);

  const stub = (net: string, row: number, column: number, side: Side, track: number) => {
    const channel = side === 'R' ? column + 1 : column;
    const y = frame.stubY(row, side);
    const x = frame.trackX(channel, track) + half;
    const tabEnd = frame.columnX(column) + (side === 'R' ? 1 : -1) * (rules.plate[0] / 2 + rules.tab[0]);
    horizontal.push({ net, part: 'stub', x0: Math.min(x, tabEnd), y0: y, x1: Math.max(x, tabEnd), y1: y, side });
    joints.push({ net, x, y });
    if (net !== 'VSS') cuts.push({ channel, side, track, y });
  };
  const stubs = channelStubs(placed, plan);
  placed.cells.forEach((names, row) =>
    names.forEach((net, column) => {
      const side = plan.sides[row][column];
      if (net !== '-') stub(net, row, column, side, plan.channels[side === 'R' ? column + 1 : column].indexOf(net));
      else stub('VSS', row, column, side, nearestVss(plan, stubs, row, column, side));
    }),
  );
  for (const unit of placed.ringUnits) {
    if (!needsTrack(unit, placed)) continue;
    const side = plan.channels[unit.column].includes(unit.capacitor) ? 'L' : 'R';
    const channel = side === 'R' ? unit.column + 1 : unit.column;
    stub(unit.capacitor, unit.row, unit.column, side, plan.channels[channel].indexOf(unit.capacitor));
  }

  // Heights of track-order back to y: an even height is a stub at the upper level.
  const heightY = (height: number) => frame.stubY(Math.floor(height / 2), height % 2 === 0 ? 'L' : 'R');
  const frameMiddleLow = frame.frameLow + rules.frameWidth / 2;
  const frameMiddleTop = frame.height - rules.frameWidth / 2;
  plan.channels.forEach((list, channel) =>
    list.forEach((net, track) => {
      const x = frame.trackX(channel, track) + half;
      const entry = stubs[channel].get(net);
      if (net === 'VSS' || entry === undefined) {
        vertical.push({ net: 'VSS', part: 'shield', x0: x, y0: frameMiddleLow, x1: x, y1: frameMiddleTop });
        return;
      }
      const top = heightY(trunkTop(entry));
      vertical.push({ net, part: 'trunk', x0: x, y0: trunkEnd(net), x1: x, y1: top });
      if (pins.buses.includes(net)) joints.push({ net, x, y: busMiddle(net) });
      // A line starts half a track before its centre line's end, hence the whole track width between the two ends.
      const above = top + rules.trackWidth + rules.lineSpacing;
      vertical.push({ net: 'VSS', part: 'shield', x0: x, y0: above, x1: x, y1: frameMiddleTop });
    }),
  );
  nets.forEach(({ net, trunks }, i) => {
    if (!pins.buses.includes(net)) return;
    const y = busMiddle(net);
    const x = pins.x[i] + half;
    const ends = [...trunks.map((left) => left + half), x];
    horizontal.push({ net, part: 'bus', x0: Math.min(...ends), y0: y, x1: Math.max(...ends), y1: y });
    vertical.push({ net, part: 'drop', x0: x, y0: 0, x1: x, y1: y });
    joints.push({ net, x, y });
  });
  return {
    frame,
    plan,
    horizontal,
    vertical,
    joints,
    cuts,
    ringLines,
    pins: nets.map(({ net }, i) => ({ net, x: pins.x[i] })),
    buses: pins.buses,
  };
}
