import type { Capacitor, Core } from '../spec/floorplan.js';
import type { GradientMap } from '../spec/gradient-map.js';
import { HALF_NM, PPM, pitchNm } from './figures.js';
import { fieldOf } from './map-field.js';
import { offset2 } from './moments.js';
import { stepsOf } from './steps.js';

/** Largest magnitudes over all codes. `dnl_lsb` is absent beyond 14 capacitors that are not straight binary. */
export interface MapFigures {
  readonly inl_lsb: number;
  readonly dnl_lsb?: number;
  /** The bits that are on at the largest INL; absent where it is 0. */
  readonly worstCode?: readonly string[];
}

/**
 * INL and DNL under a measured map, exactly: c_k the units of bit k with their deviations, INL(D) = sum d_k c_k W / sum c_k - sum d_k w_k
 * from the line through both ends. The errors e_k = c_k W / sum c - w_k add up to 0, so the largest |INL| is the sum of the positive ones.
 * @throws InputError at /map where it does not cover the core.
 */
export function underMap(
  map: GradientMap,
  core: Core,
  capacitors: readonly Capacitor[],
  cells: readonly (readonly string[])[],
): MapFigures {
  const bits = capacitors.filter(({ role }) => role === 'bit').sort((a, b) => a.weight - b.weight);
  const names = bits.map(({ name }) => name);
  const weight = bits.map((bit) => bit.weight);
  const indexOf = new Map(names.map((name, k) => [name, k]));
  const [px, py] = pitchNm(core.pitch_um);
  const field = fieldOf(map);
  const units = new Float64Array(names.length);
  const ppm = new Float64Array(names.length);
  cells.forEach((line, row) =>
    line.forEach((name, column) => {
      const k = indexOf.get(name);
      if (k === undefined) return;
      units[k] += 1;
      ppm[k] += field(HALF_NM * offset2(column, core.columns) * px, -HALF_NM * offset2(row, core.rows) * py);
    }),
  );
  const W = weight.reduce((sum, w) => sum + w, 0);
  const all = units.reduce((sum, n) => sum + n, 0);
  const allPpm = ppm.reduce((sum, p) => sum + p, 0);
  // c_k W / sum c - w_k, with what the numbers of units alone give (0 where they are the weights) kept apart from the small rest.
  const errors = weight.map(
    (w, k) => (units[k] * W - w * all + PPM * (ppm[k] * W - w * allPpm)) / (all + PPM * allPpm),
  );
  const inl_lsb = errors.reduce((sum, e) => sum + Math.max(0, e), 0);
  const positive = names.filter((_, k) => errors[k] > 0);
  const negative = names.filter((_, k) => errors[k] < 0);
  const highest = (list: readonly string[]): number => Math.max(-1, ...list.map((name) => names.indexOf(name)));
  const steps = stepsOf(weight, [errors]);
  let dnl = 0;
  if (steps) {
    const {
      points: [at],
      groups,
    } = steps;
    for (let group = 0; group < groups.length; group += 4)
      for (let a = groups[group]; a < groups[group + 1]; a++)
        for (let b = groups[group + 2]; b < groups[group + 3]; b++) dnl = Math.max(dnl, Math.abs(at[b] - at[a]));
  }
  return {
    inl_lsb,
    ...(steps && { dnl_lsb: dnl }),
    // Of the two complementary codes that reach it the smaller number: the one without the largest bit.
    ...(inl_lsb > 0 && { worstCode: highest(positive) < highest(negative) ? positive : negative }),
  };
}
