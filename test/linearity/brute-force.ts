import { EigenvalueDecomposition, Matrix } from 'ml-matrix';
import fc from 'fast-check';
import type { Capacitor, Core } from '../../src/spec/floorplan.js';
import type { Gradient } from '../../src/spec/technology.js';

export interface Plan {
  readonly core: Core;
  readonly capacitors: readonly Capacitor[];
  readonly cells: readonly (readonly string[])[];
}

/** (x, y, xx, xy, yy) in um and um^2. */
export type Sums = [number, number, number, number, number];

export const plan = (
  rows: readonly string[],
  weights: Readonly<Record<string, number>>,
  pitch_um: readonly [number, number] = [1, 1],
): Plan => {
  const cells = rows.map((row) => row.split(' '));
  const units = (name: string): number => cells.flat().filter((cell) => cell === name).length;
  return {
    core: { rows: cells.length, columns: cells[0].length, pitch_um },
    capacitors: Object.entries(weights).map(([name, weight]) => ({ name, role: 'bit', weight, units: units(name) })),
    cells,
  };
};

const place = ({ rows, columns, pitch_um }: Core, row: number, column: number): [number, number] => [
  (column - (columns - 1) / 2) * pitch_um[0],
  ((rows - 1) / 2 - row) * pitch_um[1],
];

export const bitsOf = ({ capacitors }: Plan): Capacitor[] =>
  capacitors.filter(({ role }) => role === 'bit').sort((a, b) => a.weight - b.weight);

/** Sums over each bit's cells. */
function sums(given: Plan): Sums[] {
  return bitsOf(given).map(({ name }) => {
    const total: Sums = [0, 0, 0, 0, 0];
    given.cells.forEach((line, row) =>
      line.forEach((cell, column) => {
        if (cell !== name) return;
        const [x, y] = place(given.core, row, column);
        [x, y, x * x, x * y, y * y].forEach((value, i) => (total[i] += value));
      }),
    );
    return total;
  });
}

export const codes = (count: number): number[] => Array.from({ length: 2 ** count }, (_, code) => code);
export const isOn = (code: number, k: number): boolean => Math.floor(code / 2 ** k) % 2 === 1;
const added = (values: readonly number[], code: number): number =>
  values.reduce((sum, value, k) => (isOn(code, k) ? sum + value : sum), 0);

/** What each code is off the line through both ends, per component. */
export function endPointErrors(given: Plan): Sums[] {
  const weights = bitsOf(given).map(({ weight }) => weight);
  const perBit = sums(given);
  const all = 2 ** weights.length - 1;
  return codes(weights.length).map(
    (code) =>
      [0, 1, 2, 3, 4].map((i) => {
        const values = perBit.map((sum) => sum[i]);
        return added(values, code) - (added(weights, code) / added(weights, all)) * added(values, all);
      }) as Sums,
  );
}

/** What each code is off the least-squares line through all codes, per component: the line is fitted code by code. */
export function lineErrors(given: Plan): Sums[] {
  const weights = bitsOf(given).map(({ weight }) => weight);
  const perBit = sums(given);
  const levels = codes(weights.length).map((code) => added(weights, code));
  const fitted = [0, 1, 2, 3, 4].map((i) => {
    const outputs = codes(weights.length).map((code) =>
      added(
        perBit.map((sum) => sum[i]),
        code,
      ),
    );
    const n = levels.length;
    const sx = levels.reduce((a, b) => a + b, 0);
    const sy = outputs.reduce((a, b) => a + b, 0);
    const sxx = levels.reduce((a, b) => a + b * b, 0);
    const sxy = levels.reduce((a, b, j) => a + b * outputs[j], 0);
    const slope = (n * sxy - sx * sy) / (n * sxx - sx * sx);
    const offset = (sy - slope * sx) / n;
    return outputs.map((output, j) => output - slope * levels[j] - offset);
  });
  return levels.map((_, code) => fitted.map((component) => component[code]) as Sums);
}

/** Differences of errors between every code and every one of the next higher nominal level. */
export function stepErrors(given: Plan): Sums[] {
  const weights = bitsOf(given).map(({ weight }) => weight);
  const errors = endPointErrors(given);
  const level = codes(weights.length).map((code) => added(weights, code));
  const distinct = [...new Set(level)].sort((a, b) => a - b);
  return errors.flatMap((from, a) => {
    const next = distinct[distinct.indexOf(level[a]) + 1];
    return errors.filter((_, b) => level[b] === next).map((to) => to.map((value, i) => value - from[i]) as Sums);
  });
}

