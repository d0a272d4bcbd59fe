import { Nodal } from './nodal.js';
import type { Net } from './net.js';

/** fF times ohm in ps. */
const ps = 1e-3;

/**
 * Elmore delays (ps) of all nodes of a net: to each capacitance the resistance that its way from the source shares with the node's, added up;
 * with loops, the nodal solution that this is in a tree. The nets around are held, `TOP` among them.
 * W. C. Elmore, "The transient response of damped linear networks", Journal of Applied Physics 19 (1948), from memory.
 *
 * @param load_fF of each node. @param source_ohm between an ideal step and the net's pins.
 */
export function elmore_ps(net: Net, load_fF: Float64Array, source_ohm: number): Float64Array {
  const through = sourceDelay_ps(load_fF, source_ohm);
  return new Nodal(net, net.pins).solve(load_fF).map((wires) => ps * wires + through);
}

/** What a resistance before the pins adds to the delay of every node. */
export function sourceDelay_ps(load_fF: Float64Array, source_ohm: number): number {
  return ps * source_ohm * load_fF.reduce((sum, fF) => sum + fF, 0);
}
