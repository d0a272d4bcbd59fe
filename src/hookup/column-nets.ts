import type { CostTerm, Deal } from '../array/cost-term.js';

/**
 * Counts the pairs (column, net) with at least one unit of the net in the column: what the placement alone decides of the wiring.
 * The fill is no net; a termination in the core is one, since it is wired like a bit.
 */
export function columnNetsTerm(deal: Deal): CostTerm {
  const { columns, nets, start, cells, netOfBlock } = deal;
  const fill = nets - 1;
  // units[net * columns + column]
  const units = new Int32Array(nets * columns);
  let pairs = 0;
  for (let block = 0; block < netOfBlock.length; block++) {
    const net = netOfBlock[block];
    for (let i = start[block]; i < start[block + 1]; i++) {
      const at = net * columns + (cells[i] % columns);
      if (units[at]++ === 0 && net !== fill) pairs++;
    }
  }
  // Columns of each block's cells, so that the kernel does not divide.
  const columnOf = Int32Array.from(cells, (cell) => cell % columns);

  /** Exchanges the nets of both blocks in `units`; returns what the number of pairs changes by. */
  const exchange = (a: number, b: number): number => {
    const netA = netOfBlock[a];
    const netB = netOfBlock[b];
    if (netA === netB) return 0;
    const rowA = netA * columns;
    const rowB = netB * columns;
    const countA = netA === fill ? 0 : 1;
    const countB = netB === fill ? 0 : 1;
    let change = 0;
    for (let i = start[a]; i < start[a + 1]; i++) {
      const column = columnOf[i];
      if (--units[rowA + column] === 0) change -= countA;
      if (units[rowB + column]++ === 0) change += countB;
    }
    for (let i = start[b]; i < start[b + 1]; i++) {
      const column = columnOf[i];
      if (--units[rowB + column] === 0) change -= countB;
      if (units[rowA + column]++ === 0) change += countA;
    }
    return change;
  };
  /** The reverse of `exchange` for nets that have not changed yet. */
  const restore = (a: number, b: number): void => {
    const rowA = netOfBlock[a] * columns;
    const rowB = netOfBlock[b] * columns;
    if (rowA === rowB) return;
    for (let i = start[a]; i < start[a + 1]; i++) {
      units[rowA + columnOf[i]]++;
      units[rowB + columnOf[i]]--;
    }
    for (let i = start[b]; i < start[b + 1]; i++) {
      units[rowB + columnOf[i]]++;
      units[rowA + columnOf[i]]--;
    }
  };
  return {
    name: 'hookup.columnNets',
    value: () => pairs,
    delta: (a, b) => {
      const change = exchange(a, b);
      restore(a, b);
      return change;
    },
    apply: (a, b) => {
      pairs += exchange(a, b);
    },
  };
}

/** Pairs (column, bit) with at least one unit of the bit in the column, counted from the cells. */
export function columnNets(cells: readonly (readonly string[])[], bits: ReadonlySet<string>): number {
  const pairs = new Set<string>();
  for (const row of cells) row.forEach((name, column) => bits.has(name) && pairs.add(`${column} ${name}`));
  return pairs.size;
}
