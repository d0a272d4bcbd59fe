import { describe, expect, it } from 'vitest';
import { resolveConverter } from '../../src/spec/converter-options.js';
import type { Converter } from '../../src/spec/converter.js';
import { BOLTZMANN, idealSqnr, leastTotal, quantizationNoise, thermalNoise_uV } from '../../src/sizing/noise.js';
import { cycleTime, largestResistance, timeConstants } from '../../src/sizing/settling.js';

const converter = (keys: Partial<Converter> & { readonly bits: number }) => ({
  ...resolveConverter({ format: 'steelyard/converter', version: 1, ...keys }),
  bits: keys.bits,
});
const near = (found: number, wanted: number, relative: number) =>
  expect(Math.abs(found / wanted - 1)).toBeLessThan(relative);

describe('thermal noise', () => {
  it('has the constant of the SI: 1.380649e-23 J/K, kT at 300 K 4.141947e-21 J (D)', () => {
    expect(BOLTZMANN).toBe(1.380649e-23);
    near(BOLTZMANN * 300, 4.141947e-21, 1e-9);
    // The molar gas constant over the Avogadro constant, both exact since 2019.
    near(BOLTZMANN, 8.31446261815324 / 6.02214076e23, 1e-12);
  });

  // D: sqrt(kT/C) at 300 K.
  it.each([
    [1, 2035.177],
    [100, 203.518],
    [1000, 64.358],
    [10000, 20.352],
  ])('%d fF: %d uV (D)', (capacitance, published) => {
    expect(Math.abs(thermalNoise_uV(capacitance, 300) - published)).toBeLessThan(6e-4);
  });

  it.each([
    [3, 250],
    [47, 300],
    [220, 358.15],
    [6800, 398.15],
  ])('%d fF at %d K: half kT is stored on the mean', (capacitance, temperature) => {
    const volts = thermalNoise_uV(capacitance, temperature) * 1e-6;
    near((capacitance * 1e-15 * volts * volts) / 2, (BOLTZMANN * temperature) / 2, 1e-12);
  });

  it('is what the resistance of the switch and its bandwidth come to, whatever the resistance', () => {
    // 4kTR over the frequencies of a first-order low-pass, summed up numerically.
    const capacitance = 80e-15;
    for (const resistance of [100, 5e4]) {
      let power = 0;
      const corner = 1 / (2 * Math.PI * resistance * capacitance);
      // f = corner tan(angle): the integral over angles has a finite range.
      const steps = 2000;
      for (let i = 0; i < steps; i++) {
        const angle = ((i + 0.5) / steps) * (Math.PI / 2);
        const frequency = corner * Math.tan(angle);
        const gain = 1 / (1 + (frequency / corner) ** 2);
        power += (4 * BOLTZMANN * 300 * resistance * gain * corner * (Math.PI / 2 / steps)) / Math.cos(angle) ** 2;
      }
      near(thermalNoise_uV(80, 300), Math.sqrt(power) * 1e6, 1e-9);
    }
  });
});

describe('quantisation noise', () => {
  it('10 bits, 1 V: 281.909 uV (D; Bennett 1948, M)', () => {
    expect(Math.abs(quantizationNoise(converter({ bits: 10, fullScale_Vpp: 1 })).value - 281.909)).toBeLessThan(6e-4);
  });

  it.each([
    [3, 1],
    [6, 0.8],
    [9, 1.8],
    [14, 2],
  ])('%d bits, %d V: the root mean square of a ramp against its steps', (bits, fullScale_Vpp) => {
    const lsb = fullScale_Vpp / 2 ** bits;
    let squares = 0;
    const points = 10_000;
    for (let i = 0; i < points; i++) squares += (((i + 0.5) / points - 0.5) * lsb) ** 2;
    near(quantizationNoise(converter({ bits, fullScale_Vpp })).value, Math.sqrt(squares / points) * 1e6, 1e-7);
  });

  // D: SQNR = 10 log10(1.5 4^N).
  it.each([
    [8, 49.9257],
    [10, 61.9669],
    [12, 74.0081],
    [14, 86.0493],
  ])('%d bits: %d dB (D)', (bits, published) => {
    expect(Math.abs(idealSqnr({ bits }).value - published)).toBeLessThan(6e-5);
  });

  it.each([5, 7, 9, 11])('%d bits: 1.761 dB and 6.0206 dB a bit', (bits) => {
    expect(idealSqnr({ bits }).value).toBeCloseTo(20 * Math.log10(Math.sqrt(3 / 2)) + 20 * bits * Math.log10(2), 10);
  });
});

