import { describe, expect, it } from 'vitest';
import { resolveConverter } from '../../src/spec/converter-options.js';
import { switchings } from '../../src/spec/converter.js';
import type { Converter, Switching } from '../../src/spec/converter.js';
import { unitMismatch } from '../../src/spec/options.js';
import { withUnitOf } from '../../src/spec/scale-unit.js';
import { arrayBits } from '../../src/sizing/array-bits.js';
import { capacitanceOfArea, sigmaFactors, unitArea, unitSigma } from '../../src/sizing/unit-mismatch.js';
import { parseTechnology } from '../../src/spec/parse-technology.js';
import { template, valueOf } from '../spec/kiln4.js';

const converter = (keys: Partial<Converter> & { readonly bits: number }) => ({
  ...resolveConverter({ format: 'steelyard/converter', version: 1, limits: { dnl_lsb: 0.5 }, ...keys }),
  bits: keys.bits,
});

/** A threshold as which units of which array it is made of: entry i of a list is how often unit i counts. */
type Form = readonly number[];

/** Thresholds of all decisions, found by walking every path; units of two arrays one after the other. */
function thresholds(scheme: Switching, bits: number, arrays: 1 | 2): Form[] {
  const free = scheme === 'monotonic' || scheme === 'vcmBased';
  const n = free ? bits - 1 : bits;
  const units = 2 ** n - 1;
  const size = units * arrays;
  // Bit k of an array: 2^k units from 2^k - 1 on; a piece of the split bit: after the units of the others.
  const bit = (k: number, first = 0): number[] => Array.from({ length: 2 ** k }, (_, i) => first + 2 ** k - 1 + i);
  const with_ = (form: Form, which: readonly number[], by: number, side: 'P' | 'N' | 'both'): Form => {
    const next = [...form];
    for (const unit of which) {
      if (side === 'both') for (let a = 0; a < arrays; a++) next[a * units + unit] += by / arrays;
      else next[(side === 'P' ? 0 : units) + unit] += by;
    }
    return next;
  };
  const found: Form[] = [];
  const walk = (decision: number, form: Form): void => {
    found.push(form);
    if (decision === bits - 1) return;
    const k = n - 1 - decision;
    if (scheme === 'conventional') {
      const next = bit(k - 1);
      walk(decision + 1, with_(form, next, 1, 'both'));
      walk(decision + 1, with_(with_(form, bit(k), -1, 'both'), next, 1, 'both'));
    } else if (scheme === 'splitMsb') {
      const others = 2 ** (n - 1) - 1;
      walk(decision + 1, with_(form, bit(k - 1), 1, 'both'));
      walk(decision + 1, with_(form, bit(k - 1, others), -1, 'both'));
    } else if (scheme === 'vcmBased') {
      walk(decision + 1, with_(form, bit(k), 1, 'both'));
      walk(decision + 1, with_(form, bit(k), -1, 'both'));
    } else {
      walk(decision + 1, with_(form, bit(k), 1, 'P'));
      walk(decision + 1, with_(form, bit(k), -1, 'N'));
    }
  };
  const zero: Form = new Array<number>(size).fill(0);
  const split = Array.from({ length: 2 ** (n - 1) }, (_, i) => 2 ** (n - 1) - 1 + i);
  walk(0, free ? zero : with_(zero, scheme === 'splitMsb' ? split : bit(n - 1), 1, 'both'));
  return found;
}

/** Largest sigma of INL and of DNL over all thresholds, per sigma of a unit; each array's own sum is its gain. */
function worst(scheme: Switching, bits: number, arrays: 1 | 2): { inl: number; dnl: number } {
  const forms = thresholds(scheme, bits, arrays);
  const units = forms[0].length / arrays;
  const nominal = (form: Form): number => form.reduce((sum, count) => sum + count, 0);
  const errors = forms.map((form) => {
    const means = Array.from({ length: arrays }, (_, a) => nominal(form.slice(a * units, (a + 1) * units)) / units);
    return form.map((count, i) => count - means[Math.floor(i / units)]);
  });
  const order = forms.map((_, i) => i).sort((a, b) => nominal(forms[a]) - nominal(forms[b]));
  const variance = (form: Form): number => form.reduce((sum, count) => sum + count * count, 0);
  let [inl, dnl] = [0, 0];
  order.forEach((at, i) => {
    inl = Math.max(inl, variance(errors[at]));
    if (i === 0) return;
    const before = errors[order[i - 1]];
    expect(nominal(forms[at]) - nominal(forms[order[i - 1]])).toBe(1);
    dnl = Math.max(dnl, variance(errors[at].map((count, k) => count - before[k])));
  });
  return { inl: Math.sqrt(inl), dnl: Math.sqrt(dnl) };
}

