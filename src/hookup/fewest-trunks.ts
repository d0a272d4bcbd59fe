/**
 * The fewest trunks of a placement in the channel style, exactly.
 *
 * Column c lies between channels c and c + 1. Each of its nets must have a trunk in one of the two, and no channel more nets than it has
 * tracks: a cover of every net's columns by channels, with a capacity. Subsets of the nets of a column are bit sets over its own list.
 */
export interface TrunkTable {
  readonly tracks: number;
  /** Of the whole core. */
  readonly trunks: number;
  /** after[c][right]: the fewest trunks of the channels right of column c if the nets `right` of it hook there; `NEVER` if they cannot. */
  readonly after: readonly Int32Array[];
  /** carry[c][set]: those of a set of column c's nets that column c + 1 has as well, as a set of its own. */
  readonly carry: readonly Int32Array[];
}

export const NEVER = 0x3fffffff;

/** Nets of a column up to which all subsets of them are weighed. */
export const EXACT_NETS = 14;

export const popcount = (value: number): number => {
  let v = value - ((value >>> 1) & 0x55555555);
  v = (v & 0x33333333) + ((v >>> 2) & 0x33333333);
  return (((v + (v >>> 4)) & 0x0f0f0f0f) * 0x01010101) >>> 24;
};

/**
 * @param nets of every column, in ascending order; at most `EXACT_NETS` each.
 * @returns null where so many tracks do not suffice.
 */
export function fewestTrunks(nets: readonly (readonly number[])[], tracks: number): TrunkTable | null {
  const columns = nets.length;
  const carry = nets.map((list, c) => carried(list, nets[c + 1] ?? []));
  const after: Int32Array[] = new Array<Int32Array>(columns);
  for (let c = columns - 1; c >= 0; c--) {
    const least = withAtMost(nets[c + 1]?.length ?? 0, tracks, c + 1 < columns ? after[c + 1] : undefined);
    after[c] = Int32Array.from({ length: 1 << nets[c].length }, (_, right) => {
      const own = popcount(right);
      const value = own > tracks ? NEVER : least[tracks - own][carry[c][right]];
      return value === NEVER ? NEVER : value + own;
    });
  }
  const trunks = withAtMost(nets[0].length, tracks, after[0])[tracks][0];
  return trunks === NEVER ? null : { tracks, trunks, after, carry };
}

/**
 * least[d][shared]: the fewest trunks in a channel and right of it, those of the set `shared` in the channel not counted, if the column to
 * its right adds at most `d` more nets to it. Of what has a trunk in the channel anyhow, all of the column hooks there: it costs nothing.
 */
function withAtMost(nets: number, tracks: number, after?: Int32Array): Int32Array[] {
  const size = 1 << nets;
  const all = size - 1;
  const first = Int32Array.from({ length: size }, (_, left) => after?.[all & ~left] ?? 0);
  const least = [first];
  for (let d = 1; d <= tracks; d++) {
    const fewer = least[d - 1];
    least.push(
      fewer.map((value, set) => {
        let best = value;
        for (let more = all & ~set; more !== 0; more &= more - 1) {
          const other = fewer[set | (more & -more)];
          if (other + 1 < best) best = other + 1;
        }
        return best;
      }),
    );
  }
  return least;
}

function carried(from: readonly number[], to: readonly number[]): Int32Array {
  const bit = from.map((net) => {
    const i = to.indexOf(net);
    return i === -1 ? 0 : 1 << i;
  });
  const result = new Int32Array(1 << from.length);
  for (let set = 1; set < result.length; set++) {
    const low = 31 - Math.clz32(set & -set);
    result[set] = result[set & (set - 1)] | bit[low];
  }
  return result;
}
