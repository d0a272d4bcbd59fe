/**
 * The interface of a cost term. The search knows a term by nothing else; linearity, hookup and extraction offer them.
 *
 * Cells are dealt in blocks that move together (a cell and its point reflection, or a single cell); a swap exchanges the nets of two
 * blocks of the same size. Net index = index into the deal's nets; the last net is the fill.
 */
export interface Deal {
  readonly rows: number;
  readonly columns: number;
  /** Number of nets, the fill's (always last, perhaps without a cell) included. */
  readonly nets: number;
  /** weight[net] in LSB; 0 for the termination and the fill. */
  readonly weight: Float64Array;
  /** Cells of block b: cells[start[b]] .. cells[start[b + 1] - 1]; cell = row * columns + column, row 0 at the top. */
  readonly start: Int32Array;
  readonly cells: Int32Array;
  /** Net of each block; only `apply` changes it, through the search. */
  readonly netOfBlock: Uint8Array;
}

export interface CostTerm {
  readonly name: string;
  /** The term's cost now, a finite number of at least 0. */
  value(): number;
  /** What `value` would change by if blocks `a` and `b` exchanged their nets. Changes nothing and allocates nothing. */
  delta(a: number, b: number): number;
  /** Follows the exchange; called before the deal's `netOfBlock` changes. Applying the same pair again undoes it. */
  apply(a: number, b: number): void;
}
