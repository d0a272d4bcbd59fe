/**
 * Which channel the units of each net in each column hook to: an exact dynamic programme over columns.
 *
 * State: which nets of a column use its right channel. Channel j lies left of column j and holds the nets that column j - 1 sends right
 * and those that column j sends left; a net that comes from both sides has one trunk there. Sought is the least number of tracks per
 * channel, then the fewest trunks, then the fewest crossovers.
 *
 * The first two are decided exactly for up to `exactNets` nets: between two columns the state is rewritten net by net, so a column costs
 * 2^nets x nets x tracks steps and not 4^nets. Crossovers depend on pairs of nets and cannot be split like that: they are minimised
 * over the states that lie on an optimum, all of them where they are few, else the best `width` a column (and then `proved` is false
 * unless the result meets its bound).
 */
export interface SideProblem {
  readonly columns: number;
  readonly nets: number;
  /** Bit n of mask[c]: net n has units in column c. */
  readonly masks: readonly number[];
  /** Crossovers of channel j when column j - 1 sends `right` there and column j sends `left` there: never above the least possible. */
  readonly crossovers: (channel: number, right: number, left: number) => number;
}

export interface Sides {
  readonly tracks: number;
  readonly trunks: number;
  /** right[c]: the nets of column c that use its right channel. */
  readonly right: readonly number[];
  /** True where no assignment with as few tracks and trunks has a smaller sum of the given crossovers. */
  readonly proved: boolean;
}

const exactNets = 14;
const width = 96;
/** How many transitions may be weighed by crossovers before the search narrows. */
const exactTransitions = 400_000;

const popcount = (value: number): number => {
  let v = value - ((value >>> 1) & 0x55555555);
  v = (v & 0x33333333) + ((v >>> 2) & 0x33333333);
  return (((v + (v >>> 4)) & 0x0f0f0f0f) * 0x01010101) >>> 24;
};

const never = 0x3fffffff;

/**
 * Fewest trunks of the channels up to each column's left, for every state of that column: forward[c][right]. With `mirrored` columns it
 * gives the fewest trunks from the other end. Null where `tracks` do not suffice.
 */
function fewestTrunks(masks: readonly number[], nets: number, tracks: number): Int32Array[] | null {
  const size = 1 << nets;
  const layers: Int32Array[] = [];
  let reach: Int32Array = new Int32Array(size).fill(never);
  reach[0] = 0;
  let beforeMask = 0;
  for (const mask of masks) {
    // trunks[k * size + state]: k nets are in the channel so far; bits below the current net say this column, the others the last one.
    let now = new Int32Array((tracks + 1) * size).fill(never);
    now.set(reach);
    for (let n = 0; n < nets; n++) {
      const bit = 1 << n;
      if (((mask | beforeMask) & bit) === 0) continue;
      const next = new Int32Array(now.length).fill(never);
      for (let k = 0; k <= tracks; k++) {
        const base = k * size;
        const above = base + size;
        for (let state = 0; state < size; state++) {
          const value = now[base + state];
          if (value === never) continue;
          const sentRight = (state & bit) !== 0;
          const cleared = state & ~bit;
          if ((mask & bit) !== 0) {
            if (k < tracks && value < next[above + cleared]) next[above + cleared] = value;
            const at = (sentRight ? above : base) + (cleared | bit);
            if ((!sentRight || k < tracks) && value < next[at]) next[at] = value;
          } else {
            const at = (sentRight ? above : base) + cleared;
            if ((!sentRight || k < tracks) && value < next[at]) next[at] = value;
          }
        }
      }
      now = next;
    }
    reach = new Int32Array(size).fill(never);
    let any = false;
    for (let k = 0; k <= tracks; k++)
      for (let state = 0; state < size; state++) {
        const value = now[k * size + state];
        if (value === never) continue;
        any = true;
        if (value + k < reach[state]) reach[state] = value + k;
      }
    if (!any) return null;
    layers.push(reach);
    beforeMask = mask;
  }
  // The last channel holds what the last column sends right.
  let any = false;
  for (let state = 0; state < size; state++) if (reach[state] < never && popcount(state) <= tracks) any = true;
  return any ? layers : null;
}

