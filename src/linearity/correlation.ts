import { exp } from '../core/exponential.js';

/** Correlation of two units by their distance along columns and rows. */
export interface Correlation {
  readonly columns: number;
  /** at[rows apart * columns + columns apart]. */
  readonly at: Float64Array;
}

/**
 * rho(d) = exp(-d / length) for every distance between two cells of a core: the spatial correlation rho_u^d of Luo et al., IEEE TCAD 27(11),
 * 2008 (from memory).
 * @param pitch_um x and y. @param length_um correlation length; 0 makes units independent.
 */
export function correlationOf(
  rows: number,
  columns: number,
  pitch_um: readonly [x: number, y: number],
  length_um: number,
): Correlation {
  const at = new Float64Array(rows * columns);
  for (let r = 0; r < rows; r++)
    for (let c = 0; c < columns; c++) {
      const x = c * pitch_um[0];
      const y = r * pitch_um[1];
      const distance = Math.sqrt(x * x + y * y);
      at[r * columns + c] = distance === 0 ? 1 : length_um > 0 ? exp(-distance / length_um) : 0;
    }
  return { columns, at };
}

// ln(1 / 0.9): at one pitch's distance the correlation is 0.9.
const NINE_TENTHS = 0.10536051565782628;

/** The correlation length at which one pitch, the geometric mean of both, gives 0.9: what placements are compared at. */
export const comparisonLength = ([x, y]: readonly [x: number, y: number]): number => Math.sqrt(x * y) / NINE_TENTHS;

/**
 * Correlation between classes of columns (class c: column c and its mirror image): the sum over a pair of units in the one class and a
 * pair in the other, one unit of a pair in either column, with every row as likely as any other.
 * @returns [class * classes + class]
 */
export function columnCorrelation({ columns, at }: Correlation): Float64Array {
  const rows = at.length / columns;
  const classes = Math.ceil(columns / 2);
  // mean[c]: of two units c columns apart, over all pairs of rows; rows r apart stand in rows - r places.
  const mean = Float64Array.from({ length: columns }, (_, c) => {
    let sum = 0;
    for (let r = 0; r < rows; r++) sum += (r === 0 ? rows : 2 * (rows - r)) * at[r * columns + c];
    return sum / (rows * rows);
  });
  const kernel = new Float64Array(classes * classes);
  for (let c = 0; c < classes; c++)
    for (let d = 0; d < classes; d++) kernel[c * classes + d] = 2 * (mean[Math.abs(c - d)] + mean[columns - 1 - c - d]);
  return kernel;
}
