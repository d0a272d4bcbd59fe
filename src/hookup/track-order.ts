/**
 * The order of the nets in one channel, from left to right, with the fewest crossovers: a linear-ordering problem, solved exactly by a
 * dynamic programme over subsets.
 *
 * Heights are counted downwards: the stub of a unit in row r lies at height 2r when it comes from the right-hand column (upper tab
 * level) and at 2r + 1 when it comes from the left-hand one (lower tab level). A trunk runs from its topmost stub down to the bus.
 *
 *     left unit --+----o      n's stub crosses m's trunk: m stands left of n and has begun at or above that height
 *                 m    n
 */
export interface ChannelNet {
  readonly net: string;
  /** Heights of the stubs from the left-hand and from the right-hand column, ascending. */
  readonly fromLeft: readonly number[];
  readonly fromRight: readonly number[];
}

const top = (entry: ChannelNet): number => Math.min(entry.fromLeft[0] ?? Infinity, entry.fromRight[0] ?? Infinity);

const countBelow = (heights: readonly number[], from: number): number => {
  let count = 0;
  for (const height of heights) if (height > from) count++;
  return count;
};

/** Crossovers between two nets when `m` stands left of `n`. */
export const crossoversBetween = (m: ChannelNet, n: ChannelNet): number =>
  countBelow(n.fromLeft, top(m)) + countBelow(m.fromRight, top(n));

/** The nets in the best order, and its crossovers. At most 20 nets (2^nets states). Ties go to the order that comes first as listed. */
export function orderTracks(entries: readonly ChannelNet[]): { order: ChannelNet[]; crossovers: number } {
  const count = entries.length;
  const before = new Int32Array(count * count);
  for (let m = 0; m < count; m++)
    for (let n = 0; n < count; n++) if (m !== n) before[m * count + n] = crossoversBetween(entries[m], entries[n]);
  const states = 1 << count;
  const best = new Int32Array(states).fill(0x7fffffff);
  const last = new Int8Array(states);
  best[0] = 0;
  for (let set = 0; set < states; set++) {
    for (let n = 0; n < count; n++) {
      if ((set >> n) & 1) continue;
      let cost = best[set];
      for (let m = 0; m < count; m++) if ((set >> m) & 1) cost += before[m * count + n];
      const next = set | (1 << n);
      if (cost < best[next]) {
        best[next] = cost;
        last[next] = n;
      }
    }
  }
  const order: ChannelNet[] = [];
  for (let set = states - 1; set !== 0; set ^= 1 << last[set]) order.unshift(entries[last[set]]);
  return { order, crossovers: count === 0 ? 0 : best[states - 1] };
}

/**
 * Gives the ordered nets places on `tracks` tracks with the least total length of stubs: a net hooked from the left wants a near left
 * track, one hooked from the right a near right one. Returns the track of each net; the other tracks stay free.
 */
export function placeOnTracks(order: readonly ChannelNet[], tracks: number): number[] {
  const count = order.length;
  if (count > tracks) throw new RangeError(`${count} nets do not fit ${tracks} tracks`);
  const cost = (i: number, track: number) =>
    order[i].fromLeft.length * track + order[i].fromRight.length * (tracks - 1 - track);
  // least[i][t]: the first i nets on tracks below t
  const least: number[][] = [new Array<number>(tracks + 1).fill(0)];
  for (let i = 0; i < count; i++) {
    const row = new Array<number>(tracks + 1).fill(Infinity);
    for (let t = i; t < tracks; t++) row[t + 1] = Math.min(row[t], least[i][t] + cost(i, t));
    least.push(row);
  }
  const places: number[] = [];
  for (let i = count, t = tracks; i > 0; i--) {
    while (least[i][t - 1] === least[i][t]) t--;
    places.unshift(--t);
  }
  return places;
}
