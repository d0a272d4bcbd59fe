import { describe, expect, it } from 'vitest';
import { Infeasible } from '../../src/core/problem.js';
import { columnNets } from '../../src/hookup/column-nets.js';
import { analyseGradient } from '../../src/linearity/analyse-gradient.js';
import { comparisonLength } from '../../src/linearity/correlation.js';
import { placementSigma } from '../../src/linearity/mismatch.js';
import { publishedRules } from '../../src/placement/published-rules.js';
import { capacitances, exactInl } from '../linearity/brute-force.js';
import type { Plan } from '../linearity/brute-force.js';

const ruleNamed = (name: string) => {
  const rule = publishedRules.find((each) => each.name === name);
  if (rule === undefined) throw new Error(`no rule ${name}`);
  return rule;
};

const planOf = (name: string, bits: number): Plan => {
  const cells = ruleNamed(name).place(bits);
  const capacitors = Array.from({ length: bits }, (_, b) => ({
    name: `B${b}`,
    role: 'bit' as const,
    weight: 2 ** b,
    units: 2 ** b,
  }));
  return { core: { rows: cells.length, columns: cells[0].length, pitch_um: [1, 1] }, capacitors, cells };
};

describe('six bits, 8 x 8, pitch 1 um: figures that other programs of these rules give (D)', () => {
  // Units C0 / (1 + g.r), |g| = 0.1 % a pitch, the worst of 1440 directions; correlation 0.9 a pitch, per sigma of one unit.
  it.each([
    ['row-by-row', '0.062248', '0.124496', '8.12210', '16.24420', 31],
    ['chessboard', '0.013201', '0.017617', '1.79731', '2.45157', 21],
    ['spiral', '0.000701', '0.000851', '3.55666', '7.11332', 23],
    ['interleaved', '0.000701', '0.000810', '1.92944', '3.40512', 25],
    ['partition-centred', '0.000701', '0.000822', '2.20592', '4.21144', 27],
    ['block-chessboard', '0.000701', '0.000907', '3.81478', '7.62956', 25],
  ])('%s', (name, inl, dnl, sigmaInl, sigmaDnl, nets) => {
    const given = planOf(name, 6);
    let worstInl = 0;
    let worstDnl = 0;
    for (let direction = 0; direction < 1440; direction++) {
      const angle = (direction * Math.PI) / 720;
      const [gx, gy] = [1e-3 * Math.cos(angle), 1e-3 * Math.sin(angle)];
      const units = capacitances(given, (x, y) => 1 / (1 + gx * x + gy * y));
      const errors = exactInl(units, [1, 2, 4, 8, 16, 32]);
      errors.forEach((error, code) => {
        worstInl = Math.max(worstInl, Math.abs(error));
        if (code > 0) worstDnl = Math.max(worstDnl, Math.abs(error - errors[code - 1]));
      });
    }
    const sigma = placementSigma(given, comparisonLength([1, 1]));
    expect({
      inl: worstInl.toFixed(6),
      dnl: worstDnl.toFixed(6),
      sigmaInl: sigma.inlSigma_perUnitSigma.toFixed(5),
      sigmaDnl: sigma.dnlSigma_perUnitSigma?.toFixed(5),
      nets: columnNets(given.cells, new Set(given.capacitors.map((capacitor) => capacitor.name))),
    }).toEqual({ inl, dnl, sigmaInl, sigmaDnl, nets });
  });
});

describe.each(publishedRules)('$name', ({ name, help, place }) => {
  it.each([4, 6, 8, 10, 12, 14])('gives every bit of %d its units in a square', (bits) => {
    const cells = place(bits);
    expect(cells.map((row) => row.length)).toEqual(new Array<number>(2 ** (bits / 2)).fill(2 ** (bits / 2)));
    const count = new Map<string, number>();
    for (const cell of cells.flat()) count.set(cell, (count.get(cell) ?? 0) + 1);
    expect([...count].sort(([, a], [, b]) => a - b).map(([, units]) => units)).toEqual([
      1,
      ...Array.from({ length: bits }, (_, b) => 2 ** b),
    ]);
    for (let b = 0; b < bits; b++) expect(count.get(`B${b}`)).toBe(2 ** b);
    expect(count.get('TERM')).toBe(1);
  });

  it.each([1, 2, 3, 5, 9])('cannot be had for %d bits', (bits) => {
    expect(() => place(bits)).toThrow(Infeasible);
    expect(() => place(bits)).toThrow(name);
  });

  it('says what it does in one line', () => {
    expect(help).toMatch(/^[a-z].{20,110}$/);
  });
});

describe.each(['spiral', 'interleaved', 'partition-centred', 'block-chessboard'])('%s is centred', (name) => {
  it.each([4, 6, 8])('in all of %d bits but the lone unit beside the centre', (bits) => {
    const { cells } = planOf(name, bits);
    const side = cells.length;
    cells.forEach((row, r) =>
      row.forEach((cell, c) => {
        const reflected = cells[side - 1 - r][side - 1 - c];
        if (cell === 'B0' || cell === 'TERM') expect([cell, reflected].sort()).toEqual(['B0', 'TERM']);
        else expect(reflected).toBe(cell);
      }),
    );
    expect(analyseGradient(planOf(name, bits)).first.worstCode).toEqual(['B0']);
  });
});

describe('as drawn by hand from the rule', () => {
  const picture = (name: string, bits: number) =>
    ruleNamed(name)
      .place(bits)
      .map((row) => row.map((cell) => (cell === 'TERM' ? 'T' : String(Number(cell.slice(1)) + 1))).join(' '));

  it('four bits row by row, on the chessboard and around the centre', () => {
    expect(picture('row-by-row', 4)).toEqual(['T 1 2 2', '3 3 3 3', '4 4 4 4', '4 4 4 4']);
    expect(picture('chessboard', 4)).toEqual(['4 3 4 3', '2 4 1 4', '4 3 4 3', 'T 4 2 4']);
    expect(picture('spiral', 4)).toEqual(['4 4 4 3', '4 2 1 3', '3 T 2 4', '3 4 4 4']);
  });

  it('the middle of blocks is what two bits fewer make, interleaved', () => {
    const middle = picture('block-chessboard', 4).slice(1, 3).map((row) => row.slice(2, 5)); // prettier-ignore
    expect(middle).toEqual(['2 1', 'T 2']);
    const inner = ruleNamed('block-chessboard').place(8).slice(4, 12).map((row) => row.slice(4, 12)); // prettier-ignore
    expect(inner).toEqual(ruleNamed('interleaved').place(6));
  });

  it('blocks are of two by two cells', () => {
    const cells = ruleNamed('block-chessboard').place(8);
    for (let r = 0; r < 16; r += 2)
      for (let c = 0; c < 16; c += 2) {
        if (r >= 4 && r < 12 && c >= 4 && c < 12) continue;
        const block = [cells[r][c], cells[r][c + 1], cells[r + 1][c], cells[r + 1][c + 1]];
        expect(new Set(block).size).toBe(1);
        expect(['B6', 'B7']).toContain(block[0]);
      }
  });
});
