/** A length in whole nanometres. The brand keeps micrometres from slipping in. */
export type Nm = number & { readonly nanometres: unique symbol };

/**
 * Converts micrometres to whole nanometres.
 * @throws RangeError if the length is no whole number of nanometres (to 1e-6 nm, the rounding of a decimal fraction).
 */
export function nm(length_um: number): Nm {
  const scaled = length_um * 1000;
  const whole = Math.round(scaled);
  if (!(Math.abs(scaled - whole) < 1e-6)) throw new RangeError(`${length_um} um is no whole number of nanometres`);
  return whole as Nm;
}

/** Converts whole nanometres to micrometres, rounded to the decimal fraction that a file shows. */
export const um = (length_nm: number): number => Math.round(length_nm) / 1000;
