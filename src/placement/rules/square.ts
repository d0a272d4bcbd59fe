/**
 * What the published rules work on: 2^N cells in a square of 2^(N/2) rows, N bits of 1, 2, 4, ... units and the termination's one. A cell
 * is named by its bit, 0 up, or TERMINATION; FREE while nobody has it. Row 0 is the top row.
 *
 * Positions are half-pitches from the centre: x to the right, y upwards, odd whole numbers. Radii and angles are compared in these.
 */
export const TERMINATION = -1;
const FREE = -2;

export interface Position {
  readonly x: number;
  readonly y: number;
}

export class Square {
  readonly side: number;
  readonly #cells: Int8Array;

  /** @param side even. */
  constructor(side: number) {
    this.side = side;
    this.#cells = new Int8Array(side * side).fill(FREE);
  }

  #index({ x, y }: Position): number {
    return ((this.side - 1 - y) / 2) * this.side + (x + this.side - 1) / 2;
  }

  at(position: Position): number {
    return this.#cells[this.#index(position)];
  }

  isFree(position: Position): boolean {
    return this.at(position) === FREE;
  }

  set(position: Position, bit: number): void {
    this.#cells[this.#index(position)] = bit;
  }

  /** Gives a cell to one bit and its reflection in the centre to another, or to the same. */
  setPair({ x, y }: Position, bit: number, reflected = bit): void {
    this.set({ x, y }, bit);
    this.set({ x: -x, y: -y }, reflected);
  }

  /** Positions by rows from the top left. */
  positions(): Position[] {
    const { side } = this;
    return Array.from({ length: side * side }, (_, i) => ({
      x: 2 * (i % side) - (side - 1),
      y: side - 1 - 2 * Math.floor(i / side),
    }));
  }

  /** Rows of bits from the top. */
  rows(): number[][] {
    const { side } = this;
    return Array.from({ length: side }, (_, row) => Array.from(this.#cells.subarray(row * side, (row + 1) * side)));
  }
}

const radius2 = ({ x, y }: Position): number => x * x + y * y;

/** By angle, counter-clockwise from the x axis; both in the upper half plane. */
export const byAngle = (a: Position, b: Position): number => b.x * a.y - a.x * b.y;

export const byRadiusThenAngle = (a: Position, b: Position): number => radius2(a) - radius2(b) || byAngle(a, b);

/** One of each pair of reflected positions. */
export const isUpper = ({ y }: Position): boolean => y > 0;

/**
 * Deals to some bits in turn: each time to the one that is the furthest behind its share, quota / total of all deals so far; of equal ones
 * to the largest. `ahead` deals count from the start.
 * @param quota of each bit. @returns the next bit, at every call.
 */
export function dealByShare(quota: ReadonlyMap<number, number>, total: number, ahead: number): () => number {
  const dealt = new Map([...quota.keys()].map((bit) => [bit, 0]));
  let step = ahead;
  return () => {
    let next = -1;
    let most = -Infinity;
    for (const [bit, share] of quota) {
      const had = dealt.get(bit) ?? 0;
      // The deficit step * share / total - had, times the total: whole numbers.
      const behind = step * share - had * total;
      if (had < share && (behind > most || (behind === most && bit > next))) [next, most] = [bit, behind];
    }
    step++;
    dealt.set(next, (dealt.get(next) ?? 0) + 1);
    return next;
  };
}
