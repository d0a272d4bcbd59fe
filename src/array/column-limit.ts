/** How many nets may have units in one column, where the drawing limits that. */
export interface ColumnLimit {
  readonly most: number;
  /** What fill in a column counts: 1, and one more for each net that is dealt as fill. */
  readonly forFill: number;
  /** Whether some column must have room for one more. */
  readonly spare: boolean;
}