export const length = ([x, y]: Sums): number => Math.hypot(x, y);

/** Sum of the absolute eigenvalues, by ml-matrix. */
export function nuclearNorm([, , xx, xy, yy]: Sums): number {
  const matrix = new Matrix([
    [xx, xy],
    [xy, yy],
  ]);
  return new EigenvalueDecomposition(matrix, { assumeSymmetric: true }).realEigenvalues.reduce(
    (sum, value) => sum + Math.abs(value),
    0,
  );
}

/** LSB under a gradient as a user gives it. */
export function underGradient(gradient: Gradient, [x, y, xx, xy, yy]: Sums): number {
  const q = gradient.quadratic_ppm_per_um2 ?? 0;
  const bowl = typeof q === 'number' ? q * (xx + yy) : q.xx * xx + 2 * q.xy * xy + q.yy * yy;
  const g = gradient.linear_ppm_per_um ?? 0;
  if (gradient.direction_deg === undefined) return 1e-6 * (Math.abs(g) * Math.hypot(x, y) + Math.abs(bowl));
  const angle = (gradient.direction_deg / 180) * Math.PI;
  return 1e-6 * Math.abs(g * (Math.cos(angle) * x + Math.sin(angle) * y) + bowl);
}

export const largest = (errors: readonly Sums[], measure: (sums: Sums) => number): number =>
  Math.max(0, ...errors.map(measure));

export const farthest = ({ rows, columns, pitch_um }: Core): number =>
  Math.hypot((columns - 1) * pitch_um[0], (rows - 1) * pitch_um[1]) / 2;

/**
 * INL over all codes without any approximation: c_k are the capacitances in units; codes scaled to the nominal end,
 * INL(D) = (sum d_k c_k) W / (sum c_k) - sum d_k w_k.
 */
export function exactInl(capacitance: readonly number[], weights: readonly number[]): number[] {
  const all = 2 ** weights.length - 1;
  return codes(weights.length).map(
    (code) => (added(capacitance, code) * added(weights, all)) / added(capacitance, all) - added(weights, code),
  );
}

/** Capacitance of each bit with units of `unit(x, y)`. */
export const capacitances = (given: Plan, unit: (x: number, y: number) => number): number[] =>
  bitsOf(given).map(({ name }) =>
    given.cells
      .flatMap((line, row) => line.map((cell, column) => (cell === name ? unit(...place(given.core, row, column)) : 0)))
      .reduce((a, b) => a + b, 0),
  );

const pitch = fc.constantFrom(0.5, 1, 1.2, 5.7, 7.2);

/** Cells at random among up to five bits, a termination and fill; what the weights are has nothing to do with the units. */
export const anyPlan = (weights: fc.Arbitrary<number[]>): fc.Arbitrary<Plan> =>
  fc
    .tuple(weights, fc.integer({ min: 1, max: 5 }), fc.integer({ min: 1, max: 5 }), pitch, pitch)
    .chain(([weight, rows, columns, px, py]) => {
      const names = weight.map((_, k) => `C${k}`);
      const cell = fc.constantFrom(...names, ...names, 'TERM', '-');
      const line = fc.array(cell, { minLength: columns, maxLength: columns });
      return fc.array(line, { minLength: rows, maxLength: rows }).map((cells): Plan => {
        const units = (name: string): number => cells.flat().filter((cell) => cell === name).length;
        const bits = names.map((name, k) => ({ name, role: 'bit' as const, weight: weight[k], units: units(name) }));
        return {
          core: { rows, columns, pitch_um: [px, py] },
          capacitors: [...bits, { name: 'TERM', role: 'termination', weight: 1, units: units('TERM') }],
          cells,
        };
      });
    });

export const anyWeights = fc.array(fc.integer({ min: 1, max: 9 }), { minLength: 1, maxLength: 5 });
export const binaryWeights = fc
  .integer({ min: 1, max: 5 })
  .map((count) => Array.from({ length: count }, (_, k) => 2 ** k));
