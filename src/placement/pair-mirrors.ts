import type { Core } from '../spec/floorplan.js';

/**
 * Where a reflected pair goes when its core is mirrored left to right, and, where rows and columns and both pitches are alike, about its
 * diagonals too: image[pair], a pair being called by its lower cell. A point-reflected placement and its images have one second order.
 */
export function pairMirrors({ rows, columns, pitch_um }: Core): Int32Array[] {
  const last = rows * columns - 1;
  const mirror = (to: (row: number, column: number) => number): Int32Array =>
    Int32Array.from({ length: last / 2 }, (_, cell) => {
      const image = to(Math.floor(cell / columns), cell % columns);
      return Math.min(image, last - image);
    });
  const flipped = (row: number, column: number): number => row * columns + columns - 1 - column;
  if (rows !== columns || pitch_um[0] !== pitch_um[1]) return [mirror(flipped)];
  const turned = (row: number, column: number): number => column * columns + row;
  return [mirror(flipped), mirror(turned), mirror((row, column) => turned(row, columns - 1 - column))];
}

/**
 * Whether no image of these sets of pairs comes before them, in the order of their sorted lists. Of placements that are images of each
 * other one is enough, and what begins with sets that have a lesser image has one too.
 */
export function isLeastImage(sets: readonly (readonly number[])[], mirrors: readonly Int32Array[]): boolean {
  const sorted = (set: readonly number[]): number[] => [...set].sort((a, b) => a - b);
  const own = sets.flatMap(sorted);
  return mirrors.every((image) => {
    const other = sets.flatMap((set) => sorted(set.map((pair) => image[pair])));
    const at = own.findIndex((pair, i) => pair !== other[i]);
    return at < 0 || own[at] < other[at];
  });
}
