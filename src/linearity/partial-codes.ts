import { longestSumInPlane, longestSumOnLine } from './zonotope.js';

/**
 * A square to stay below. Doubles decide where they can: sums of whole numbers are exact below 2^53 and only their squares are rounded, by
 * a few 2^-53; what is within 1e-12 is decided in whole numbers.
 */
export class Limit {
  readonly low: number;
  readonly high: number;

  constructor(readonly squared: bigint) {
    this.low = Number(squared) * (1 - 1e-12);
    this.high = Number(squared) * (1 + 1e-12);
  }

  /** Whether the square of twice (u, v) is not below. */
  isReached(u: number, v: number): boolean {
    if (4 * (u * u + v * v) < this.low) return false;
    const [x, y] = [BigInt(u), BigInt(v)];
    return 4n * (x * x + y * y) >= this.squared;
  }
}

/**
 * The second order over all codes of the capacitors that are decided so far: a bound below what it becomes with the others, whose
 * codes contain these. Residuals are given as trace t, u = xx - yy and v = 2 xy, whole numbers below 2^49; norms as
 * squares of twice the largest sum, as `LongestSum` has them, for the residuals of all bits add up to 0: with the undecided ones
 * taken as one capacitor, -(sum of the decided), the longest signed sum is twice the longest sum over codes.
 */
export class PartialCodes {
  static readonly none = new PartialCodes([], Float64Array.of(0), Float64Array.of(0), 0, 0, 0);

  private constructor(
    private readonly residuals: readonly (readonly [t: number, u: number, v: number])[],
    /** Sums of u and of v over the 2^k codes of k capacitors. */
    private readonly u: Float64Array,
    private readonly v: Float64Array,
    private readonly positive: number,
    private readonly negative: number,
    private readonly largest: number,
  ) {}

  with(t: number, u: number, v: number): PartialCodes {
    const both = (sums: Float64Array, value: number): Float64Array => {
      const more = new Float64Array(2 * sums.length);
      more.set(sums);
      for (let code = 0; code < sums.length; code++) more[sums.length + code] = sums[code] + value;
      return more;
    };
    const positive = this.positive + Math.max(t, 0);
    const negative = this.negative + Math.min(t, 0);
    const largest = this.largestWith(t, u, v);
    return new PartialCodes(
      [...this.residuals, [t, u, v]],
      both(this.u, u),
      both(this.v, v),
      positive,
      negative,
      largest,
    );
  }

  /** The square with one more capacitor, rounded. */
  largestWith(t: number, u: number, v: number): number {
    const trace = Math.max(this.positive + t, -this.negative - t);
    let largest = Math.max(this.largest / 4, trace * trace);
    for (let code = 0; code < this.u.length; code++) {
      const sumU = this.u[code] + u;
      const sumV = this.v[code] + v;
      const square = sumU * sumU + sumV * sumV;
      if (square > largest) largest = square;
    }
    return 4 * largest;
  }

  exactlyWith(t: number, u: number, v: number): bigint {
    const decided = [...this.residuals, [t, u, v] as const];
    const of = (component: 0 | 1 | 2): bigint[] => {
      const values = decided.map((residual) => BigInt(residual[component]));
      return [...values, -values.reduce((sum, value) => sum + value, 0n)];
    };
    const trace = longestSumOnLine(of(0)).squared;
    const shear = longestSumInPlane(of(1), of(2)).squared;
    return trace > shear ? trace : shear;
  }

  /** Whether the square with one more capacitor is below the limit; without a limit it always is. Decided exactly. */
  isBelow(limit: Limit | undefined, t: number, u: number, v: number): boolean {
    if (limit === undefined) return true;
    const largest = this.largestWith(t, u, v);
    if (largest < limit.low) return true;
    if (largest > limit.high) return false;
    if (limit.isReached(this.positive + Math.max(t, 0), 0)) return false;
    if (limit.isReached(this.negative + Math.min(t, 0), 0)) return false;
    for (let code = 0; code < this.u.length; code++) {
      if (limit.isReached(this.u[code], this.v[code])) return false;
      if (limit.isReached(this.u[code] + u, this.v[code] + v)) return false;
    }
    return true;
  }

  /** Ranges outside which one more capacitor's t, u or v is never below the limit; a shade wider than that. */
  room(limit: Limit): Room {
    const radius = (Math.sqrt(limit.high) / 2) * (1 + 1e-9);
    const room: Room = {
      t: [-radius - this.negative, radius - this.positive],
      u: [-Infinity, Infinity],
      v: [-Infinity, Infinity],
    };
    for (const axis of ['u', 'v'] as const) {
      for (const sum of this[axis]) {
        room[axis][0] = Math.max(room[axis][0], -radius - sum);
        room[axis][1] = Math.min(room[axis][1], radius - sum);
      }
    }
    return room;
  }
}

export type Room = Readonly<Record<'t' | 'u' | 'v', [least: number, most: number]>>;
