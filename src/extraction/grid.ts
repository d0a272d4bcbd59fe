/** Cells grow by this from one to the next, away from an edge of a conductor. */
const GROWTH = 1.7;

/**
 * Grid lines through all the given ones, ascending: next to each of them the cells are about `least` wide and grow from there to the middle
 * between two of them.
 * @param lines ascending, no two the same. @param openEnd the field beyond the last line but one dies away: no small cells at the last.
 * @param split into how many equal parts each of these cells is cut, so that grids of one base are nested.
 */
export function gradedLines(lines: readonly number[], least: number, openEnd: boolean, split: number): Float64Array {
  const all = [lines[0]];
  for (let i = 1; i < lines.length; i++) {
    const [from, to] = [lines[i - 1], lines[i]];
    const oneSided = openEnd && i === lines.length - 1;
    const shares = oneSided ? growing(to - from, least) : mirrored(growing((to - from) / 2, least));
    let end = from;
    shares.forEach((share, cell) => {
      const start = end;
      end = cell === shares.length - 1 ? to : start + share;
      for (let part = 1; part < split; part++) all.push(start + ((end - start) * part) / split);
      all.push(end);
    });
  }
  return Float64Array.from(all);
}

/** The fewest cells, each `GROWTH` times the one before and the first at most `least` wide, that fill a stretch. */
function growing(length: number, least: number): number[] {
  const sizes: number[] = [];
  let sum = 0;
  for (let size = least; sum < length; size *= GROWTH) {
    sizes.push(size);
    sum += size;
  }
  return sizes.map((size) => (size * length) / sum);
}

const mirrored = (sizes: readonly number[]): number[] => [...sizes, ...[...sizes].reverse()];