describe('the least capacitance for the noise', () => {
  // D: 12 kT 4^N / (alpha VFS^2), 1 V, 300 K, fF; alpha 1, 0.5, 0.25.
  it.each([
    [8, 1, 3.2574],
    [8, 0.5, 6.5147],
    [8, 0.25, 13.0294],
    [10, 1, 52.1178],
    [10, 0.5, 104.2355],
    [10, 0.25, 208.471],
    [12, 1, 833.8841],
    [12, 0.5, 1667.768],
    [12, 0.25, 3335.536],
  ])('%d bits at a noise ratio of %d: %d fF (D)', (bits, thermalToQuantization, published) => {
    near(leastTotal(converter({ bits, thermalToQuantization })).value, published, 2e-5);
  });

  it.each([
    [7, 1.2, 0.5, 300],
    [9, 0.6, 1, 350],
    [11, 2.4, 0.1, 400],
    [13, 3.3, 2, 250],
  ])(
    '%d bits, %d V, ratio %d, %d K: it makes the noise that is allowed',
    (bits, fullScale_Vpp, ratio, temperature_K) => {
      const keys = { bits, fullScale_Vpp, thermalToQuantization: ratio, temperature_K };
      const sampled = thermalNoise_uV(leastTotal(converter(keys)).value, temperature_K);
      const allowed = Math.sqrt(ratio) * quantizationNoise(converter(keys)).value;
      near(sampled, allowed, 1e-12);
      // Of a differential converter the noise of both arrays comes to it.
      const each = thermalNoise_uV(leastTotal(converter({ ...keys, differential: true })).value, temperature_K);
      near(Math.sqrt(each * each + each * each), allowed, 1e-12);
    },
  );
});

describe('settling', () => {
  // D: (N + 1) ln 2 time constants to half an LSB.
  it.each([
    [8, 6.2383],
    [10, 7.6246],
    [12, 9.0109],
    [14, 10.3972],
  ])('%d bits: %d time constants (D)', (bits, published) => {
    expect(Math.abs(timeConstants(bits) - published)).toBeLessThan(6e-5);
  });

  it('t = 1 ns, C = 1 pF, N = 10: 131.154 ohm at most (D)', () => {
    expect(Math.abs(largestResistance(10, 1, 1000).value - 131.154)).toBeLessThan(6e-4);
  });

  it.each([
    [6, 0.2, 40],
    [8, 5, 333],
    [12, 71.4, 17690],
    [14, 0.7, 2500],
  ])('%d bits, %d ns, %d fF: half an LSB is left of full scale', (bits, time_ns, total_fF) => {
    const { value } = largestResistance(bits, time_ns, total_fF);
    const constant_s = value * total_fF * 1e-15;
    expect(Math.exp((-time_ns * 1e-9) / constant_s) * 2 ** bits).toBeCloseTo(0.5, 10);
  });

  it('N + 2 cycles a conversion (common practice)', () => {
    expect(cycleTime(converter({ bits: 12, sampleRate_MHz: 1 })).value).toBeCloseTo(1000 / 14, 10);
    expect(cycleTime(converter({ bits: 8, sampleRate_MHz: 50 })).value).toBeCloseTo(2, 10);
  });
});
