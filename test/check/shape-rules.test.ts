import { describe, expect, it } from 'vitest';
import { openingBy } from '../../src/check/opening.js';
import { checkShapes } from '../../src/check/shape-rules.js';
import { Random } from '../../src/core/random.js';
import { unitedSlabs } from '../../src/core/slabs.js';
import type { Layer } from '../../src/spec/technology.js';
import { boxesFrom, covers, randomBoxes } from '../core/boxes.js';

// Everything here is counted square nanometre by square nanometre, on small random sets of boxes.

const side = 18;
type Raster = (x: number, y: number) => boolean;

function rasterOf(boxes: ReturnType<typeof randomBoxes>): Raster {
  const filled = new Uint8Array(side * side);
  for (let y = 0; y < side; y++)
    for (let x = 0; x < side; x++)
      for (let i = 0; i < boxes.x0.length; i++) if (covers(boxes, i, x, y)) filled[y * side + x] = 1;
  return (x, y) => x >= 0 && y >= 0 && x < side && y < side && filled[y * side + x] === 1;
}

interface Sight {
  /** Accepts one of the two ends, either way round. */
  readonly from?: Raster;
  /** Two squares that meet at a corner count. */
  readonly corners?: boolean;
  /** What may stand beside an end of this kind without hiding what it sees over it: an arm in line with its side. */
  readonly beside?: Raster;
}

/**
 * The least squared distance below `limit` at which two squares of the raster see each other: along a row or a column with nothing but
 * `gap` between them, or diagonally with nothing else in the box that they span.
 */
function closest(solid: Raster, gap: Raster, limit: number, sight: Sight = {}): number {
  const { from = solid, corners = true, beside = gap } = sight;
  let least = Infinity;
  const see = (squared: number) => {
    if (squared < limit * limit) least = Math.min(least, squared);
  };
  /** Whether an end of the kind `from` at x, y sees another end diagonally. */
  const sees = (x: number, y: number, ex: number, ey: number): boolean => {
    const [right, up] = [Math.sign(ex - x), Math.sign(ey - y)];
    if (!beside(x + right, y) || !beside(x, y + up) || !gap(ex - right, ey) || !gap(ex, ey - up)) return false;
    for (let v = y; v !== ey + up; v += up)
      for (let u = x; u !== ex + right; u += right) {
        const own = beside !== gap && (u === x || v === y);
        const end = (u === x && v === y) || (u === ex && v === ey);
        if (!own && !end && !gap(u, v)) return false;
      }
    return true;
  };
  for (let y = -1; y <= side; y++)
    for (let x = -1; x <= side; x++) {
      if (!solid(x, y)) continue;
      for (const [dx, dy] of [
        [1, 0],
        [0, 1],
      ]) {
        let length = 1;
        while (length <= limit && gap(x + dx * length, y + dy * length)) length++;
        const [ex, ey] = [x + dx * length, y + dy * length];
        if (length > 1 && solid(ex, ey) && (from(x, y) || from(ex, ey))) see((length - 1) * (length - 1));
      }
      for (const right of [1, -1])
        for (let up = 1; up <= limit; up++)
          for (let along = 1; along <= limit; along++) {
            const [ex, ey] = [x + right * along, y + up];
            if (!solid(ex, ey) || !(corners || along + up > 2)) continue;
            if ((from(x, y) && sees(x, y, ex, ey)) || (from(ex, ey) && sees(ex, ey, x, y)))
              see((along - 1) * (along - 1) + (up - 1) * (up - 1));
          }
    }
  return least;
}

const layer = (rules: Partial<Layer>): Layer => ({
  name: 'metal',
  stream: { layer: 1, datatype: 0 },
  kind: 'metal',
  ...rules,
});

function* samples(count: number): Generator<{ readonly seed: number; readonly boxes: ReturnType<typeof randomBoxes> }> {
  for (let seed = 1; seed <= count; seed++) yield { seed, boxes: randomBoxes(new Random(seed), 2 + (seed % 7), side) };
}

const leastFound = (found: readonly { readonly found_um?: number }[]): number =>
  found.reduce((least, finding) => Math.min(least, finding.found_um!), Infinity);

/** As a finding shows it: micrometres, cut after tenths of nanometres. */
const shown = (squared: number) => (squared === Infinity ? Infinity : Math.floor(Math.sqrt(squared) * 10) / 10000);

