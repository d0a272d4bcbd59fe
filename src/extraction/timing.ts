import { ln } from '../core/exponential.js';
import type { Drive } from '../spec/converter.js';
import type { Capacitor } from '../spec/floorplan.js';
import { elmore_ps, sourceDelay_ps } from './delay.js';
import type { NodeLoads } from './loads.js';
import type { Net } from './net.js';

/** How fast a bit is; both absent where resistances are not stated or a unit does not hang on its pin. */
export interface BitTiming {
  readonly name: string;
  readonly elmore_ps?: number;
  /** Absent without a drive. */
  readonly settling_ps?: number;
}

/** A net with what hangs on its nodes. */
export interface LoadedNet {
  readonly net: Net;
  readonly loads: NodeLoads;
  /** fF of each node, to whatever. */
  readonly all: Float64Array;
  /** The node of the unit that is reached last, the pin of a net without units; and the Elmore delay to it from the pin. */
  readonly last: number;
  readonly wires_ps: number;
}

/** Ohms between an ideal step and the pin of a bit: its switch and the reference. @param bit its number in the list. */
function sourceOf({ switch_ohm, reference_ohm = 0 }: Drive, bits: readonly Capacitor[], bit: number): number {
  const own = typeof switch_ohm === 'number' ? (switch_ohm * bits[0].weight) / bits[bit].weight : switch_ohm[bit];
  return own + reference_ohm;
}

/** Finds the unit that a net reaches last. */
export function withLast(net: Net, loads: NodeLoads): LoadedNet {
  const all = loads.top.map((fF, node) => fF + loads.rest[node]);
  const delays = elmore_ps(net, all, 0);
  const last = net.units.reduce((node, unit) => (delays[unit.node] > delays[node] ? unit.node : node), net.pins[0]);
  return { net, loads, all, last, wires_ps: delays[last] };
}

/**
 * Elmore delay of each bit, one bit at a time, to the unit that it reaches last: through reference, switch, wires and vias, with `TOP` and all
 * other nets held. `settling_ps` is ln(2 w) of these: what is then left of a step of w LSB is half an LSB.
 * @param bits from the least significant up. @param nets those without one here have no figures
 */
export function bitTimings(
  bits: readonly Capacitor[],
  nets: readonly LoadedNet[],
  drive: Drive | undefined,
): BitTiming[] {
  return bits.map(({ name, weight, units }, bit) => {
    const loaded = nets.find(({ net }) => net.name === name);
    if (!loaded || loaded.net.units.length !== units || loaded.net.unstated.length > 0) return { name };
    // What comes before the pin is the same for all units, so the last one stays the last.
    const elmore = loaded.wires_ps + (drive ? sourceDelay_ps(loaded.all, sourceOf(drive, bits, bit)) : 0);
    return { name, elmore_ps: elmore, ...(drive && { settling_ps: ln(2 * weight) * elmore }) };
  });
}
