import ClipperLib from 'clipper-lib';
import type { Boxes } from '../core/boxes.js';

type Paths = { X: number; Y: number }[][];

function paths(boxes: Boxes, numbers: readonly number[]): Paths {
  return numbers.map((i) => [
    { X: boxes.x0[i], Y: boxes.y0[i] },
    { X: boxes.x1[i], Y: boxes.y0[i] },
    { X: boxes.x1[i], Y: boxes.y1[i] },
    { X: boxes.x0[i], Y: boxes.y1[i] },
  ]);
}

function combined(type: number, subject: Paths, clip: Paths): Paths {
  const nonZero = ClipperLib.PolyFillType.pftNonZero;
  const clipper = new ClipperLib.Clipper();
  clipper.AddPaths(subject, ClipperLib.PolyType.ptSubject, true);
  if (clip.length > 0) clipper.AddPaths(clip, ClipperLib.PolyType.ptClip, true);
  const solution: Paths = [];
  clipper.Execute(type, solution, nonZero, nonZero);
  return solution;
}

/** The area (nm2) that two sets of boxes have in common. Either is united first: the library errs on overlapping input. */
export function overlapArea(a: Boxes, ofA: readonly number[], b: Boxes, ofB: readonly number[]): number {
  const { ctUnion, ctIntersection } = ClipperLib.ClipType;
  const united = [paths(a, ofA), paths(b, ofB)].map((p) => (p.length > 1 ? combined(ctUnion, p, []) : p));
  // Holes run the other way round and count negative.
  return combined(ctIntersection, united[0], united[1]).reduce((sum, path) => sum + ClipperLib.Clipper.Area(path), 0);
}
