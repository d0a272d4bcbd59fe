import type { PinsWanted } from '../spec/pins.js';
import type { Frame } from './frame.js';
import { placeOnPitch } from './pin-row.js';
import { type Leaving, type Pins, placePins } from './pins.js';
import type { Side } from './plan.js';
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
export interface Joint {
  readonly net: string;
  readonly x: number;
  readonly y: number;
}

/** What every style of hookup comes to. */
export interface Wires {
  readonly frame: Frame;
  /** Horizontal on the plates' metal: stubs and buses. */
  readonly horizontal: readonly Wire[];
  /** Vertical on the lower metal: trunks, drops, and `VSS` lines. */
  readonly vertical: readonly Wire[];
  readonly joints: readonly Joint[];
  /** Left edge of each pin, in the order of the pins. */
  readonly pins: readonly { readonly net: string; readonly x: number }[];
  readonly buses: readonly string[];
}

/**
 * Pins along the bottom edge of a block this wide, and the buses that lead to them.
 * @param nets in the order of the pins.
 * @param given the nets that are to have a bus, from the ring down; chosen where absent.
 * @throws Infeasible where the pins do not fit the bottom edge, or cannot be reached on the pitch asked for.
 */
export function pinsAlong(
  rules: Rules,
  width: number,
  nets: readonly Leaving[],
  { pitch_um }: PinsWanted,
  given?: readonly string[],
): Pins {
  const size = {
    first: rules.pinsFrom,
    last: width - rules.frameWidth - rules.spacing - rules.trackWidth,
    pitch: rules.trackWidth + rules.dropSpacing,
    grid: rules.grid,
  };
  return pitch_um === undefined ? placePins(nets, size, given) : placeOnPitch(nets, pitch_um, size, given);
}

/** The middle of a net's bus, or the block's edge where it has none: so far down its trunks run. */
export function lowEnd(frame: Frame, { buses }: Pins, net: string): number {
  const bus = buses.indexOf(net);
  return bus === -1 ? 0 : frame.busY(bus) + frame.busWidth / 2;
}

/** The buses over their trunks and pins, and the drops down from them. */
export function busWires(
  frame: Frame,
  nets: readonly Leaving[],
  pins: Pins,
): Pick<Wires, 'horizontal' | 'vertical' | 'joints'> {
  const half = frame.rules.trackWidth / 2;
  const horizontal: Wire[] = [];
  const vertical: Wire[] = [];
  const joints: Joint[] = [];
  nets.forEach(({ net, trunks }, i) => {
    if (!pins.buses.includes(net)) return;
    const y = lowEnd(frame, pins, net);
    const x = pins.x[i] + half;
    const ends = [...trunks.map((left) => left + half), x];
    horizontal.push({ net, part: 'bus', x0: Math.min(...ends), y0: y, x1: Math.max(...ends), y1: y });
    vertical.push({ net, part: 'drop', x0: x, y0: 0, x1: x, y1: y });
    joints.push({ net, x, y });
  });
  return { horizontal, vertical, joints };
}
