import fc from 'fast-check';
import { findNodeAtLocation, parseTree } from 'jsonc-parser';
import { describe, expect, it } from 'vitest';
import { deepest, locate, step, survey } from '../../src/spec/json-text.js';

type Path = (string | number)[];

function pathsOf(value: unknown, path: Path = []): Path[] {
  if (typeof value !== 'object' || value === null) return [path];
  const entries: [string | number, unknown][] = Array.isArray(value)
    ? value.map((v, i) => [i, v])
    : Object.entries(value);
  return [path, ...entries.flatMap(([key, v]) => pathsOf(v, [...path, key]))];
}

const blanks = fc.constantFrom('', ' ', '\t', 2, 4);

describe('places in a text', () => {
  it('are those of a general-purpose parser', () => {
    fc.assert(
      fc.property(fc.json({ maxDepth: 4 }), blanks, (json, indent) => {
        const value = JSON.parse(json);
        const text = `\n ${JSON.stringify(value, null, indent)}`;
        const tree = parseTree(text)!;
        const paths = pathsOf(value);
        const places = locate(
          text,
          paths.map((p) => p.map(step).join('')),
        );
        for (const path of paths) {
          const node = findNodeAtLocation(tree, path)!;
          const place = places.get(path.map(step).join(''))!;
          expect(place.value).toBe(node.offset);
          const key = node.parent?.type === 'property' ? node.parent.children![0] : node;
          expect(place.key).toBe(key.offset);
        }
      }),
    );
  });

  it('of repeated keys are all found, escapes or not', () => {
    const text = '{"a": 1, "b": [{"c": 1, "\\u0063": 2, "d": {"c": 3}}, {"c": 1}], "a": 2, "a": 3}';
    const found: [number, string][] = [];
    survey(text, (offset, pointer) => found.push([offset, pointer]));
    expect(found).toEqual([
      [text.indexOf('"\\u0063"'), '/b/0/c'],
      [text.indexOf('"a": 2'), '/a'],
      [text.indexOf('"a": 3'), '/a'],
    ]);
  });

  it('where the nesting goes too deep', () => {
    const never = (): never => expect.unreachable();
    expect(survey('['.repeat(deepest) + ']'.repeat(deepest), never)).toEqual({});
    expect(survey('['.repeat(deepest + 1), never)).toEqual({ tooDeepAt: deepest });
    expect(survey(`["${'['.repeat(1000)}\\"${'['.repeat(1000)}"]`, never)).toEqual({});
    expect(survey(`[${'[],'.repeat(12_000_000)}0]`, never)).toEqual({ tooManyParts: 12_000_000 });
  });

  it('in any text at all, valid or not', () => {
    const piece = fc.constantFrom('{', '}', '[', ']', '"', '\\', ',', ':', 'a', '1', ' ', '\n', '"a"');
    fc.assert(
      fc.property(fc.array(piece, { maxLength: 60 }), (pieces) => {
        const text = pieces.join('');
        survey(text, (offset) => expect(text[offset]).toBe('"'));
        locate(text, ['', '/a', '/0/a']);
      }),
    );
  });
});
