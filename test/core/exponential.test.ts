import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { exp, ln } from '../../src/core/exponential.js';

const ULP = 2.220446049250313e-16;

describe('exponential and logarithm', () => {
  it('takes the exact values exactly', () => {
    expect(ln(1)).toBe(0);
    expect(exp(0)).toBe(1);
    expect(exp(-800)).toBe(0);
    expect(exp(800)).toBe(Infinity);
    expect(() => ln(0)).toThrow(RangeError);
    expect(() => ln(-1)).toThrow(RangeError);
    expect(() => ln(NaN)).toThrow(RangeError);
    expect(() => ln(Infinity)).toThrow(RangeError);
  });

  it('agrees with the published constants', () => {
    // ln 2, ln 10 and e to 16 digits: tables of mathematical constants (common practice).
    expect(Math.abs(ln(2) - 0.6931471805599453)).toBeLessThanOrEqual(ULP);
    expect(Math.abs(ln(10) - 2.302585092994046)).toBeLessThanOrEqual(4 * ULP);
    expect(Math.abs(exp(1) - 2.718281828459045)).toBeLessThanOrEqual(4 * ULP);
  });

  it('logarithm: within 2 units in the last place of the engine, over the whole range', () => {
    fc.assert(
      fc.property(fc.double({ min: 5e-324, max: 1.7e308, noNaN: true, noDefaultInfinity: true }), (x) => {
        expect(Math.abs(ln(x) - Math.log(x))).toBeLessThanOrEqual(2 * ULP * Math.abs(Math.log(x)));
      }),
      { numRuns: 2000 },
    );
  });

  it('logarithm near 1 loses nothing', () => {
    fc.assert(
      fc.property(fc.double({ min: 0.9, max: 1.1, noNaN: true }), (x) => {
        expect(Math.abs(ln(x) - Math.log(x))).toBeLessThanOrEqual(2 * ULP * Math.abs(Math.log(x)));
      }),
      { numRuns: 2000 },
    );
  });

  it('exponential: within 2 units in the last place of the engine', () => {
    fc.assert(
      fc.property(fc.double({ min: -700, max: 700, noNaN: true }), (x) => {
        expect(Math.abs(exp(x) - Math.exp(x))).toBeLessThanOrEqual(2 * ULP * Math.exp(x));
      }),
      { numRuns: 2000 },
    );
  });
});