/** Solves the assignment with the least number of tracks, or with exactly the given number; null where that many do not suffice. */
export function assignSides(problem: SideProblem, given?: number): Sides | null {
  const { columns, masks } = problem;
  if (problem.nets > exactNets) return assignGreedily(problem, given);
  let tracks = given ?? Math.max(1, ...masks.map((mask) => Math.ceil(popcount(mask) / 2)));
  let forward = fewestTrunks(masks, problem.nets, tracks);
  while (forward === null) {
    if (given !== undefined) return null;
    forward = fewestTrunks(masks, problem.nets, ++tracks);
  }
  // Seen from the right end, "right" and "left" change places: backward[c][right] counts the trunks of the channels right of column c.
  const mirrored = fewestTrunks([...masks].reverse(), problem.nets, tracks)!;
  const backward = (c: number, right: number) => mirrored[columns - 1 - c][masks[c] & ~right];
  let trunks = never;
  for (let right = 0; right < 1 << problem.nets; right++) {
    const value = forward[columns - 1][right];
    if (value < never && popcount(right) <= tracks) trunks = Math.min(trunks, value + popcount(right));
  }
  const optimal: number[][] = masks.map((mask, c) => {
    const states: number[] = [];
    for (let right = mask; ; right = (right - 1) & mask) {
      if (forward[c][right] + backward(c, right) === trunks) states.push(right);
      if (right === 0) break;
    }
    return states.sort((a, b) => a - b);
  });
  let transitions = optimal[0].length;
  for (let c = 1; c < columns; c++) transitions += optimal[c - 1].length * optimal[c].length;
  const narrow = transitions > exactTransitions;

  interface Node {
    readonly right: number;
    readonly cost: number;
    readonly from: number;
  }
  const layers: Node[][] = [];
  let kept: Node[] = [{ right: 0, cost: 0, from: -1 }];
  for (let c = 0; c < columns; c++) {
    const nodes: Node[] = [];
    for (const right of optimal[c]) {
      const left = masks[c] & ~right;
      let node: Node | undefined;
      kept.forEach((previous, from) => {
        const size = popcount(previous.right | left);
        const before = c === 0 ? 0 : forward[c - 1][previous.right];
        if (size > tracks || before + size + backward(c, right) !== trunks) return;
        const cost = previous.cost + problem.crossovers(c, previous.right, left);
        if (node === undefined || cost < node.cost) node = { right, cost, from };
      });
      if (node !== undefined) nodes.push(node);
    }
    if (narrow && nodes.length > width) {
      nodes.sort((a, b) => a.cost - b.cost || a.right - b.right);
      nodes.length = width;
    }
    layers.push(nodes);
    kept = nodes;
  }
  let best = 0;
  let least = Infinity;
  kept.forEach((node, i) => {
    const cost = node.cost + problem.crossovers(columns, node.right, 0);
    if (popcount(node.right) <= tracks && cost < least) {
      least = cost;
      best = i;
    }
  });
  const right = new Array<number>(columns);
  for (let c = columns - 1, at = best; c >= 0; c--) {
    right[c] = layers[c][at].right;
    at = layers[c][at].from;
  }
  return { tracks, trunks, right, proved: !narrow || least === 0 };
}

/** For more nets than the exact programme takes: the same sweep over the best `width` states a column, ordered by trunks, then crossovers. */
function assignGreedily(problem: SideProblem, given?: number): Sides | null {
  const { columns, masks } = problem;
  interface Node {
    readonly right: number;
    readonly trunks: number;
    readonly cost: number;
    readonly from: Node | null;
  }
  const trial = (tracks: number): Node | null => {
    let kept: Node[] = [{ right: 0, trunks: 0, cost: 0, from: null }];
    for (let c = 0; c < columns; c++) {
      const nodes = new Map<number, Node>();
      const offer = (from: Node, left: number) => {
        const right = masks[c] & ~left;
        const size = popcount(from.right | left);
        if (size > tracks || popcount(right) > tracks) return;
        const trunks = from.trunks + size;
        const known = nodes.get(right);
        if (known !== undefined && known.trunks < trunks) return;
        const cost = from.cost + problem.crossovers(c, from.right, left);
        if (known === undefined || trunks < known.trunks || cost < known.cost)
          nodes.set(right, { right, trunks, cost, from });
      };
      for (const from of kept) {
        // Joining the trunks that are there costs nothing; every subset of the few others is weighed one net at a time.
        const shared = masks[c] & from.right;
        let left = shared;
        offer(from, left);
        const others = masks[c] & ~shared;
        for (let n = 0; n < problem.nets; n++)
          if ((others >> n) & 1) {
            offer(from, shared | (1 << n));
            left |= 1 << n;
            offer(from, left);
          }
        for (let n = 0; n < problem.nets; n++) if ((shared >> n) & 1) offer(from, shared & ~(1 << n));
      }
      kept = [...nodes.values()].sort((a, b) => a.trunks - b.trunks || a.cost - b.cost || a.right - b.right);
      kept.length = Math.min(kept.length, width);
      if (kept.length === 0) return null;
    }
    return kept.reduce((a, b) => (b.trunks + popcount(b.right) < a.trunks + popcount(a.right) ? b : a));
  };
  const most = given ?? problem.nets;
  for (let tracks = given ?? 1; tracks <= most; tracks++) {
    const end = trial(tracks);
    if (end === null) continue;
    const right: number[] = [];
    for (let node: Node = end; node.from !== null; node = node.from) right.unshift(node.right);
    return { tracks, trunks: end.trunks + popcount(end.right), right, proved: false };
  }
  return null;
}
