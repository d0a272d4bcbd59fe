import { bitsOf } from './brute-force.js';
import type { Plan } from './brute-force.js';

/** Cells of the bits in the order of the core: which bit, and where. */
export const units = (given: Plan) => {
  const bits = bitsOf(given);
  const [px, py] = given.core.pitch_um;
  return given.cells.flatMap((line, row) =>
    line.flatMap((name, column) => {
      const bit = bits.findIndex((each) => each.name === name);
      return bit < 0 ? [] : [{ bit, x: column * px, y: row * py }];
    }),
  );
};

/** sigma^2 of one unit with another: local part on the diagonal, the other by distance. */
export const unitCovariance = (given: Plan, local: number, correlated: number, length_um: number): number[][] => {
  const all = units(given);
  return all.map((a, i) =>
    all.map((b, j) => {
      const distance = Math.hypot(a.x - b.x, a.y - b.y);
      const rho = length_um > 0 ? Math.exp(-distance / length_um) : i === j ? 1 : 0;
      return (i === j ? local * local : 0) + correlated * correlated * rho;
    }),
  );
};
