/**
 * The run-time baseline: swap annealing as it has been written since the 1990s. State: point-symmetric pairs of cells on an odd x odd
 * core, the single unit at its centre. Move: the cells of two pairs change places. Cost: both gradient orders, recounted over all units at
 * every move; no covariance, no wires. As fast as such a loop can be made: flat typed arrays, no allocation, the moments of the cells laid
 * out ahead, the recount one pass over the units.
 */
export interface BaselineResult {
  readonly trials: number;
  readonly seconds: number;
  /** What its own cost comes to at the end: 1/2 sum |a_k| / W + 1/2 sum |B_k| / W, half-pitches. */
  readonly cost: number;
  /** Net of every cell. */
  readonly netOfCell: Uint8Array;
}

export interface BaselineRequest {
  readonly rows: number;
  readonly columns: number;
  /** Cells of each capacitor, 1, 2, 4, ...; what is left is fill. */
  readonly units: readonly number[];
  readonly pitch: readonly [x: number, y: number];
  readonly trials: number;
  readonly seed: number;
}

export function annealBySwaps({ rows, columns, units, pitch, trials, seed }: BaselineRequest): BaselineResult {
  const cells = rows * columns;
  const pairs = (cells - 1) / 2;
  const nets = units.length;
  const total = units.reduce((sum, count) => sum + count, 0);
  // Only units count: cell by cell their place and its products; [5 * cell + component].
  const moment = new Float64Array(5 * cells);
  for (let cell = 0; cell < cells; cell++) {
    const x = pitch[0] * (2 * (cell % columns) - (columns - 1));
    const y = pitch[1] * (rows - 1 - 2 * Math.floor(cell / columns));
    moment.set([x, y, x * x, x * y, y * y], 5 * cell);
  }
  const netOfCell = new Uint8Array(cells).fill(nets);
  netOfCell[pairs] = 0;
  let pair = 0;
  for (let net = 1; net < nets; net++)
    for (let i = 0; i < units[net]; i += 2, pair++) netOfCell[pair] = netOfCell[cells - 1 - pair] = net;

  let a = seed | 0 || 1;
  const random = (): number => {
    a ^= a << 13;
    a ^= a >>> 17;
    a ^= a << 5;
    return a >>> 0;
  };
  const below = (count: number): number => Math.floor((random() * count) / 0x1_0000_0000);

  const sums = new Float64Array(5 * (nets + 1));
  const recount = (): number => {
    sums.fill(0);
    for (let cell = 0, at = 0; cell < cells; cell++, at += 5) {
      const to = 5 * netOfCell[cell];
      sums[to] += moment[at];
      sums[to + 1] += moment[at + 1];
      sums[to + 2] += moment[at + 2];
      sums[to + 3] += moment[at + 3];
      sums[to + 4] += moment[at + 4];
    }
    let [x, y, xx, xy, yy] = [0, 0, 0, 0, 0];
    for (let to = 0; to < 5 * nets; to += 5) {
      x += sums[to];
      y += sums[to + 1];
      xx += sums[to + 2];
      xy += sums[to + 3];
      yy += sums[to + 4];
    }
    let first = 0;
    let second = 0;
    for (let net = 0, to = 0; net < nets; net++, to += 5) {
      const share = units[net] / total;
      const ax = sums[to] - share * x;
      const ay = sums[to + 1] - share * y;
      first += Math.sqrt(ax * ax + ay * ay);
      const p = sums[to + 2] - share * xx;
      const q = 2 * (sums[to + 3] - share * xy);
      const r = sums[to + 4] - share * yy;
      second += Math.max(Math.abs(p + r), Math.sqrt((p - r) * (p - r) + q * q));
    }
    return first / 2 + second / 2;
  };
  const exchange = (i: number, j: number): void => {
    const net = netOfCell[i];
    netOfCell[i] = netOfCell[cells - 1 - i] = netOfCell[j];
    netOfCell[j] = netOfCell[cells - 1 - j] = net;
  };

  const start = performance.now();
  let cost = recount();
  const hottest = cost / 10;
  const cooling = Math.exp(Math.log(1e-6) / Math.max(1, trials));
  let temperature = hottest;
  for (let trial = 0; trial < trials; trial++, temperature *= cooling) {
    const i = below(pairs);
    let j = below(pairs);
    while (netOfCell[i] === netOfCell[j]) j = below(pairs);
    exchange(i, j);
    const now = recount();
    if (now <= cost || random() < 0x1_0000_0000 * Math.exp((cost - now) / temperature)) cost = now;
    else exchange(i, j);
  }
  return { trials, seconds: (performance.now() - start) / 1000, cost: cost / total, netOfCell };
}
