/**
 * Natural logarithm and exponential from + - * / alone, so that they are the same bits on every machine (Math.exp and Math.log are
 * left to the engine). Both are within a few units in the last place of the true value.
 */

// ln 2 in two parts: whole multiples of the first, up to 2^20 of them, are exact.
const LN2_HIGH = 0.6931471803691238;
const LN2_LOW = 1.9082149292705877e-10;
const ROOT_HALF = 0.7071067811865476;
const TWO_32 = 4294967296;

/**
 * The natural logarithm.
 * @param x a finite number above 0.
 * @throws RangeError otherwise.
 */
export function ln(x: number): number {
  if (!(x > 0 && x < Infinity)) throw new RangeError(`no logarithm of ${x}`);
  let mantissa = x;
  let exponent = 0;
  // Steps by powers of two are exact: a tiny x grows out of the subnormal range on the way up, and none is rounded on the way down.
  for (; mantissa < 1 / TWO_32; exponent -= 32) mantissa *= TWO_32;
  for (; mantissa > TWO_32; exponent += 32) mantissa /= TWO_32;
  for (; mantissa < ROOT_HALF; exponent--) mantissa *= 2;
  for (; mantissa >= 2 * ROOT_HALF; exponent++) mantissa /= 2;
  // ln m = 2 artanh s, s = (m - 1) / (m + 1), |s| < 0.172: the first term left out is below 0.172^22 / 23 < 1e-18 of the sum.
  const s = (mantissa - 1) / (mantissa + 1);
  const square = s * s;
  let series = 0;
  for (let odd = 21; odd >= 3; odd -= 2) series = (series + 1 / odd) * square;
  return exponent * LN2_HIGH + (2 * s + (2 * s * series + exponent * LN2_LOW));
}

/** The exponential of any number: 0 below about -745.1, Infinity above about 709.8. */
export function exp(x: number): number {
  if (x < -746) return 0;
  if (x > 710) return Infinity;
  const doublings = Math.round(x / (LN2_HIGH + LN2_LOW));
  const rest = x - doublings * LN2_HIGH - doublings * LN2_LOW;
  // |rest| < 0.347: the first term left out is below 0.347^15 / 15! < 1e-18.
  let series = 1;
  for (let n = 14; n >= 1; n--) series = 1 + (series * rest) / n;
  let result = series;
  // Halvings stay exact down to the subnormal range, where the last ones round as they must.
  for (let k = doublings; k > 0; k--) result *= 2;
  for (let k = doublings; k < 0; k++) result /= 2;
  return result;
}
