/**
 * A symmetric positive definite matrix by its rows from their first entry to the diagonal, and its factors L D L' in the same place: what
 * lies left of a row's first entry stays 0 (fill-in stays within the envelope).
 */
export class Envelope {
  readonly #first: Int32Array;
  /** Row i's entry of column j is value[#at[i] + j], first[i] <= j <= i. */
  readonly #at: Int32Array;
  readonly #value: Float64Array;
  readonly #inverse: Float64Array;

  /** @param first the column of the first entry of each row. */
  constructor(first: Int32Array) {
    this.#first = first;
    this.#at = new Int32Array(first.length);
    this.#inverse = new Float64Array(first.length);
    let size = 0;
    for (let i = 0; i < first.length; i++) {
      this.#at[i] = size - first[i];
      size += i - first[i] + 1;
    }
    this.#value = new Float64Array(size);
  }

  /** Adds to the entry of row `i`, column `j` <= `i`. */
  add(i: number, j: number, value: number): void {
    this.#value[this.#at[i] + j] += value;
  }

  /** Replaces the matrix by its factors. */
  factor(): void {
    const [first, at, value, inverse] = [this.#first, this.#at, this.#value, this.#inverse];
    for (let i = 0; i < first.length; i++) {
      const row = at[i];
      // With u_ij = l_ij d_j: u_ij = a_ij - sum_k u_ik l_jk, then d_i = a_ii - sum_j u_ij l_ij.
      for (let j = first[i]; j < i; j++) {
        const other = at[j];
        let sum = value[row + j];
        for (let k = Math.max(first[i], first[j]); k < j; k++) sum -= value[row + k] * value[other + k];
        value[row + j] = sum;
      }
      let diagonal = value[row + i];
      for (let j = first[i]; j < i; j++) {
        const u = value[row + j];
        const l = u * inverse[j];
        diagonal -= u * l;
        value[row + j] = l;
      }
      inverse[i] = 1 / diagonal;
    }
  }

  /** Solves for one right-hand side, in place, after `factor`. */
  solve(x: Float64Array): void {
    const [first, at, value, inverse] = [this.#first, this.#at, this.#value, this.#inverse];
    for (let i = 0; i < x.length; i++) {
      const row = at[i];
      let sum = x[i];
      for (let j = first[i]; j < i; j++) sum -= value[row + j] * x[j];
      x[i] = sum;
    }
    for (let i = 0; i < x.length; i++) x[i] *= inverse[i];
    for (let i = x.length - 1; i >= 0; i--) {
      const row = at[i];
      const xi = x[i];
      for (let j = first[i]; j < i; j++) x[j] -= value[row + j] * xi;
    }
  }
}
