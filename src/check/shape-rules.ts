import type { Boxes } from '../core/boxes.js';
import { BoxIndex } from '../core/boxes.js';
import { componentsOf } from '../core/components.js';
import { nm } from '../core/units.js';
import type { Layer } from '../spec/technology.js';
import type { Boundary, Corners, Quadrants } from './boundary.js';
import { boundaryOf, common } from './boundary.js';
import type { Faces } from './distances.js';
import { closeFaces, indexed } from './distances.js';
import type { Finding } from './finding.js';
import { lengthUm, placeUm } from './finding.js';
import { openingBy } from './opening.js';
import { surroundingsOf } from './surroundings.js';

/** Across the exterior: tops look up at bottoms, and a convex corner looks away from its own quadrant. */
const outward = (b: Boundary, convex: Quadrants<Corners> = b.convex): Faces => ({
  up: b.top,
  down: b.bottom,
  right: b.right,
  left: b.left,
  corners: [convex[2], convex[3], convex[0], convex[1]],
});

/** Across the interior: bottoms look up at tops, and a reflex corner looks away from the quadrant that it leaves free. */
const inward = (b: Boundary): Faces => ({
  up: b.bottom,
  down: b.top,
  right: b.left,
  left: b.right,
  corners: [b.reflex[2], b.reflex[3], b.reflex[0], b.reflex[1]],
});

function spacing(b: Boundary, layer: string, limit: number): Finding[] {
  const findings: Finding[] = [];
  const faces = indexed(outward(b));
  closeFaces(faces, faces, limit, (x, y, squared) => {
    const found = lengthUm(Math.sqrt(squared));
    const text =
      squared === 0 ? 'shapes meet at a corner only' : `gap of ${found} um, at least ${limit / 1000} um wanted`;
    findings.push({ rule: 'spacing', layer, at_um: placeUm(x, y), found_um: found, limit_um: limit / 1000, text });
  });
  return findings;
}

function width(b: Boundary, layer: string, limit: number): Finding[] {
  const findings: Finding[] = [];
  const faces = indexed(inward(b));
  closeFaces(faces, faces, limit, (x, y, squared) => {
    if (squared === 0) return; // met at a corner only: a spacing
    const found = lengthUm(Math.sqrt(squared));
    const text = `width of ${found} um, at least ${limit / 1000} um wanted`;
    findings.push({ rule: 'width', layer, at_um: placeUm(x, y), found_um: found, limit_um: limit / 1000, text });
  });
  return findings;
}

/** The corners that do not look into the region itself, as they do where an arm of it goes on along a side of the wide part. */
function free(corners: Corners, slabs: Boxes, index: BoxIndex, dx: 0 | 1, dy: 0 | 1): Corners {
  const x: number[] = [];
  const y: number[] = [];
  for (let i = 0; i < corners.x.length; i++) {
    // The square nanometre that the corner looks into.
    const px = corners.x[i] - 1 + dx;
    const py = corners.y[i] - 1 + dy;
    const covers = (j: number) => slabs.x0[j] <= px && px < slabs.x1[j] && slabs.y0[j] <= py && py < slabs.y1[j];
    if (index.search(px, py, px + 1, py + 1).some(covers)) continue;
    x.push(corners.x[i]);
    y.push(corners.y[i]);
  }
  return { x: Int32Array.from(x), y: Int32Array.from(y) };
}

/** Gaps that are wide enough for any two shapes but not beside a part in which a square of side `from` fits. */
function wideSpacing(slabs: Boxes, b: Boundary, layer: string, plain: number, from: number, limit: number): Finding[] {
  const wide = boundaryOf(openingBy(from, slabs));
  const index = new BoxIndex(slabs);
  // Only what is boundary of the shape itself looks at others: where an arm leaves the wide part, nothing does.
  const faces = outward(
    {
      ...b,
      left: common(wide.left, b.left),
      right: common(wide.right, b.right),
      bottom: common(wide.bottom, b.bottom),
      top: common(wide.top, b.top),
    },
    [
      free(wide.convex[0], slabs, index, 0, 0),
      free(wide.convex[1], slabs, index, 1, 0),
      free(wide.convex[2], slabs, index, 1, 1),
      free(wide.convex[3], slabs, index, 0, 1),
    ],
  );
  const all = outward(b);
  const findings: Finding[] = [];
  const see = (x: number, y: number, squared: number) => {
    if (squared < plain * plain) return; // a gap too small for any shape, reported as such
    const found = lengthUm(Math.sqrt(squared));
    findings.push({
      rule: 'spacing',
      layer,
      at_um: placeUm(x, y),
      found_um: found,
      limit_um: limit / 1000,
      text: `gap of ${found} um beside a shape ${from / 1000} um wide or wider, at least ${limit / 1000} um wanted`,
    });
  };
  closeFaces(faces, indexed(all), limit, see);
  closeFaces(all, indexed(faces), limit, see);
  return findings;
}

