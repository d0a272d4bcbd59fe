import type { PinsWanted } from '../spec/pins.js';
import { channelFrame, type ChannelFrame } from './channel-frame.js';
import type { ChannelRules } from './channel-rules.js';
import { channelStubs, nearestVss, needsTrack, type Placed, type Plan, type Side, trunkTop } from './plan.js';
import { busWires, type Joint, lowEnd, pinsAlong, type Wire, type Wires } from './wires.js';

/** Stubs cut the shield of their channel where they stand. */
interface StubCut {
  readonly channel: number;
  readonly side: Side;
  readonly track: number;
  readonly y: number;
}

/** Trunks in the channels; the `VSS` lines among the vertical wires lie on what is left of the tracks. */
export interface ChannelHookup extends Wires {
  readonly style: 'channel';
  readonly frame: ChannelFrame;
  readonly plan: Plan;
  readonly cuts: readonly StubCut[];
  /** Units in the ring with a line of their own straight down: its left edge. */
  readonly ringLines: readonly { readonly capacitor: string; readonly column: number; readonly x: number }[];
}

/**
 * Turns a plan into wires.
 * @param buses the nets that are to have a bus, from the ring down; chosen where absent.
 * @throws Infeasible where the pins do not fit the bottom edge, or cannot be reached on the pitch asked for.
 */
export function layChannelWires(
  rules: ChannelRules,
  placed: Placed,
  plan: Plan,
  wanted: PinsWanted,
  buses?: readonly string[],
): ChannelHookup {
  const rows = placed.cells.length;
  const columns = placed.cells[0].length;
  const tracks = plan.channels[0].length;
  const size = { rows, columns, rings: placed.rings, tracks, topAside: wanted.top === wanted.bits };
  const half = rules.trackWidth / 2;
  // Positions along x do not depend on the number of buses, so the pins come first.
  const flat = channelFrame(rules, { ...size, buses: 0 });
  const ringLines = placed.ringUnits
    .filter((unit) => !needsTrack(unit, placed))
    .map((unit) => ({
      capacitor: unit.capacitor,
      column: unit.column,
      x: flat.columnX(unit.column) + rules.pad[0] - half,
    }));
  const nets = wanted.order.map((net) => ({
    net,
    trunks: [
      ...plan.channels.flatMap((list, channel) =>
        list.flatMap((name, track) => (name === net ? [flat.trackX(channel, track)] : [])),
      ),
      ...ringLines.filter((line) => line.capacitor === net).map((line) => line.x),
    ],
  }));
  const pins = pinsAlong(rules, flat.width, nets, wanted, buses);
  const frame = channelFrame(rules, { ...size, buses: pins.buses.length });

  const horizontal: Wire[] = [];
  const vertical: Wire[] = [];
  const joints: Joint[] = [];
  const cuts: StubCut[] = [];

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
      const low = lowEnd(frame, pins, net);
      vertical.push({ net, part: 'trunk', x0: x, y0: low, x1: x, y1: top });
      if (pins.buses.includes(net)) joints.push({ net, x, y: low });
      // A line starts half a track before its centre line's end, hence the whole track width between the two ends.
      const above = top + rules.trackWidth + rules.lineSpacing;
      vertical.push({ net: 'VSS', part: 'shield', x0: x, y0: above, x1: x, y1: frameMiddleTop });
    }),
  );
  const below = busWires(frame, nets, pins);
  return {
    style: 'channel',
    frame,
    plan,
    horizontal: [...horizontal, ...below.horizontal],
    vertical: [...vertical, ...below.vertical],
    joints: [...joints, ...below.joints],
    cuts,
    ringLines,
    pins: nets.map(({ net }, i) => ({ net, x: pins.x[i] })),
    buses: pins.buses,
  };
}