describe('rules of a layer agree with counting squares', () => {
  it('spacing: gaps, notches and corners', () => {
    const limit = 4;
    for (const { seed, boxes } of samples(800)) {
      const solid = rasterOf(boxes);
      const findings = checkShapes(unitedSlabs(boxes), layer({ minSpacing_um: limit / 1000 }));
      const wanted = closest(solid, (x, y) => !solid(x, y), limit);
      expect(leastFound(findings), `seed ${seed}`).toBe(shown(wanted));
      expect(findings.every((finding) => finding.rule === 'spacing')).toBe(true);
    }
  });

  it('width: arms and necks', () => {
    const limit = 4;
    for (const { seed, boxes } of samples(800)) {
      const solid = rasterOf(boxes);
      const findings = checkShapes(unitedSlabs(boxes), layer({ minWidth_um: limit / 1000 }));
      // Across the interior; two squares of exterior that meet at a corner bound no width.
      const empty: Raster = (x, y) => !solid(x, y);
      const wanted = closest(empty, solid, limit, { corners: false });
      expect(leastFound(findings), `seed ${seed}`).toBe(shown(wanted));
      expect(findings.every((finding) => finding.rule === 'width')).toBe(true);
    }
  });

  it('wide spacing: beside the part in which a square fits, where no plain gap is too small', () => {
    const [plain, from, limit] = [2, 5, 5];
    let tried = 0;
    let wide = 0;
    for (const { seed, boxes } of samples(4000)) {
      const solid = rasterOf(boxes);
      const gap: Raster = (x, y) => !solid(x, y);
      if (closest(solid, gap, plain) < Infinity) continue;
      const rules = { minSpacing_um: plain / 1000, wideFrom_um: from / 1000, wideSpacing_um: limit / 1000 };
      const findings = checkShapes(unitedSlabs(boxes), layer(rules));
      const opened = rasterOf(openingBy(from, unitedSlabs(boxes)));
      const wanted = closest(solid, gap, limit, { from: opened, beside: (x, y) => !opened(x, y) });
      tried++;
      if (wanted < Infinity) wide++;
      expect(leastFound(findings), `seed ${seed}`).toBe(shown(wanted));
    }
    expect(tried).toBeGreaterThan(300);
    expect(wide).toBeGreaterThan(100);
  });

  it('opening: the squares that a larger square within the shape covers', () => {
    for (const { seed, boxes } of samples(300)) {
      const solid = rasterOf(boxes);
      const by = 2 + (seed % 5);
      const opened = rasterOf(openingBy(by, unitedSlabs(boxes)));
      const wrong: string[] = [];
      const fits = (x: number, y: number) => {
        for (let v = 0; v < by; v++) for (let u = 0; u < by; u++) if (!solid(x + u, y + v)) return false;
        return true;
      };
      for (let y = 0; y < side; y++)
        for (let x = 0; x < side; x++) {
          let inside = false;
          for (let v = 0; v < by; v++) for (let u = 0; u < by; u++) inside ||= fits(x - u, y - v);
          if (inside !== opened(x, y)) wrong.push(`${x}, ${y}`);
        }
      expect(wrong, `seed ${seed}`).toEqual([]);
      const tooWide = checkShapes(unitedSlabs(boxes), layer({ maxWidth_um: (by - 1) / 1000 }));
      expect(tooWide.length > 0).toBe(
        Array.from({ length: side * side }, (_, i) => opened(i % side, Math.floor(i / side))).includes(true),
      );
    }
  });

  it('area of each shape and of each hole', () => {
    const limit = 12;
    for (const { seed, boxes } of samples(400)) {
      const solid = rasterOf(boxes);
      const rules = { minArea_um2: limit / 1e6, minEnclosedArea_um2: limit / 1e6 };
      const findings = checkShapes(unitedSlabs(boxes), layer(rules));
      const small = (region: Raster, closed: boolean) =>
        floods(region).filter((flood) => flood.area < limit && !(closed && flood.border)).length;
      const count = (rule: string) => findings.filter((finding) => finding.rule === rule).length;
      expect(count('area'), `seed ${seed}`).toBe(small(solid, false));
      expect(count('enclosed-area'), `seed ${seed}`).toBe(small((x, y) => !solid(x, y), true));
    }
  });
});

/** Regions that hang together by sides of squares, with their areas, and whether they reach the border of the raster. */
function floods(region: Raster): { readonly area: number; readonly border: boolean }[] {
  const seen = new Set<string>();
  const result: { area: number; border: boolean }[] = [];
  for (let y = -1; y <= side; y++)
    for (let x = -1; x <= side; x++) {
      if (!region(x, y) || seen.has(`${x} ${y}`)) continue;
      const open = [[x, y]];
      seen.add(`${x} ${y}`);
      const flood = { area: 0, border: false };
      while (open.length > 0) {
        const [px, py] = open.pop()!;
        flood.area++;
        if (px < 0 || py < 0 || px >= side || py >= side) flood.border = true;
        for (const [nx, ny] of [
          [px + 1, py],
          [px - 1, py],
          [px, py + 1],
          [px, py - 1],
        ]) {
          if (nx < -1 || ny < -1 || nx > side || ny > side || !region(nx, ny) || seen.has(`${nx} ${ny}`)) continue;
          seen.add(`${nx} ${ny}`);
          open.push([nx, ny]);
        }
      }
      result.push(flood);
    }
  return result;
}

it('a gap exactly as wide as wanted, and one a nanometre less', () => {
  const at = (gap: number) =>
    unitedSlabs(
      boxesFrom([
        [0, 0, 300, 300],
        [300 + gap, 300 + gap, 600 + gap, 600 + gap],
      ]),
    );
  // 283 nm both ways is 400.2 nm, 282 nm is 398.8 nm.
  expect(checkShapes(at(283), layer({ minSpacing_um: 0.4 }))).toEqual([]);
  expect(checkShapes(at(282), layer({ minSpacing_um: 0.4 }))).toEqual([
    {
      rule: 'spacing',
      layer: 'metal',
      at_um: [0.441, 0.441],
      found_um: 0.3988,
      limit_um: 0.4,
      text: 'gap of 0.3988 um, at least 0.4 um wanted',
    },
  ]);
});
