import { readFileSync, readdirSync } from 'node:fs';
import { beforeAll, describe, expect, it } from 'vitest';
import { findingLines } from '../../src/cli/summary.js';
import type { Finding } from '../../src/index.js';
import { changed } from '../spec/kiln4.js';
import { hostileRun, outcomeOf, soundFiles } from './hostile-runs.js';

let files: ReadonlyMap<string, string>;
beforeAll(async () => {
  files = await soundFiles();
});

// The bench runs thousands of them: npm run bench -- hostile.
describe('damaged files and command lines', () => {
  it.each(Array.from({ length: 10 }, (_, batch) => batch))('runs %i0 and on do no harm', async (batch) => {
    for (let run = 30 * batch; run < 30 * (batch + 1); run++) {
      const hostile = hostileRun(files, 1, run);
      const { faults } = await outcomeOf(hostile);
      expect({ run, argv: hostile.argv, faults }).toEqual({ run, argv: hostile.argv, faults: [] });
    }
  });
});

interface Fixture {
  /** What happened before it was mended. */
  readonly was: string;
  readonly argv: readonly string[];
  readonly changed?: { readonly file: string; readonly at: readonly (string | number)[]; readonly value: unknown };
  /** So many squares on top of each other in p.json. */
  readonly heap?: number;
  readonly code: number;
  readonly says: string;
}

/** The drawing with nothing in it but one square on the metal of the trunks, again and again. */
function heap(count: number): string {
  const drawing = JSON.parse(files.get('p.json') ?? '');
  const { technology, topStructure } = drawing;
  const { stream } = technology.layers.find(({ name }: { name: string }) => name === technology.roles.trunk);
  const xy = [[0, 0], [1000, 0], [1000, 1000], [0, 1000]]; // prettier-ignore
  const polygons = Array.from({ length: count }, () => ({ ...stream, xy }));
  return JSON.stringify({ ...drawing, structures: [{ name: topStructure, polygons, references: [], labels: [] }] });
}

describe('what once did harm', () => {
  const folder = new URL('../fixtures/hostile/', import.meta.url);
  const fixtures = readdirSync(folder).map((name) => {
    const fixture = JSON.parse(readFileSync(new URL(name, folder), 'utf8')) as Fixture;
    return { name, ...fixture };
  });

  it.each(fixtures)('$name does none', async (fixture) => {
    const given = new Map(files);
    if (fixture.changed !== undefined) {
      const { file, at, value } = fixture.changed;
      given.set(file, changed(files.get(file) ?? '', at, value));
    }
    if (fixture.heap !== undefined) given.set('p.json', heap(fixture.heap));
    const bytes = new Map([...given].map(([path, text]) => [path, new TextEncoder().encode(text)]));
    const { code, err, faults } = await outcomeOf({ argv: fixture.argv, files: bytes });
    expect({ code, faults }).toEqual({ code: fixture.code, faults: [] });
    expect(err).toMatch(new RegExp(fixture.says));
  });

  it('more findings than a call takes arguments become a table', () => {
    const finding: Finding = { rule: 'width', layer: 'metal', at_um: [1, 2], text: 'too narrow' };
    const lines = findingLines(new Array<Finding>(300_000).fill(finding));
    expect(lines.length).toBe(300_000);
    expect(lines[0]).toBe('width  metal  1, 2  too narrow');
  });
});
