import type { ColumnLimit } from '../array/column-limit.js';
import type { CostTerm, Deal } from '../array/cost-term.js';

/**
 * Counts what is beyond a limit: nets of a column above the most that fit below it, and 1 where a column with room to spare is wanted and
 * there is none. 0 means that every net gets its trunk.
 */
export function columnLimitTerm(deal: Deal, { most, forFill, spare }: ColumnLimit): CostTerm {
  const { columns, nets, start, cells, netOfBlock } = deal;
  const fill = nets - 1;
  const columnOf = Int32Array.from(cells, (cell) => cell % columns);
  // units[net * columns + column], and trunks[column] of them
  const units = new Int32Array(nets * columns);
  const trunks = new Int32Array(columns);
  let excess = 0;
  let roomy = columns;

  const change = (column: number, by: number): void => {
    const before = trunks[column];
    const now = before + by;
    trunks[column] = now;
    excess += (now > most ? now - most : 0) - (before > most ? before - most : 0);
    roomy += (now < most ? 1 : 0) - (before < most ? 1 : 0);
  };
  const add = (net: number, column: number): void => {
    if (units[net * columns + column]++ === 0) change(column, net === fill ? forFill : 1);
  };
  const take = (net: number, column: number): void => {
    if (--units[net * columns + column] === 0) change(column, net === fill ? -forFill : -1);
  };
  /** Cells of block `a` go from net p to net q, those of b the other way. */
  const exchange = (a: number, b: number, p: number, q: number): void => {
    for (let i = start[a]; i < start[a + 1]; i++) {
      take(p, columnOf[i]);
      add(q, columnOf[i]);
    }
    for (let i = start[b]; i < start[b + 1]; i++) {
      take(q, columnOf[i]);
      add(p, columnOf[i]);
    }
  };
  const total = (): number => excess + (spare && roomy === 0 ? 1 : 0);

  for (let block = 0; block < netOfBlock.length; block++)
    for (let i = start[block]; i < start[block + 1]; i++) add(netOfBlock[block], columnOf[i]);
  return {
    name: 'hookup.columnLimit',
    value: total,
    delta: (a, b) => {
      const [p, q] = [netOfBlock[a], netOfBlock[b]];
      if (p === q) return 0;
      const before = total();
      exchange(a, b, p, q);
      const by = total() - before;
      exchange(a, b, q, p);
      return by;
    },
    apply: (a, b) => {
      const [p, q] = [netOfBlock[a], netOfBlock[b]];
      if (p !== q) exchange(a, b, p, q);
    },
  };
}
