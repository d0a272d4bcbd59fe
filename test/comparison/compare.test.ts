import { describe, expect, it } from 'vitest';
import { compare } from '../../src/comparison/compare.js';
import type { Candidate } from '../../src/comparison/compare.js';
import { comparedFigures } from '../../src/comparison/figures.js';
import { saddleDirection, shapeInWords } from '../../src/comparison/wording.js';
import { InputError } from '../../src/core/problem.js';
import { analyseGradient } from '../../src/linearity/analyse-gradient.js';
import { comparisonLength } from '../../src/linearity/correlation.js';
import { placementSigma } from '../../src/linearity/mismatch.js';
import { placeByRule } from '../../src/placement/published-rules.js';
import type { Floorplan } from '../../src/spec/floorplan.js';
import { plan } from '../linearity/brute-force.js';

const bare = (name: string, rows: string[], pitch_um: [number, number] = [1, 1]): Floorplan => ({
  format: 'steelyard/floorplan',
  version: 1,
  name,
  ...plan(rows, { B0: 1, B1: 2, B2: 4, B3: 8 }, pitch_um),
});
const tidy = (name: string) => bare(name, ['B3 B3 B3 B3 B3', 'B2 B1 B0 B1 B2', 'B2 B3 B3 B3 B2']);
const centred = (name: string) => bare(name, ['B3 B2 B3 B1 B3', 'B2 B3 B0 B3 B2', 'B3 B1 B3 B2 B3'], [7.2, 5.7]);
const only = (...floorplans: Floorplan[]): Candidate[] => floorplans.map((floorplan) => ({ floorplan }));
const hookup = { columnNets: 12, trunks: 12 };

describe('the figures of a comparison', () => {
  it('are those of each floorplan, all on the pitch and the correlation length of the first one', () => {
    const [a, b] = [centred('a'), placeByRule('spiral', 4, [1, 1])];
    const { floorplans, pitch_um, correlationLength_um } = compare(only(a, b));
    expect(pitch_um).toEqual([7.2, 5.7]);
    expect(correlationLength_um).toBeCloseTo(comparisonLength([7.2, 5.7]), 9);
    [a, b].forEach((floorplan, i) => {
      const core = { ...floorplan.core, pitch_um: [7.2, 5.7] as const };
      const { first, second } = analyseGradient({ ...floorplan, core });
      const found = floorplans[i];
      expect(found.core).toEqual(core);
      expect(found.gradient.first.inl_lsb_per_ppm_per_um).toBeCloseTo(first.inl_lsb_per_ppm_per_um, 15);
      expect(found.gradient.second.dnl_lsb).toBeCloseTo(second.dnl_lsb ?? NaN, 12);
      const sigma = placementSigma({ ...floorplan, core }, comparisonLength([7.2, 5.7]));
      expect(found.mismatch.placement.inlSigma_perUnitSigma).toBeCloseTo(sigma.inlSigma_perUnitSigma, 11);
      expect(found).not.toHaveProperty('area_um2');
    });
    expect(floorplans.map((each) => each.hookup)).toEqual([{ columnNets: 12 }, { columnNets: 9 }]);
  });

  it('take the pitch of the first that is drawn, one given, or leave each its own', () => {
    const [a, b] = [tidy('a'), centred('b')];
    const second = { floorplan: b, drawn: { hookup, area_um2: 1234.5 } };
    expect(compare([{ floorplan: a }, second]).pitch_um).toEqual([7.2, 5.7]);
    expect(compare([{ floorplan: a }, second], { pitch: [3, 4] }).floorplans.map(({ core }) => core.pitch_um)).toEqual([
      [3, 4],
      [3, 4],
    ]);
    const own = compare([{ floorplan: a }, second], { pitch: 'own' });
    expect(own).not.toHaveProperty('pitch_um');
    expect(own.floorplans.map(({ core }) => core.pitch_um)).toEqual([[1, 1], [7.2, 5.7]]); // prettier-ignore
    // One length in um for both: what stands wider is less alike.
    expect(own.correlationLength_um).toBeCloseTo(comparisonLength([7.2, 5.7]), 9);
    expect(own.floorplans[1].area_um2).toBe(1234.5);
    expect(own.floorplans[1].hookup).toEqual(hookup);
  });

  it('cost a wider channel what it costs in mismatch at one correlation length', () => {
    const [narrow, wide] = [
      centred('narrow'),
      { ...centred('wide'), core: { rows: 3, columns: 5, pitch_um: [9, 5.7] as const } },
    ];
    const { floorplans, dominates, sentences } = compare(only(narrow, wide), {
      pitch: 'own',
      correlationLength_um: 60,
    });
    const [a, b] = floorplans.map(({ mismatch }) => mismatch.placement.inlSigma_perUnitSigma);
    expect(b).toBeGreaterThan(a * 1.05);
    expect(dominates).toEqual([['narrow', 'wide']]);
    expect(sentences).toHaveLength(1);
  });

  it('include a measured map', () => {
    const map = Array.from({ length: 15 }, (_, i) => ({
      x_um: (i % 5) - 2,
      y_um: 1 - Math.floor(i / 5),
      ppm: 1000 * Math.floor(i / 5),
    }));
    const { floorplans, best } = compare(only(tidy('a'), centred('b')), { pitch: [1, 1], map });
    // In rows the deviation of B3 is that of its rows: 5 x 0 + 3 x 2000 ppm; the others of 7 units have 3 x 1000 + 2 x 1000 + 2 x 2000.
    const [b3, rest] = [8 + 6e-3, 7 + 9e-3];
    expect(floorplans[0].gradient.map?.inl_lsb).toBeCloseTo(Math.abs((b3 * 15) / (b3 + rest) - 8), 11);
    expect(floorplans[1].gradient.map?.inl_lsb).toBeLessThan(1e-12);
    expect(best['gradient.map.inl_lsb']).toBe('b');
  });
});

