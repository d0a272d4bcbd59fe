import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { checkPolygons } from '../../src/check/polygons.js';
import type { Polygon } from '../../src/core/layout.js';
import { Infeasible } from '../../src/core/problem.js';
import { outline } from '../../src/core/rectangle.js';
import { writeAbstract } from '../../src/export/lef.js';
import { writeCapacitorNetlist } from '../../src/export/spice.js';
import { parseTechnology } from '../../src/spec/parse-technology.js';
import type { Polygons } from '../../src/spec/polygons.js';
import type { Technology } from '../../src/spec/technology.js';
import { drawn, type Given, template } from '../pipeline/drawn.js';

/** The keys that templates/README.md shows. */
const shown = JSON.parse(
  /<!-- ground -->\s*```json\n([\s\S]*?)```/.exec(readFileSync('templates/README.md', 'utf8'))![1],
) as Required<Pick<Technology, 'layers' | 'vias' | 'shieldLines' | 'tieRing' | 'underlay'>>;
const firstMetal = {
  name: 'first-metal',
  lefName: 'FIRST',
  stream: { layer: 15, datatype: 0 },
  kind: 'metal',
  minWidth_um: 0.2,
  minSpacing_um: 0.2,
  height_um: 0.7,
} as const;
const viaOf = (name: string, layer: number, lower: string, upper: string) => ({
  ...shown.vias[0],
  name,
  stream: { layer, datatype: 0 },
  lower,
  upper,
});

type Ground = Partial<Pick<Technology, 'shieldLines' | 'tieRing' | 'underlay' | 'wiresUnderPlate'>>;

function textOf(name: string, ground: Ground, vias = shown.vias): string {
  const base = template(name);
  return JSON.stringify({
    ...base,
    layers: [...shown.layers, firstMetal, ...base.layers],
    vias: [...vias, viaOf('first-lower', 16, 'first-metal', 'lower-metal'), ...base.vias],
    ...ground,
  });
}

function technologyWith(name: string, ground: Ground, vias = shown.vias): Technology {
  const parsed = parseTechnology(textOf(name, ground, vias), 't');
  if (!parsed.ok) throw new Error(JSON.stringify(parsed.issues));
  return parsed.value;
}

const draw = (given: Given, technology: Technology): Polygons => {
  const { polygons, findings } = drawn({ effort: 'quick', ...given }, undefined, 1e6, technology);
  expect(findings).toEqual([]);
  return polygons!;
};

const { tieRing, underlay } = shown;
const stacked = [viaOf('first-contact', 14, 'tie-diffusion', 'first-metal')];
const metal = { layer: 'first-metal', net: 'VSS' };
const cases: Readonly<Record<string, readonly [Ground, Technology['vias']?]>> = {
  'a tie ring': [{ tieRing: { diffusion: 'tie-diffusion' } }],
  'a tie ring with an implant, a well, shield lines': [{ tieRing, underlay, shieldLines: true }],
  'a metal underlay': [{ underlay: metal }],
  'a tie ring up to a metal underlay': [{ tieRing, underlay: metal }, stacked],
  'a diffusion underlay on a net of its own': [{ underlay: { layer: 'tie-diffusion', net: 'QUIET' } }],
  'a well on a net of its own': [{ underlay: { layer: 'deep-well', net: 'QUIET', tie: 'tie-diffusion' } }],
  'shield lines': [{ shieldLines: true }],
};

describe('around and below the array, drawn without a finding', () => {
  Object.entries(cases).forEach(([what, [ground, vias]], i) =>
    ['parallel-plate', 'framed-fingers', 'named-cell'].forEach((name, j) => {
      // Each with each technology; the rest goes round.
      const given = {
        bits: 3 + ((i + j) % 3),
        rings: (i + 2 * j) % 3,
        pins: { bits: { side: (i + j) % 2 === 0 ? 'bottom' : 'top' }, top: { side: i % 2 === 0 ? 'top' : 'bottom' } },
      } satisfies Given;
      it(`${what}: ${name}, ${JSON.stringify(given)}`, () => {
        draw(given, technologyWith(name, ground, vias));
      });
    }),
  );

  it.each(['under-plate', 'under-fingers'])('below trunks that run under the plates: %s', (name) => {
    for (const [i, [{ shieldLines: _, ...ground }, vias]] of Object.values(cases).entries()) {
      if (Object.keys(ground).length === 0) continue;
      const side = i % 2 === 0 ? 'bottom' : 'top';
      draw({ bits: 3, rings: i % 3, pins: { bits: { side } } }, technologyWith(name, ground, vias));
    }
  });

  it('with fill dummies on VSS beside shield lines', () => {
    draw(
      { bits: 5, core: { rows: 6, columns: 6 }, fillTop: 'VSS' },
      technologyWith('parallel-plate', { shieldLines: true }),
    );
  });

  it('or refused where there is no room', () => {
    const base = technologyWith('parallel-plate', { shieldLines: true });
    const upper = base.layers.map((l) => (l.name === 'upper-metal' ? { ...l, minSpacing_um: 0.6 } : l));
    expect(() => draw({ bits: 2, tracksPerChannel: 1 }, { ...base, layers: upper })).toThrow(Infeasible);
    const broad = { ...base, shieldLines: false, tieRing: { ...tieRing, implantEnclosure_um: 1.5 } };
    expect(() => draw({ bits: 2 }, broad)).toThrow('counts as wide');
  });
});

