import { firstAtLeast } from '../core/order.js';
import { um } from '../core/units.js';
import type { HookupFigures } from '../spec/metrics.js';
import { columnNets } from './column-nets.js';
import type { Judged, Placed } from './plan.js';
import { type Hookup, tracksOf } from './style.js';
import type { Wire } from './wires.js';

/** Counts what the wires of the bits come to; definitions: README, "Figures". Fill, termination and `VSS` do not count. */
export function hookupFigures(placed: Placed, hookup: Hookup, judged?: Judged): HookupFigures {
  const { frame } = hookup;
  const bits = new Set(
    placed.capacitors.filter((capacitor) => capacitor.role === 'bit').map((capacitor) => capacitor.name),
  );
  const ofBits = (wires: readonly { readonly net: string }[]) => wires.filter((wire) => bits.has(wire.net));
  const joints = ofBits(hookup.joints).length;
  const landings = hookup.style === 'under-plate' ? ofBits(hookup.landings).length : 0;
  const length = [...hookup.horizontal, ...hookup.vertical]
    .filter((wire) => bits.has(wire.net))
    .reduce((sum, wire) => sum + (wire.x1 - wire.x0) + (wire.y1 - wire.y0), 0);
  return {
    columnNets: columnNets(placed.cells, bits),
    trunks: hookup.vertical.filter((wire) => wire.part === 'trunk' && bits.has(wire.net)).length,
    tracksPerChannel: tracksOf(hookup),
    crossovers: crossovers(hookup, bits),
    sameMetalCrossings: touching(hookup.horizontal, frame.busWidth) + touching(hookup.vertical, frame.rules.trackWidth),
    bends: joints,
    vias: joints + landings,
    wireLength_um: um(length),
    ...(judged && { status: judged.proved ? 'proved' : 'effort-spent' }),
    ...(judged && !judged.proved && { lowerBound: lowerBound(judged) }),
  };
}

const lowerBound = ({ bound }: Judged) => ({
  tracksPerChannel: bound.tracks,
  trunks: bound.trunks,
  crossovers: bound.crossovers,
});

/** Stubs of bits over trunks of other bits, inside the core. */
function crossovers(hookup: Hookup, bits: ReadonlySet<string>): number {
  const half = hookup.frame.rules.trackWidth / 2;
  const trunksAt = new Map<number, Wire[]>();
  for (const wire of hookup.vertical)
    if (wire.part === 'trunk' && bits.has(wire.net)) trunksAt.set(wire.x0, [...(trunksAt.get(wire.x0) ?? []), wire]);
  const xs = [...trunksAt.keys()].sort((a, b) => a - b);
  let count = 0;
  for (const stub of hookup.horizontal) {
    if (stub.part !== 'stub' || !bits.has(stub.net)) continue;
    for (let i = firstAtLeast(xs, stub.x0 - half + 1); i < xs.length && xs[i] - half < stub.x1; i++)
      for (const trunk of trunksAt.get(xs[i])!)
        if (trunk.net !== stub.net && trunk.y1 + half > stub.y0 - half && trunk.y0 - half < stub.y0 + half) count++;
  }
  return count;
}

/** Pairs of wires of different nets on one metal that touch, as drawn `width` wide. */
function touching(wires: readonly Wire[], width: number): number {
  const half = width / 2;
  const boxes = wires
    .map((wire) => ({ net: wire.net, x0: wire.x0 - half, x1: wire.x1 + half, y0: wire.y0 - half, y1: wire.y1 + half }))
    .sort((a, b) => a.y0 - b.y0);
  let count = 0;
  // Wires end before the next line begins, so the sweep over y keeps few alive.
  let alive: typeof boxes = [];
  for (const box of boxes) {
    alive = alive.filter((other) => other.y1 >= box.y0);
    for (const other of alive) if (other.net !== box.net && other.x1 >= box.x0 && other.x0 <= box.x1) count++;
    alive.push(box);
  }
  return count;
}
