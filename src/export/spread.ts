/**
 * Moves the centres of labels apart as little as possible (least squares), keeping their order: neighbours that touch are joined and
 * stand about their common mean (pool adjacent violators: Ayer, Brunk, Ewing, Reid, Silverman, Ann. Math. Statist. 26, 1955; from memory).
 *
 * @param wanted where each centre would like to stand, ascending. @param widths room that each takes. @param low @param high bounds.
 * @returns the centres, whole numbers.
 */
export function spread(wanted: readonly number[], widths: readonly number[], low: number, high: number): number[] {
  // With the labels' own room taken out the centres only have to ascend.
  const offsets: number[] = [];
  let room = 0;
  widths.forEach((width) => {
    offsets.push(room + width / 2);
    room += width;
  });
  const pools: { sum: number; count: number }[] = [];
  wanted.forEach((value, i) => {
    let pool = { sum: value - (offsets[i] ?? 0), count: 1 };
    for (let last = pools.at(-1); last && last.sum / last.count > pool.sum / pool.count; last = pools.at(-1)) {
      pool = { sum: pool.sum + last.sum, count: pool.count + last.count };
      pools.pop();
    }
    pools.push(pool);
  });
  const centres = pools.flatMap(({ sum, count }) => Array.from({ length: count }, () => sum / count));
  return centres.map((value, i) => Math.round(Math.max(low, Math.min(value, high - room)) + (offsets[i] ?? 0)));
}
