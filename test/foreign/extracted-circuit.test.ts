import { execFileSync } from 'node:child_process';
import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { writeExtractedNetlist } from '../../src/export/spice-extracted.js';
import type { Circuit } from '../../src/extraction/circuit.js';
import { drawn } from '../pipeline/drawn.js';

// Debian's ngspice reads the extracted netlist and solves it: by nodal analysis code by code, and in time bit by bit.

let directory = '';
beforeAll(() => (directory = mkdtempSync(join(tmpdir(), 'extracted-'))));
afterAll(() => rmSync(directory, { recursive: true }));

const BITS = 6;
const CODES = 1 << BITS;
const drive = { switch_ohm: 8000, reference_ohm: 20 };
const array = drawn({ bits: BITS, effort: 'quick' });
const driven = drawn({ bits: BITS, effort: 'quick', drive });
const coupling = array.circuit!.coupling;

function run(deck: readonly string[]): string {
  writeFileSync(join(directory, 'deck.cir'), [...deck, ''].join('\n'));
  return execFileSync('ngspice', ['-b', 'deck.cir'], { cwd: directory, encoding: 'utf8', stdio: 'pipe' });
}

function instance(netlist: string): { readonly pins: readonly string[]; readonly lines: readonly string[] } {
  writeFileSync(join(directory, 'array.cir'), netlist);
  const [, name, words] = /^\.SUBCKT (\S+) (.*(?:\n\+ .*)*)/m.exec(netlist)!;
  const pins = words.replaceAll('\n+', '').split(/\s+/);
  return { pins, lines: ['.include array.cir', `Xarray ${pins.join(' ')} ${name}`] };
}

describe('the extracted netlist', () => {
  const netlist = writeExtractedNetlist(array.polygons!, array.circuit!);

  it('gives the levels of its capacitances at every code', () => {
    const { pins, lines } = instance(netlist);
    const commands = Array.from({ length: CODES }, (_, code) => [
      ...Array.from({ length: BITS }, (_, bit) => `alter vb${bit} acmag = ${(code >> bit) & 1}`),
      // Slow enough for every resistor to be none.
      'ac lin 1 1k 1k',
      'print vr(top)',
    ]).flat();
    const output = run([
      'codes one after another',
      ...lines,
      ...pins.filter((pin) => pin !== 'TOP').map((pin) => `V${pin} ${pin} 0 dc 0 ac 0`),
      'Rtop TOP 0 1e18',
      '.control',
      'set numdgt=15',
      ...commands,
      'quit 0',
      '.endc',
      '.end',
    ]);
    const levels = [...output.matchAll(/^vr\(.*\) = (\S+)$/gm)].map(([, value]) => Number(value));
    expect(levels).toHaveLength(CODES);
    const toTop = (name: string) => coupling.pairs.find(({ a, b }) => a === name && b === 'TOP')!.fF;
    const all = coupling.pairs.reduce((sum, { a, b, fF }) => (a === 'TOP' || b === 'TOP' ? sum + fF : sum), 0);
    const on = (code: number) =>
      Array.from({ length: BITS }, (_, bit) => ((code >> bit) & 1) * toTop(`B${bit}`)).reduce((a, b) => a + b, 0);
    const lsb = on(CODES - 1) / all / (CODES - 1);
    levels.forEach((level, code) => expect(Math.abs(level - on(code) / all) / lsb).toBeLessThan(1e-6));
    // From the line through both ends they are off by what the metrics say.
    const step = (levels[CODES - 1] - levels[0]) / (CODES - 1);
    const inl = levels.map((level, code) => (level - levels[0]) / step - code);
    const dnl = inl.slice(1).map((value, code) => value - inl[code]);
    const { inl_lsb, dnl_lsb = 0 } = array.metrics.parasitic!;
    expect(inl_lsb).toBeGreaterThan(1e-3);
    expect(Math.abs(Math.max(...inl.map(Math.abs)) - inl_lsb)).toBeLessThan(1e-6);
    expect(Math.abs(Math.max(...dnl.map(Math.abs)) - dnl_lsb)).toBeLessThan(1e-6);
  });
});

/** Seconds until a step through a resistor has brought a bit's slowest unit to a share of it, `TOP` and all others held. */
function stepTimes(
  netlist: string,
  bit: string,
  node: string,
  ohm: number,
  elmore_ps: number,
  shares: readonly number[],
) {
  const { pins, lines } = instance(netlist);
  const output = run([
    'step',
    ...lines,
    ...pins.filter((pin) => pin !== bit).map((pin) => `V${pin} ${pin} 0 0`),
    `Vstep in 0 pwl(0 0 ${elmore_ps / 1e4}p 1)`,
    `Rsource in ${bit} ${ohm}`,
    '.options method=gear reltol=1e-4',
    `.tran ${elmore_ps / 500}p ${elmore_ps * 5}p 0 ${elmore_ps / 500}p`,
    ...shares.map((share, i) => `.measure tran t${i} when v(${node})=${share}`),
    '.end',
  ]);
  return shares.map((_, i) => Number(new RegExp(`^t${i}\\s*=\\s*(\\S+)`, 'm').exec(output)![1]) * 1e12);
}

describe('settling of a bit with the common plate held', () => {
  const slowest = (name: string, { nets }: Circuit) => {
    const { last } = nets.find((net) => net.name === name)!;
    return last === 0 ? name : `xarray.${name}_${last}`.toLowerCase();
  };

  it('by wires alone is half done no later than the Elmore delay says', () => {
    const { circuit, metrics, polygons } = array;
    const netlist = writeExtractedNetlist(polygons!, circuit!);
    for (const { name, elmore_ps = 0, settling_ps } of metrics.parasitic!.bits) {
      expect(settling_ps).toBeUndefined();
      const [half] = stepTimes(netlist, name, slowest(name, circuit!), 1e-6, elmore_ps, [0.5]);
      expect(half).toBeLessThanOrEqual(elmore_ps);
      expect(half).toBeGreaterThan(0.3 * elmore_ps);
    }
  });

  it('where the switch dominates takes ln 2 of it to the half, and the settling time to half an LSB', () => {
    const { circuit, metrics, polygons } = driven;
    const netlist = writeExtractedNetlist(polygons!, circuit!);
    metrics.parasitic!.bits.forEach(({ name, elmore_ps = 0, settling_ps = 0 }, bit) => {
      const weight = 2 ** bit;
      const ohm = drive.switch_ohm / weight + drive.reference_ohm;
      const [half, settled] = stepTimes(netlist, name, slowest(name, circuit!), ohm, elmore_ps, [
        0.5,
        1 - 1 / (2 * weight),
      ]);
      expect(half).toBeLessThanOrEqual(elmore_ps);
      expect(Math.abs(half / (Math.LN2 * elmore_ps) - 1)).toBeLessThan(0.05);
      expect(Math.abs(settled / settling_ps - 1)).toBeLessThan(0.1);
    });
  });
});
