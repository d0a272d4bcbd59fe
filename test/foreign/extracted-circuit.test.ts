import { execFileSync } from 'node:child_process';
import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { writeExtractedNetlist } from '../../src/export/spice-extracted.js';
import { circuitOf } from '../../src/extraction/circuit.js';
import type { Coupling } from '../../src/extraction/coupling.js';
import { netsOf } from '../../src/extraction/net.js';
import { wireNetwork } from '../../src/extraction/wire-network.js';
import type { Polygons } from '../../src/spec/polygons.js';
import { drawn } from '../pipeline/drawn.js';

// Debian's ngspice reads the extracted netlist and solves it: by nodal analysis code by code, and in time bit by bit.

let directory = '';
beforeAll(() => (directory = mkdtempSync(join(tmpdir(), 'extracted-'))));
afterAll(() => rmSync(directory, { recursive: true }));

const BITS = 6;
const CODES = 1 << BITS;
const array = drawn({ bits: BITS, effort: 'quick' }).polygons!;
const unit_fF = array.technology.unit.capacitance_fF;

/** Made up: so much to each side per unit and per um of wire, and something between all neighbouring bits. */
function coupled(p: Polygons): Coupling {
  const network = wireNetwork(p);
  const names = p.capacitors.map(({ name }) => name);
  const { stretches, layers } = network;
  const wires = netsOf(network, names).flatMap((net) =>
    net.stretches.map(({ stretch: s }) => {
      const [x0, y0, x1, y1] = [stretches.x0[s], stretches.y0[s], stretches.x1[s], stretches.y1[s]];
      const length_um = Math.max(x1 - x0, y1 - y0) / 1000;
      const layer = layers[stretches.layer[s]].name;
      return { net: net.name, layer, x0, y0, x1, y1, top_fF: 0.004 * length_um, load_fF: 0.15 * length_um };
    }),
  );
  const onWires = (name: string, key: 'top_fF' | 'load_fF') =>
    wires.reduce((sum, wire) => (wire.net === name ? sum + wire[key] : sum), 0);
  const pairs = p.capacitors.flatMap(({ name, units }, i) => {
    const beside = names[i + 1];
    return [
      { a: name, b: 'TOP', fF: units * unit_fF + 0.03 * (i % 3) + onWires(name, 'top_fF'), error_fF: 0 },
      { a: name, b: 'VSS', fF: 1.1 * units + 0.8 * onWires(name, 'load_fF'), error_fF: 0 },
      ...(beside ? [{ a: name, b: beside, fF: 0.2 * onWires(name, 'load_fF'), error_fF: 0 }] : []),
    ];
  });
  return { nets: [...names, 'TOP', 'VSS'], pairs: [...pairs, { a: 'TOP', b: 'VSS', fF: 31.7, error_fF: 0 }], wires };
}

const coupling = coupled(array);

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
  const { circuit } = circuitOf(array, coupling, undefined);
  const netlist = writeExtractedNetlist(array, circuit);

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
    // They are no straight line: the coupling is there.
    const bent = levels.map((level, code) => level / lsb - code);
    expect(Math.max(...bent.map(Math.abs))).toBeGreaterThan(1e-3);
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
  const last = (name: string, circuit: ReturnType<typeof circuitOf>['circuit']) => {
    const { stayed } = circuit.nets.find((net) => net.name === name)!;
    return stayed === 0 ? name : `xarray.${name}_${stayed}`.toLowerCase();
  };

  it('by wires alone is half done no later than the Elmore delay says', () => {
    const { timings, circuit } = circuitOf(array, coupling, undefined);
    const netlist = writeExtractedNetlist(array, circuit);
    for (const { name, elmore_ps = 0, settling_ps } of timings) {
      expect(settling_ps).toBeUndefined();
      const [half] = stepTimes(netlist, name, last(name, circuit), 1e-6, elmore_ps, [0.5]);
      expect(half).toBeLessThanOrEqual(elmore_ps);
      expect(half).toBeGreaterThan(0.3 * elmore_ps);
    }
  });

  it('where the switch dominates takes ln 2 of it to the half, and the settling time to half an LSB', () => {
    const drive = { switch_ohm: 8000, reference_ohm: 20 };
    const { timings, circuit } = circuitOf(array, coupling, drive);
    const netlist = writeExtractedNetlist(array, circuit);
    timings.forEach(({ name, elmore_ps = 0, settling_ps = 0 }, bit) => {
      const weight = 2 ** bit;
      const ohm = 8000 / weight + 20;
      const [half, settled] = stepTimes(netlist, name, last(name, circuit), ohm, elmore_ps, [
        0.5,
        1 - 1 / (2 * weight),
      ]);
      expect(half).toBeLessThanOrEqual(elmore_ps);
      expect(Math.abs(half / (Math.LN2 * elmore_ps) - 1)).toBeLessThan(0.05);
      expect(Math.abs(settled / settling_ps - 1)).toBeLessThan(0.1);
    });
  });
});
