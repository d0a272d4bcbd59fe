import { ExactRoute, type Route } from './exact-route.js';
import { EXACT_NETS, fewestTrunks } from './fewest-trunks.js';
import type { RoutingProblem, State } from './routing-problem.js';
import { wideRoute } from './wide-route.js';

/** What no hookup of a placement goes below, each figure as long as those before it are met. */
export interface RouteBound {
  readonly tracks: number;
  readonly trunks: number;
  readonly crossovers: number;
}

export interface Routed {
  readonly tracks: number;
  readonly states: readonly State[];
  /** Net on every track of every channel, -1 a free one. */
  readonly channels: readonly (readonly number[])[];
  /** Whether no hookup has fewer tracks, or as many and fewer trunks, then crossovers, then a shorter wire. */
  readonly proved: boolean;
  readonly bound: RouteBound;
}

/** Trunks beyond the fewest that are tried for the sake of fill dummies. */
const MOST_SPARE = 3;

/**
 * The best hookup: on the fewest tracks per channel, or on as many as asked for; with the fewest trunks, the fewest crossovers, the
 * shortest wires in the core and along the buses.
 * @returns null where the tracks asked for do not suffice; `surely` is false where they may after all.
 */
export function route(
  problem: RoutingProblem,
  asked?: number,
): Routed | { readonly tracks: null; readonly surely: boolean } {
  const nets = problem.columns.map((column) => column.nets);
  const most = Math.max(...nets.map((list) => list.length));
  const least = Math.max(1, Math.ceil(most / 2));
  if (most > EXACT_NETS) {
    const wide = wideRoute(problem, asked ?? least, asked ?? Infinity);
    if (wide === null) return { tracks: null, surely: asked !== undefined && asked < least };
    return { ...wide, proved: false, bound: { tracks: asked ?? least, trunks: wide.fewestTrunks, crossovers: 0 } };
  }
  let bound = asked ?? least;
  let surely = true;
  for (let tracks = bound; tracks <= (asked ?? Infinity); tracks++) {
    const table = fewestTrunks(nets, tracks);
    for (let spare = 0; table !== null; spare++) {
      const search = new ExactRoute(problem, table, tracks, spare);
      const found = search.solve();
      if (found) return judged(found, tracks, bound);
      if (search.narrowed || (search.cut && spare === MOST_SPARE)) surely = false;
      if (!search.cut || !surely) break;
    }
    // What fits on fewer tracks leaves one free in every channel, enough for every fill dummy.
    const narrower = table && fewestTrunks(nets, tracks - 1);
    const loose = narrower && new ExactRoute(problem, narrower, tracks, 0).solve();
    if (loose)
      return {
        ...judged(loose, tracks, bound),
        proved: false,
        bound: { tracks: bound, trunks: table.trunks, crossovers: 0 },
      };
    if (surely && asked === undefined) bound = tracks + 1;
  }
  return { tracks: null, surely };
}

function judged({ states, channels, cost, bound }: Route, tracks: number, atLeast: number): Routed {
  const proved =
    tracks === atLeast &&
    cost.trunks === bound.trunks &&
    cost.crossovers === bound.crossovers &&
    cost.length === bound.length;
  return {
    tracks,
    states,
    channels,
    proved,
    bound: { tracks: atLeast, trunks: bound.trunks, crossovers: bound.crossovers },
  };
}
