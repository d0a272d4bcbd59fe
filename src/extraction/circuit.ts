import type { Drive } from '../spec/converter.js';
import type { Polygons } from '../spec/polygons.js';
import type { Coupling } from './coupling.js';
import { nodeLoads } from './loads.js';
import { netsOf } from './net.js';
import { type ReducedNet, reducedNet } from './reduce.js';
import { type BitTiming, bitTimings, withLast } from './timing.js';
import { wireNetwork } from './wire-network.js';

/** Nodes of a net besides its pin in the extracted circuit, at most. */
const NODES = 15;

/** A drawing as a circuit of resistors and capacitors. */
export interface Circuit {
  readonly coupling: Coupling;
  /** The nets of the capacitors, and `TOP`; `VSS` is a node without resistance. */
  readonly nets: readonly ReducedNet[];
}

/**
 * Puts the resistances of a drawing's wires and what its conductors have between them together: how fast each bit is, and the circuit that it
 * is, of a size to be simulated.
 */
export function circuitOf(
  p: Polygons,
  coupling: Coupling,
  drive: Drive | undefined,
): { readonly timings: readonly BitTiming[]; readonly circuit: Circuit } {
  const network = wireNetwork(p);
  const names = [...p.capacitors.map(({ name }) => name), 'TOP'];
  const nets = netsOf(network, names);
  const spread = nodeLoads(coupling, network, nets);
  const loaded = nets.map((net, i) => withLast(net, spread[i]));
  const bits = p.capacitors.filter(({ role }) => role === 'bit');
  return {
    timings: bitTimings(bits, loaded, drive),
    circuit: { coupling, nets: loaded.map((each) => reducedNet(each, NODES)) },
  };
}
