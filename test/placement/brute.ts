import type { CostTerm, Deal } from '../../src/array/cost-term.js';
import type { DealtNet } from '../../src/placement/dealing.js';

/** Figures by counting every cell and every code; nothing of the search is used. */

export interface Placed {
  readonly rows: number;
  readonly columns: number;
  readonly weight: readonly number[];
  /** Net of every cell, row by row from the top. */
  readonly netOfCell: ArrayLike<number>;
}

/** W * sum of positions - weight * sum of all weighted positions, per net, in whole half-pitches. */
export function firstMoments({ rows, columns, weight, netOfCell }: Placed): [number, number][] {
  const total = weight.reduce((a, b) => a + b, 0);
  const sum = weight.map((): [number, number] => [0, 0]);
  const all = [0, 0];
  for (let row = 0; row < rows; row++) {
    for (let column = 0; column < columns; column++) {
      const net = netOfCell[row * columns + column];
      if (!(weight[net] > 0)) continue;
      const [x, y] = [2 * column - (columns - 1), rows - 1 - 2 * row];
      sum[net][0] += x;
      sum[net][1] += y;
      all[0] += x;
      all[1] += y;
    }
  }
  return sum.map(([x, y], net) => [total * x - weight[net] * all[0], total * y - weight[net] * all[1]]);
}

/** First order in LSB per ppm/um: every subset of the nets. */
export function firstOrder(placed: Placed, pitch: readonly [number, number]): number {
  const total = placed.weight.reduce((a, b) => a + b, 0);
  const residual = firstMoments(placed);
  let most = 0;
  for (let code = 0; code < 1 << residual.length; code++) {
    let x = 0;
    let y = 0;
    residual.forEach((r, k) => {
      if (!((code >> k) & 1)) return;
      x += r[0] * pitch[0];
      y += r[1] * pitch[1];
    });
    most = Math.max(most, Math.sqrt(x * x + y * y));
  }
  return (1e-6 * most) / (2 * total);
}

/** The least first order of all ways to fill a core. */
export function leastFirstOrder(
  rows: number,
  columns: number,
  nets: readonly DealtNet[],
  pitch: readonly [number, number],
): number {
  const weight = [...nets.map((net) => net.weight), 0];
  const left = [...nets.map((net) => net.units), rows * columns - nets.reduce((sum, net) => sum + net.units, 0)];
  const netOfCell = new Array<number>(rows * columns).fill(0);
  let least = Infinity;
  const fill = (cell: number): void => {
    if (cell === netOfCell.length) {
      least = Math.min(least, firstOrder({ rows, columns, weight, netOfCell }, pitch));
      return;
    }
    for (let net = 0; net < left.length; net++) {
      if (left[net] === 0) continue;
      left[net]--;
      netOfCell[cell] = net;
      fill(cell + 1);
      left[net]++;
    }
  };
  fill(0);
  return least;
}

export function netsOfBlocks({ rows, columns, start, cells, netOfBlock }: Deal): number[] {
  const netOfCell = new Array<number>(rows * columns).fill(-1);
  netOfBlock.forEach((net, block) => {
    for (let i = start[block]; i < start[block + 1]; i++) netOfCell[cells[i]] = net;
  });
  return netOfCell;
}

/** A term that counts its figure afresh each time. */
export function recounted(name: string, deal: Deal, figure: (placed: Placed) => number): CostTerm {
  const nets = Uint8Array.from(deal.netOfBlock);
  const now = (): number =>
    figure({
      rows: deal.rows,
      columns: deal.columns,
      weight: [...deal.weight],
      netOfCell: netsOfBlocks({ ...deal, netOfBlock: nets }),
    });
  const swap = (a: number, b: number): void => {
    [nets[a], nets[b]] = [nets[b], nets[a]];
  };
  return {
    name,
    value: now,
    delta(a, b) {
      const before = now();
      swap(a, b);
      const after = now();
      swap(a, b);
      return after - before;
    },
    apply: swap,
  };
}

/** (column, net) pairs of nets with weight. */
export function columnNets({ rows, columns, weight, netOfCell }: Placed): number {
  const seen = new Set<number>();
  for (let cell = 0; cell < rows * columns; cell++) {
    const net = netOfCell[cell];
    if (weight[net] > 0) seen.add(net * columns + (cell % columns));
  }
  return seen.size;
}

export const binaryNets = (bits: number): DealtNet[] =>
  Array.from({ length: bits }, (_, i) => ({ name: `B${i}`, weight: 1 << i, units: 1 << i }));

export const weightedNets = (weights: readonly number[]): DealtNet[] =>
  weights.map((weight, i) => ({ name: `B${i}`, weight, units: weight }));
