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

export function spreadOf({ x, y }: Places, cells: readonly number[]): Spread {
  const spread = { xx: 0, xy: 0, yy: 0 };
  for (const cell of cells) {
    spread.xx += x[cell] * x[cell];
    spread.xy += x[cell] * y[cell];
    spread.yy += y[cell] * y[cell];
  }
  return spread;
}

/** Visits sets of `count` cells (the list is valid during the call) that leave the centre out. */
export type VisitSets = (
  places: Places,
  count: number,
  visit: (cells: readonly number[], spread: Spread) => void,
) => void;

/** Every set with zero sum. The last cell follows from the others, so there are about choose(cells, count - 1) / count of them. */
export const visitZeroSumSets: VisitSets = (places, count, visit) => {
  const { rows, columns, x, y } = places;
  const centre = (rows * columns - 1) / 2;
  const cells: number[] = [];
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
      visit(cells, spreadOf(places, cells));
      return;
    }
    const last = left === 1 ? closing(sumX, sumY) : -1;
    const from = left === 1 ? Math.max(last, 0) : left - 1;
    const to = left === 1 ? Math.min(last + 1, before) : before;
    for (let cell = from; cell < to; cell++) {
      if (cell === centre) continue;
      cells.push(cell);
      take(left - 1, cell, sumX + x[cell], sumY + y[cell]);
      cells.pop();
    }
  };
  take(count, rows * columns, 0, 0);
};

/** Every set of reflected pairs: each cell with its reflection. None where `count` is odd. */
export const visitPairSets: VisitSets = (places, count, visit) => {
  const last = places.rows * places.columns - 1;
  const cells: number[] = [];
  const take = (left: number, before: number): void => {
    if (left === 0) visit(cells, spreadOf(places, cells));
    for (let cell = left / 2 - 1; left > 0 && cell < before; cell++) {
      cells.push(cell, last - cell);
      take(left - 2, cell);
      cells.length -= 2;
    }
  };
  if (count % 2 === 0) take(count, last / 2);
};
