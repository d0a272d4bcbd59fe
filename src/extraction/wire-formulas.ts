import { exp, ln } from '../core/exponential.js';
import { EPSILON0 } from './field.js';

const power = (base: number, exponent: number): number => exp(exponent * ln(base));

/**
 * Capacitance per length of a line over a plane, aF/um: T. Sakurai and K. Tamaru, "Simple formulas for two- and three-dimensional
 * capacitances", IEEE Transactions on Electron Devices 30(2), 1983, which states 6 % for widths and thicknesses of 0.3 to 30 heights.
 * Lengths in any one unit.
 */
export const overPlane = (width: number, thickness: number, height: number, permittivity: number): number =>
  EPSILON0 * permittivity * ((1.15 * width) / height + 2.8 * power(thickness / height, 0.222));

/** Of the same source: what two equal lines on one level have between them, `spacing` apart over a plane, aF/um; stated: 10 %. */
export function betweenNeighbours(
  width: number,
  thickness: number,
  height: number,
  spacing: number,
  permittivity: number,
): number {
  const t = thickness / height;
  const side = (0.03 * width) / height + 0.83 * t - 0.07 * power(t, 0.222);
  return EPSILON0 * permittivity * side * power(spacing / height, -1.34);
}