/** Calls for each connected shape with its area (nm2) and the middle of its first slab. */
function eachShape(
  slabs: Boxes,
  visit: (area: number, x: number, y: number, slabsOfShape: readonly number[]) => void,
): void {
  const shapes = componentsOf(slabs);
  const members: number[][] = Array.from({ length: shapes.count }, () => []);
  for (let i = 0; i < slabs.x0.length; i++) members[shapes.of[i]].push(i);
  for (const own of members) {
    let area = 0;
    for (const i of own) area += (slabs.x1[i] - slabs.x0[i]) * (slabs.y1[i] - slabs.y0[i]);
    const first = own[0];
    visit(area, (slabs.x0[first] + slabs.x1[first]) / 2, (slabs.y0[first] + slabs.y1[first]) / 2, own);
  }
}

function area(slabs: Boxes, layer: string, limit_um2: number): Finding[] {
  const limit = Math.round(limit_um2 * 1e6);
  const findings: Finding[] = [];
  eachShape(slabs, (found, x, y) => {
    const text = `area of ${found / 1e6} um2, at least ${limit_um2} um2 wanted`;
    if (found < limit) findings.push({ rule: 'area', layer, at_um: placeUm(x, y), text });
  });
  return findings;
}

function enclosedArea(slabs: Boxes, layer: string, limit_um2: number): Finding[] {
  const limit = Math.round(limit_um2 * 1e6);
  const findings: Finding[] = [];
  const around = surroundingsOf(slabs);
  eachShape(around.slabs, (found, x, y, own) => {
    if (found >= limit || around.isOuter(own)) return;
    const text = `encloses ${found / 1e6} um2, at least ${limit_um2} um2 wanted`;
    findings.push({ rule: 'enclosed-area', layer, at_um: placeUm(x, y), text });
  });
  return findings;
}

function maxWidth(slabs: Boxes, layer: string, limit: number): Finding[] {
  const findings: Finding[] = [];
  eachShape(openingBy(limit + 1, slabs), (_, x, y) =>
    findings.push({
      rule: 'max-width',
      layer,
      at_um: placeUm(x, y),
      limit_um: limit / 1000,
      text: `wider than ${limit / 1000} um both ways`,
    }),
  );
  return findings;
}

/** Rules of one layer on its merged shapes, whatever their nets. `slabs` is the union of the layer (`unitedSlabs`). */
export function checkShapes(slabs: Boxes, layer: Layer): Finding[] {
  const { name } = layer;
  const boundary = boundaryOf(slabs);
  const plain = nm(layer.minSpacing_um ?? 0);
  const { minWidth_um, wideFrom_um, wideSpacing_um, maxWidth_um, minArea_um2, minEnclosedArea_um2 } = layer;
  return [
    minWidth_um === undefined ? [] : width(boundary, name, nm(minWidth_um)),
    plain === 0 ? [] : spacing(boundary, name, plain),
    wideFrom_um === undefined || wideSpacing_um === undefined
      ? []
      : wideSpacing(slabs, boundary, name, plain, nm(wideFrom_um), nm(wideSpacing_um)),
    maxWidth_um === undefined ? [] : maxWidth(slabs, name, nm(maxWidth_um)),
    minArea_um2 === undefined ? [] : area(slabs, name, minArea_um2),
    minEnclosedArea_um2 === undefined ? [] : enclosedArea(slabs, name, minEnclosedArea_um2),
  ].flat();
}

/** Spacing alone, for the shapes of a via layer. */
export const checkViaSpacing = (slabs: Boxes, via: string, limit: number): Finding[] =>
  spacing(boundaryOf(slabs), via, limit).map((finding) => ({ ...finding, rule: 'via-spacing' }));
