/** Second moments in half-pitches squared. */
export interface Spread {
  readonly xx: number;
  readonly xy: number;
  readonly yy: number;
}

/**
 * Cells of a core by their places in half-pitches; an odd number of them, so that cell `cells - 1 - i` is the reflection of
 * cell i.
 */
export interface Places {
  readonly rows: number;
  readonly columns: number;
  readonly x: Int32Array;
  readonly y: Int32Array;
}

/**
 * Visits every set of `count` cells with zero sum that leaves the centre out. The last cell follows from the others, so
 * there are about choose(cells, count - 1) / count of them.
 *
 * @param visit called with a mark per cell of the set (valid during the call) and the set's own second moments.
 */
export function visitZeroSumSets(
  { rows, columns, x, y }: Places,
  count: number,
  visit: (taken: Uint8Array, spread: Spread) => void,
): void {
  const centre = (rows * columns - 1) / 2;
  const taken = new Uint8Array(rows * columns);
  const cells: number[] = [];
  const visitSet = (): void => {
    const spread = { xx: 0, xy: 0, yy: 0 };
    for (const cell of cells) {
      spread.xx += x[cell] * x[cell];
      spread.xy += x[cell] * y[cell];
      spread.yy += y[cell] * y[cell];
    }
    visit(taken, spread);
  };
  /** The cell that brings the sum back to 0, if it lies on the core. */
  const closing = (sumX: number, sumY: number): number => {
    const column = (columns - 1 - sumX) / 2;
    const row = (rows - 1 + sumY) / 2;
    const inside = column >= 0 && column < columns && row >= 0 && row < rows;
    return inside ? row * columns + column : -1;
  };
  /** Takes `left` more cells below `before`, in descending order so that each set comes once. */
  const take = (left: number, before: number, sumX: number, sumY: number): void => {
    if (left === 0) {
      visitSet();
      return;
    }
    const last = left === 1 ? closing(sumX, sumY) : -1;
    const from = left === 1 ? Math.max(last, 0) : left - 1;
    const to = left === 1 ? Math.min(last + 1, before) : before;
    for (let cell = from; cell < to; cell++) {
      if (cell === centre) continue;
      taken[cell] = 1;
      cells.push(cell);
      take(left - 1, cell, sumX + x[cell], sumY + y[cell]);
      cells.pop();
      taken[cell] = 0;
    }
  };
  take(count, rows * columns, 0, 0);
}
