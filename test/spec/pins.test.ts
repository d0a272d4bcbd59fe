import { describe, expect, it } from 'vitest';
import { parsePins } from '../../src/spec/parse-pins.js';
import { linesOf } from './kiln4.js';

const known = ['B0', 'B1', 'B2', 'TERM', 'TOP', 'VSS'];
const map = (...pins: [pin: string, name: string][]): string =>
  JSON.stringify({ format: 'steelyard/pins', version: 1, pins: pins.map(([pin, name]) => ({ pin, name })) });
const problems = (text: string, among: readonly string[] | undefined = known): string[] =>
  linesOf(parsePins(text, 'p', among));
const words = 'a letter or _, then letters, digits or _, 31 at most; then perhaps an index as [3] or <3>';
const ownName = 'a name of its own for each pin, capitals and small letters taken as one';

describe('a map of pin names', () => {
  it('names some pins or all; names may change places', () => {
    expect(problems(map())).toEqual([]);
    expect(problems(map(['TOP', 'vdac'], ['VSS', 'agnd'], ['B0', 'sar_d[0]'], ['B1', 'sar_d[1]']))).toEqual([]);
    expect(problems(map(['B0', 'B1'], ['B1', 'B0']))).toEqual([]);
    expect(problems(map(['B0', 'b0'], ['B2', '_2<31>'], ['TOP', 'x'.repeat(31)]))).toEqual([]);
  });

  it('is read without knowing the array', () => {
    expect(parsePins(map(['Q7', 'B0']), 'p').ok).toBe(true);
  });

  it('is refused with all its problems at once, each at its place', () => {
    const text = map(['BO', 'x'], ['B0', 'y'], ['B0', 'z'], ['TOP', 'vss'], ['B1', 'B2'], ['TERM', '']);
    expect(problems(text)).toEqual([
      '/pins/0/pin | "BO" | "B0", the nearest known pin of this array',
      '/pins/2/pin | "B0" once more | each pin once',
      `/pins/3/name | "vss", which pin "VSS" bears | ${ownName}`,
      `/pins/4/name | "B2", which pin "B2" bears | ${ownName}`,
      `/pins/5/name | "" | ${words}`,
    ]);
    const result = parsePins(text.replaceAll('},{', '},\n{'), 'names.json', known);
    expect(result.ok ? [] : result.issues.map(({ file, line }) => `${file}:${line}`)).toEqual(
      [1, 3, 4, 5, 6].map((line) => `names.json:${line}`),
    );
  });

  it('names no two pins alike, not even in capitals and small letters', () => {
    expect(problems(map(['B0', 'sum'], ['TOP', 'Sum']))).toEqual([
      `/pins/1/name | "Sum", which pin "B0" bears | ${ownName}`,
    ]);
  });

  it.each(['gnd', 'GND', 'Ground'])('refuses %s, which simulators take for node 0', (name) => {
    expect(problems(map(['VSS', name]))).toEqual([
      `/pins/0/name | "${name}" | a name that circuit simulators do not take for node 0`,
    ]);
  });

  it('keeps to one kind of bracket', () => {
    expect(problems(map(['B0', 'd<0>'], ['B1', 'd[1]'], ['B2', 'd<2>']))).toEqual([
      '/pins/1/name | "d[1]" | an index in < >, as in "d<0>"',
    ]);
  });

  it.each(
    [
      ['0', '9a', 'a b', 'a;b', 'a\nb', 'a\n.end', '*a', '+', '$a', 'a"b', "a'b", 'a#b', 'a/b', 'a.b', 'a,b', 'µ', 'é'],
      ['a[]', 'a[x]', 'a[1', 'a<1]', '[1]', 'a[1][2]', 'a[123456]', 'x'.repeat(32), '-', '=', '__proto__ ', '\u0000'],
    ].flat(),
  )('refuses %j', (name) => {
    const found = problems(map(['TOP', name]));
    expect(found).toHaveLength(1);
    expect(found[0]).toMatch(/^\/pins\/0\/name \| ".*" \| a letter or _/s);
  });

  it.each(['__proto__', 'constructor', 'toString'])('takes %s for the word that it is', (word) => {
    expect(problems(map(['TOP', word]))).toEqual([]);
    expect(problems(map([word, 'a'])).length).toBeGreaterThan(0);
  });
});