describe('who is better', () => {
  it('is whoever is worse in nothing that decides and better somewhere', () => {
    const { dominates, best, floorplans } = compare(
      only(tidy('tidy'), centred('centred'), placeByRule('row-by-row', 4, [1, 1])),
    );
    const keys = comparedFigures.filter(({ decides }) => decides);
    for (const a of floorplans)
      for (const b of floorplans) {
        const pairs = keys.map(({ of }) => [of(a) ?? 0, of(b) ?? 0]);
        const wanted = pairs.every(([x, y]) => x <= y) && pairs.some(([x, y]) => x < y);
        expect([a.name, b.name, dominates.some(([x, y]) => x === a.name && y === b.name)]).toEqual([
          a.name,
          b.name,
          wanted,
        ]);
      }
    expect(best['gradient.first.inl_lsb_per_ppm_per_um']).toBe('centred');
    for (const { key, of } of comparedFigures) {
      const values = floorplans.flatMap((each) => of(each) ?? []);
      if (values.length === 0) expect(best).not.toHaveProperty([key]);
      else expect(of(floorplans.find(({ name }) => name === best[key]) ?? floorplans[0])).toBe(Math.min(...values));
    }
  });

  it('counts the area where both are drawn', () => {
    const with_ = (area_um2: number, name: string) => ({
      floorplan: centred(name),
      drawn: { hookup: { columnNets: 12 }, area_um2 },
    });
    expect(compare([with_(10, 'a'), with_(11, 'b')]).dominates).toEqual([['a', 'b']]);
    expect(compare([with_(10, 'a'), { floorplan: centred('b') }]).dominates).toEqual([]);
  });

  it('is nobody among mirrored and turned copies', () => {
    const floorplan = placeByRule('chessboard', 6, [1, 1]);
    const mirrored = { ...floorplan, cells: floorplan.cells.map((line) => [...line].reverse()) };
    const { dominates, sentences } = compare(only(floorplan, mirrored));
    expect(dominates).toEqual([]);
    expect(sentences).toEqual([
      'Neither of chessboard_6 and chessboard_6_2 dominates the other: they are equal in every figure that decides.',
    ]);
  });
});

describe('sentences', () => {
  it('say who dominates whom and why', () => {
    const { sentences } = compare(only(tidy('by_hand'), centred('better')), { pitch: [1, 1] });
    expect(sentences).toHaveLength(1);
    expect(sentences[0]).toMatch(
      /^Neither of by_hand and better dominates the other: by_hand has the least column nets; better has/,
    );
    const rows = compare(only(placeByRule('row-by-row', 6, [1, 1]), placeByRule('chessboard', 6, [1, 1])));
    expect(rows.dominates).toEqual([['chessboard_6', 'row_by_row_6']]);
    expect(rows.sentences[0]).toMatch(
      /^chessboard_6 dominates row_by_row_6: first order INL 1\.32e-5 against 6\.225e-5 LSB per ppm\/um, worst along 88\.36 degrees with B0, B1, B2, B3 and B4 on; second order INL .*, worst under a saddle along .* degrees with B.* on; sigma INL 1\.797 against 8\.122 per unit sigma; sigma DNL 2\.452 against 16\.24 per unit sigma; column nets 21 against 31\.$/,
    );
  });

  it('leave out what follows from two others', () => {
    const area = (area_um2: number, name: string) => ({
      floorplan: centred(name),
      drawn: { hookup: { columnNets: 12 }, area_um2 },
    });
    const { dominates, sentences } = compare([area(3, 'c'), area(1, 'a'), area(2, 'b')]);
    expect(dominates).toEqual([['a', 'c'], ['a', 'b'], ['b', 'c']]); // prettier-ignore
    expect(sentences).toEqual([
      'a dominates b: area 1 against 2 um2.',
      'b dominates c: area 2 against 3 um2.',
      'a dominates all others.',
    ]);
  });

  it('are none for one floorplan', () => {
    expect(compare(only(tidy('a'))).sentences).toEqual([]);
  });

  it('name shapes as they lie', () => {
    expect(shapeInWords({ xx: 1, xy: 0, yy: 1 })).toBe('a bowl');
    for (const degrees of [0, 20, 45, 100, 179]) {
      const angle = (degrees * Math.PI) / 90;
      const shape = { xx: Math.cos(angle), xy: Math.sin(angle), yy: -Math.cos(angle) };
      expect(saddleDirection(shape)).toBeCloseTo(degrees, 9);
    }
  });
});

describe('what cannot be compared', () => {
  it('is arrays of other weights: each is named', () => {
    const other = placeByRule('spiral', 6, [1, 1]);
    try {
      compare(only(tidy('a'), other, centred('b')));
      expect.unreachable();
    } catch (error) {
      expect(error).toBeInstanceOf(InputError);
      expect((error as InputError).problems).toEqual([
        { pointer: '/floorplans/1', found: 'weights 1 2 4 8 16 32', wanted: 'those of the first floorplan, 1 2 4 8' },
      ]);
    }
  });

  it('is not names: equal ones are told apart', () => {
    const { floorplans } = compare(only(tidy('a'), tidy('a_2'), tidy('a'), tidy('a')));
    expect(floorplans.map(({ name }) => name)).toEqual(['a', 'a_2', 'a_3', 'a_4']);
  });
});