describe('an underlay on a net of its own', () => {
  const [ground] = cases['a well on a net of its own'];
  const p = draw({ bits: 4 }, technologyWith('parallel-plate', ground));

  it('has a pin in netlist and abstract', () => {
    expect(writeCapacitorNetlist(p)).toMatch(/^\.SUBCKT cdac4 QUIET TERM B0 B1 B2 B3 VSS TOP$/m);
    expect(writeAbstract(p)).toMatch(/PIN QUIET\n {4}DIRECTION INOUT ;\n {4}USE POWER ;\n {4}PORT\n {6}LAYER LOWER ;/);
  });

  it('keeps pins on a pitch out of its way', () => {
    const technology = technologyWith('parallel-plate', ground);
    for (const pitch_um of [2, 5]) draw({ bits: 5, pins: { bits: { pitch_um } } }, technology);
  });
});

describe('planted faults', () => {
  const p = draw({ bits: 4 }, technologyWith('parallel-plate', { tieRing, underlay, shieldLines: true }));
  const streamOf = (name: string) => p.technology.layers.find((layer) => layer.name === name)!.stream;
  const isOn = (name: string) => (polygon: Polygon) => polygon.layer === streamOf(name).layer && polygon.datatype === 0;
  const without = (lost: (polygon: Polygon) => boolean): Polygons => ({
    ...p,
    structures: p.structures.map((s) => ({ ...s, polygons: s.polygons.filter((polygon) => !lost(polygon)) })),
  });
  const rules = (q: Polygons) => [...new Set(checkPolygons(q).map(({ rule }) => rule))];

  it('a well that the ring does not join is on no net', () => {
    expect(rules(without(isOn('tie-diffusion')))).toContain('floating');
  });

  it('contacts whose wire is not there', () => {
    const line = (polygon: Polygon) => polygon.part === 'ring' && isOn('lower-metal')(polygon);
    expect(rules(without(line))).toEqual(['enclosure']);
  });

  it('a shield line that its via does not join', () => {
    const lines = p.structures
      .at(-1)!
      .polygons.filter((polygon) => polygon.part === 'shield' && isOn('upper-metal')(polygon));
    expect(lines).toHaveLength(4);
    const x = (lines[1].xy[0][0] + lines[1].xy[1][0]) / 2;
    const via = p.technology.vias.find(({ name }) => name === 'plate-upper')!.stream;
    const lost = (polygon: Polygon) =>
      polygon.layer === via.layer && (polygon.xy[0][0] + polygon.xy[1][0]) / 2 === x && polygon.part === 'via';
    expect(checkPolygons(without(lost))).toMatchObject([{ rule: 'floating', layer: 'upper-metal' }]);
  });

  it('a shield line that touches a strap', () => {
    const [, line] = p.structures
      .at(-1)!
      .polygons.filter((polygon) => polygon.part === 'shield' && isOn('upper-metal')(polygon));
    const [x, y] = line.xy[2];
    const wire = { ...streamOf('upper-metal'), xy: outline({ x0: x - 400, y0: y - 400, x1: x + 4000, y1: y }) };
    const q = {
      ...p,
      structures: p.structures.map((s) => (s.name === p.topStructure ? { ...s, polygons: [...s.polygons, wire] } : s)),
    };
    expect(checkPolygons(q).find(({ rule }) => rule === 'short')?.nets).toEqual(['TOP', 'VSS']);
  });
});

describe('a template that contradicts itself', () => {
  const refused = (ground: object, vias: Technology['vias'] = shown.vias): string[] => {
    const parsed = parseTechnology(textOf('parallel-plate', ground, vias), 't');
    return parsed.ok ? [] : parsed.issues.map(({ pointer, found, wanted }) => `${pointer} | ${found} | ${wanted}`);
  };

  it.each([
    [
      { tieRing: { diffusion: 'deep-well' } },
      '/tieRing/diffusion | a layer of kind "well" | a layer of kind "diffusion"',
    ],
    [
      { tieRing: { diffusion: 'tie-difusion' } },
      '/tieRing/diffusion | "tie-difusion" | "tie-diffusion", the nearest known layer',
    ],
    [{ tieRing: { diffusion: 'tie-diffusion', implantEnclosure_um: 1 } }, '"implantEnclosure_um" without "implant"'],
    [
      { tieRing, underlay: { layer: 'deep-well', net: 'QUIET', tie: 'tie-diffusion' } },
      '/underlay/net | "QUIET" beside a tie ring',
    ],
    [{ underlay: { layer: 'deep-well', net: 'VSS' } }, '/underlay | a well that nothing joins to a wire | "tieRing"'],
    [{ underlay: { layer: 'deep-well', net: 'QUIET' } }, '/underlay | a well that nothing joins to a wire | "tie"'],
    [{ underlay: { layer: 'upper-metal', net: 'VSS' } }, '/underlay/layer | "upper-metal" at a height of 3.6 um'],
    [{ underlay: { layer: 'first-metal', net: 'QUIET' } }, '/underlay/net | "QUIET" | "VSS": wiresUnderPlate'],
    [{ underlay: { layer: 'tie-diffusion', net: 'b3' } }, '/underlay/net | "b3" | "VSS", or a name'],
    [
      { underlay: { layer: 'tie-diffusion', net: 'VSS', tie: 'tie-diffusion' } },
      '/underlay/tie | "tie-diffusion" | it only of a well',
    ],
  ])('%j', (ground, wanted) => {
    const problems = refused(ground);
    expect(problems).toHaveLength(1);
    expect(problems[0]).toContain(wanted);
  });

  it('has no via to a layer that is to be tied', () => {
    expect(refused({ tieRing }, [])[0]).toMatch('/vias | no via from "tie-diffusion" | ');
    expect(refused({ underlay: { layer: 'tie-diffusion', net: 'QUIET' } }, [])[0]).toMatch('/vias | no via between');
  });
});
