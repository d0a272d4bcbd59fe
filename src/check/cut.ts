import type { Conductors } from './conductors.js';

/** The middle of what two nodes have in common. */
function contact(c: Conductors, a: number, b: number): [number, number] {
  const { x0, y0, x1, y1 } = c.box;
  return [(Math.max(x0[a], x0[b]) + Math.min(x1[a], x1[b])) / 2, (Math.max(y0[a], y0[b]) + Math.min(y1[a], y1[b])) / 2];
}

/** More disjoint ways than this between two nets: no single place is at fault, and any of the contacts is as good. */
const mostWays = 8;

/**
 * Where two nets that have become one piece meet: the contact of the shapes that alone hold their sources (labels, plates) together.
 *
 * Disjoint ways from one net's sources to the other's are found one by one (augmenting paths over nodes of capacity 1: K. Menger, Zur
 * allgemeinen Kurventheorie, 1927; from memory); then the nodes that nothing can pass any more are a least cut. On one of the ways the
 * cut nearest to the one net and that nearest to the other enclose the shapes that can be at fault.
 *
 * @param ofNet sources of the one net; `others`: sources of the other. Nodes in both count as neither.
 * @returns undefined where no way leads from one to the other.
 */
export function meetingPlace(
  c: Conductors,
  ofNet: ReadonlySet<number>,
  others: ReadonlySet<number>,
): [number, number] | undefined {
  const { start, neighbour } = c;
  const isFrom = (n: number) => ofNet.has(n) && !others.has(n);
  const isTo = (n: number) => others.has(n) && !ofNet.has(n);
  for (const a of ofNet)
    if (isFrom(a))
      for (let e = start[a]; e < start[a + 1]; e++) if (isTo(neighbour[e])) return contact(c, a, neighbour[e]);

  // State 2 n: arrived at node n, 2 n + 1: may leave it. A node on a way found so far has its predecessor there in `before`.
  const before = new Map<number, number>();
  const after = new Map<number, number>();
  let cameFrom = new Map<number, number>();
  const search = (forward: boolean): number => {
    // Backwards, from the other net's sources: the same with predecessors and successors exchanged.
    const [entry, exit] = forward ? [before, after] : [after, before];
    const [begin, end] = forward ? [isFrom, isTo] : [isTo, isFrom];
    cameFrom = new Map();
    const queue: number[] = [];
    const reach = (state: number, by: number) => {
      if (cameFrom.has(state)) return;
      cameFrom.set(state, by);
      queue.push(state);
    };
    for (const n of forward ? ofNet : others) if (begin(n)) reach(2 * n + 1, -1);
    for (let q = 0; q < queue.length; q++) {
      const state = queue[q];
      const n = state >>> 1;
      if ((state & 1) === 1) {
        for (let e = start[n]; e < start[n + 1]; e++) {
          const other = neighbour[e];
          if (end(other) && exit.get(n) !== other) return (cameFrom.set(2 * other, state), other);
          if (!begin(other) && !end(other) && exit.get(n) !== other) reach(2 * other, state);
        }
        if (entry.has(n)) reach(2 * n, state);
      } else if (!entry.has(n)) reach(2 * n + 1, state);
      else if (!begin(entry.get(n)!)) reach(2 * entry.get(n)! + 1, state);
    }
    return -1;
  };
  for (let ways = 0; ways < mostWays; ways++) {
    const last = search(true);
    if (last < 0) break;
    const states: number[] = [];
    for (let state = 2 * last; state >= 0; state = cameFrom.get(state)!) states.push(state);
    states.reverse();
    const added: [number, number][] = [];
    const taken: number[] = [];
    for (let i = 0; i + 1 < states.length; i++) {
      const [n, m] = [states[i] >>> 1, states[i + 1] >>> 1];
      if (n === m) continue;
      if ((states[i] & 1) === 1) added.push([n, m]);
      else taken.push(n);
    }
    for (const n of taken) {
      after.delete(before.get(n)!);
      before.delete(n);
    }
    for (const [n, m] of added) {
      if (!isFrom(n)) after.set(n, m);
      if (!isTo(m)) before.set(m, n);
    }
  }
  // One of the ways, from source to source.
  const first = [...before].find(([, n]) => isFrom(n));
  if (!first) return undefined;
  const way = [first[1], first[0]];
  while (!isTo(way[way.length - 1])) way.push(after.get(way[way.length - 1])!);

  const closed = (forward: boolean): Set<number> => {
    search(forward);
    return new Set(way.filter((n) => cameFrom.has(2 * n) && !cameFrom.has(2 * n + 1)));
  };
  const nearOnes = closed(true);
  const reachedFirst = cameFrom;
  const nearOthers = closed(false);
  const reachedLast = cameFrom;
  const from = way.findIndex((n) => nearOnes.has(n));
  const to = way.findLastIndex((n) => nearOthers.has(n));
  if (from < 0 || to < from) return contact(c, way[(way.length - 2) >> 1], way[((way.length - 2) >> 1) + 1]);
  if (from < to) {
    const middle = (from + to - 1) >> 1;
    return contact(c, way[middle], way[middle + 1]);
  }
  // One shape alone holds them together. It belongs where it has more contacts, so the fault is where it has fewer.
  const only = way[from];
  let ones = 0;
  let rest = 0;
  for (let e = start[only]; e < start[only + 1]; e++) {
    if (reachedFirst.has(2 * neighbour[e] + 1)) ones++;
    else if (reachedLast.has(2 * neighbour[e] + 1)) rest++;
  }
  return ones <= rest ? contact(c, way[from - 1], only) : contact(c, only, way[from + 1]);
}
