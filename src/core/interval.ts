import { exp, ln } from './exponential.js';

/** ln sqrt(2 pi). */
const HALF_LN_TWO_PI = 0.9189385332046727;
const STIRLING = [1 / 12, -1 / 360, 1 / 1260, -1 / 1680, 1 / 1188, -691 / 360360];

/** ln Gamma(x) for x > 0: Stirling's series with the argument raised to 10 or more, where the first term left out is below 1e-15. */
function lnGamma(x: number): number {
  let argument = x;
  let product = 1;
  for (; argument < 10; argument++) product *= argument;
  const square = 1 / (argument * argument);
  const series = STIRLING.reduceRight((sum, coefficient) => sum * square + coefficient, 0) / argument;
  return (argument - 0.5) * ln(argument) - argument + HALF_LN_TWO_PI + series - ln(product);
}

const TINY = 1e-300;
const EPSILON = 1e-15;
const mostTerms = 100_000;

/**
 * The regularised incomplete beta function I_x(a, b), a and b above 0: a continued fraction, evaluated forwards (Lentz's method; from memory),
 * on the side of the mean where it converges within about sqrt(a + b) terms.
 */
function incompleteBeta(x: number, a: number, b: number): number {
  if (x <= 0) return 0;
  if (x >= 1) return 1;
  if (x > (a + 1) / (a + b + 2)) return 1 - incompleteBeta(1 - x, b, a);
  const kept = (value: number): number => (Math.abs(value) < TINY ? TINY : value);
  let c = 1;
  let d = 1 / kept(1 - ((a + b) * x) / (a + 1));
  let fraction = d;
  for (let m = 1; m < mostTerms; m++) {
    const even = (m * (b - m) * x) / ((a + 2 * m - 1) * (a + 2 * m));
    d = 1 / kept(1 + even * d);
    c = kept(1 + even / c);
    fraction *= d * c;
    const odd = (-(a + m) * (a + b + m) * x) / ((a + 2 * m) * (a + 2 * m + 1));
    d = 1 / kept(1 + odd * d);
    c = kept(1 + odd / c);
    const factor = d * c;
    fraction *= factor;
    if (Math.abs(factor - 1) < EPSILON) break;
  }
  return (exp(a * ln(x) + b * ln(1 - x) + lnGamma(a + b) - lnGamma(a) - lnGamma(b)) * fraction) / a;
}

/** Where an increasing function of a number in [0, 1] reaches a value. */
function reaches(value: number, of: (x: number) => number): number {
  let low = 0;
  let high = 1;
  for (let middle = 0.5; middle > low && middle < high; middle = (low + high) / 2) {
    if (of(middle) < value) low = middle;
    else high = middle;
  }
  return high;
}

/**
 * Confidence interval of a share of which `successes` of `trials` were seen, after Clopper and Pearson (Biometrika 26, 1934; from memory): the
 * shares that a one-sided test at (1 - confidence) / 2 does not reject from either side. It holds the true share at least as often as it says.
 */
export function clopperPearson(
  successes: number,
  trials: number,
  confidence: number,
): { readonly low: number; readonly high: number } {
  const tail = (1 - confidence) / 2;
  const low = successes === 0 ? 0 : reaches(tail, (p) => incompleteBeta(p, successes, trials - successes + 1));
  const high =
    successes === trials ? 1 : reaches(1 - tail, (p) => incompleteBeta(p, successes + 1, trials - successes));
  return { low, high };
}
