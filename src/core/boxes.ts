import Flatbush from 'flatbush';

/** Rectangles in flat arrays, whole nanometres; box `i` is x0[i] .. x1[i] by y0[i] .. y1[i], of positive area. */
export interface Boxes {
  readonly x0: Int32Array;
  readonly y0: Int32Array;
  readonly x1: Int32Array;
  readonly y1: Int32Array;
}

/** Collects boxes whose number is not known beforehand. */
export class BoxList {
  #values = new Int32Array(64);
  #count = 0;

  push(x0: number, y0: number, x1: number, y1: number): void {
    const at = 4 * this.#count++;
    if (at === this.#values.length) {
      const longer = new Int32Array(2 * at);
      longer.set(this.#values);
      this.#values = longer;
    }
    this.#values[at] = x0;
    this.#values[at + 1] = y0;
    this.#values[at + 2] = x1;
    this.#values[at + 3] = y1;
  }

  finish(): Boxes {
    const column = (offset: number) => {
      const column = new Int32Array(this.#count);
      for (let i = 0; i < column.length; i++) column[i] = this.#values[4 * i + offset];
      return column;
    };
    return { x0: column(0), y0: column(1), x1: column(2), y1: column(3) };
  }
}

/** The boxes with x and y exchanged: what is said about rows then holds for columns. */
export const transposed = (b: Boxes): Boxes => ({ x0: b.y0, y0: b.x0, x1: b.y1, y1: b.x1 });

/** Finds boxes by place. A search is closed: boxes that only touch the window are found too. */
export class BoxIndex {
  readonly #tree: Flatbush | undefined;

  constructor(b: Boxes) {
    if (b.x0.length === 0) return;
    this.#tree = new Flatbush(b.x0.length, 16, Int32Array);
    for (let i = 0; i < b.x0.length; i++) this.#tree.add(b.x0[i], b.y0[i], b.x1[i], b.y1[i]);
    this.#tree.finish();
  }

  /** Numbers of the boxes that meet the closed window, in no particular order. */
  search(x0: number, y0: number, x1: number, y1: number): number[] {
    return this.#tree ? this.#tree.search(x0, y0, x1, y1) : [];
  }
}
