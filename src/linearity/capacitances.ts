import { stepsOf } from './steps.js';

/**
 * The errors that capacitances have besides gain, LSB: e_k = c_k W / (sum c) - w_k. By the end-point fit INL(D) = sum d_k e_k, without
 * approximation; they add up to 0.
 * @param capacitance of each bit, in any unit
 */
function endPointErrors(weight: readonly number[], capacitance: readonly number[]): number[] {
  const sum = (values: readonly number[]) => values.reduce((all, value) => all + value, 0);
  const gain = sum(weight) / sum(capacitance);
  return capacitance.map((c, k) => gain * c - weight[k]);
}

/**
 * INL and DNL of bits as their capacitances came out: the largest |sum d_k e_k| takes all errors of one sign, 1/2 sum |e_k|; DNL over the
 * steps of `stepsOf`, absent where there are none.
 */
export function linearityOf(
  weight: readonly number[],
  capacitance: readonly number[],
): { readonly inl_lsb: number; readonly dnl_lsb?: number } {
  const ascending = [...weight.keys()].sort((a, b) => weight[a] - weight[b]);
  const w = ascending.map((k) => weight[k]);
  const errors = endPointErrors(
    w,
    ascending.map((k) => capacitance[k]),
  );
  const inl_lsb = errors.reduce((sum, e) => sum + Math.abs(e), 0) / 2;
  const steps = stepsOf(w, [errors]);
  if (steps === undefined) return { inl_lsb };
  const {
    points: [point],
    groups,
  } = steps;
  let dnl_lsb = 0;
  for (let group = 0; group < groups.length; group += 4)
    for (let a = groups[group]; a < groups[group + 1]; a++)
      for (let b = groups[group + 2]; b < groups[group + 3]; b++)
        dnl_lsb = Math.max(dnl_lsb, Math.abs(point[b] - point[a]));
  return { inl_lsb, dnl_lsb };
}