describe('sigma of the worst code per sigma of a unit', () => {
  const cases = switchings.flatMap((switching) =>
    [3, 4, 5, 6, 7, 8].flatMap((bits) =>
      (switching === 'monotonic' ? ([2] as const) : ([1, 2] as const)).map((n) => [switching, bits, n] as const),
    ),
  );
  it.each(cases)('%s, %d bits, %d arrays: every threshold of every path', (switching, bits, arrays) => {
    const sampling = switching === 'monotonic' || switching === 'vcmBased' ? 'top-plate' : 'bottom-plate';
    const factors = sigmaFactors(converter({ bits, switching, sampling, differential: arrays === 2 }));
    const { inl, dnl } = worst(switching, bits, arrays);
    expect(factors.inl.value / inl).toBeCloseTo(1, 12);
    // The published rule of one trial array has no 1/W: an ideal denominator.
    const published = switching === 'conventional';
    if (published) expect(factors.dnl.value ** 2 - dnl ** 2).toBeCloseTo(1 / (2 ** bits - 1) / arrays, 10);
    else expect(Math.abs(factors.dnl.value / dnl - 1)).toBeLessThan(0.51 / (2 ** bits - 1) ** 2 + 1 / 4 ** bits);
  });
});

describe('the largest sigma of a unit', () => {
  // D: 3 sigma DNL within half an LSB, su = 1 / (6 sqrt(2^N - 1)).
  it.each([
    [8, 1.04371],
    [10, 0.52109],
    [12, 0.26045],
    [14, 0.13021],
  ])('%d bits: %d %% (D)', (bits, published) => {
    expect(Math.abs(unitSigma(converter({ bits })).value - published)).toBeLessThan(6e-6);
  });

  it.each([5, 7, 9, 11, 13])('%d bits: three sigma of the step in the middle are half an LSB', (bits) => {
    const unit = unitSigma(converter({ bits })).value / 100;
    // Half the units against one fewer, all independent.
    expect(3 * unit * Math.sqrt(2 ** (bits - 1) + 2 ** (bits - 1) - 1)).toBeCloseTo(0.5, 12);
  });

  it('is the stricter of both limits, whichever that is', () => {
    const bits = 10;
    const only = (limits: Converter['limits']) => unitSigma(converter({ bits, ...(limits && { limits }) })).value;
    expect(only({ inl_lsb: 0.5 })).toBeGreaterThan(1.99 * only({ dnl_lsb: 0.5 }));
    expect(only({ inl_lsb: 0.5, dnl_lsb: 0.5 })).toBe(only({ dnl_lsb: 0.5 }));
    expect(only({ inl_lsb: 0.2, dnl_lsb: 0.5 })).toBe(only({ inl_lsb: 0.2 }));
  });

  it('needs one bit fewer where the sign is decided first', () => {
    const bitsOf = (switching: Switching, sampling: 'top-plate' | 'bottom-plate') =>
      arrayBits(converter({ bits: 10, switching, sampling }));
    expect(switchings.map((switching) => bitsOf(switching, 'top-plate'))).toEqual([10, 10, 9, 9]);
    expect(switchings.map((switching) => bitsOf(switching, 'bottom-plate'))).toEqual([10, 10, 10, 10]);
  });
});

describe('the area law', () => {
  const law = (of: 'single' | 'pair') => ({ coefficient_percent_um: 0.6, of });

  it('a coefficient of pairs stands for sqrt 2 less (S/M: Pelgrom, Duinmaijer, Welbers, JSSC 24(5), 1989)', () => {
    expect(unitArea(0.3, law('single')).value).toBeCloseTo(4, 12);
    expect(unitArea(0.3, law('pair')).value).toBeCloseTo(2, 12);
  });

  it.each([
    ['parallel-plate', 0.13],
    ['parallel-plate', 0.06],
    ['framed-fingers', 0.4],
    ['framed-fingers', 0.15],
  ])('%s: the unit drawn for a sigma of %d %% has it', (name, sigma) => {
    const technology = valueOf(parseTechnology(template(name), name));
    const { value } = unitArea(sigma, technology.mismatch);
    const made = withUnitOf(technology, capacitanceOfArea(value, technology).value);
    // The grid, and of fingers their number, come in between.
    expect(Math.abs(unitMismatch(made).localSigma_percent / sigma - 1)).toBeLessThan(0.02);
  });
});
