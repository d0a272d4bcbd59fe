import { ln } from '../core/exponential.js';
import type { Drive } from '../spec/converter.js';
import type { Capacitor } from '../spec/floorplan.js';
import { elmore_ps } from './delay.js';
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
}

/** Ohms between an ideal step and the pin of a bit: its switch and the reference. @param bit its number in the list. */
function sourceOf({ switch_ohm, reference_ohm = 0 }: Drive, bits: readonly Capacitor[], bit: number): number {
  const own = typeof switch_ohm === 'number' ? (switch_ohm * bits[0].weight) / bits[bit].weight : switch_ohm[bit];
  return own + reference_ohm;
}

/** The node of the unit that a net reaches last, and the Elmore delay to it. */
export function lastUnit(
  { net, loads }: LoadedNet,
  source_ohm: number,
): { readonly node: number; readonly elmore_ps: number } {
  const delays = elmore_ps(
    net,
    loads.top.map((fF, node) => fF + loads.rest[node]),
    source_ohm,
  );
  const node = net.units.reduce((last, unit) => (delays[unit.node] > delays[last] ? unit.node : last), net.pins[0]);
  return { node, elmore_ps: delays[node] };
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
    const { elmore_ps } = lastUnit(loaded, drive ? sourceOf(drive, bits, bit) : 0);
    return { name, elmore_ps, ...(drive && { settling_ps: ln(2 * weight) * elmore_ps }) };
  });
}
