import { describe, expect, it } from 'vitest';
import fc from 'fast-check';
import { parseGradientMap } from '../../src/spec/parse-gradient-map.js';

const problems = (text: string): string[] => {
  const parsed = parseGradientMap(text, 'map.csv');
  return parsed.ok
    ? []
    : parsed.issues.map(({ line, column, found, wanted }) => `${line}:${column} ${found} | ${wanted}`);
};

describe('a measured map', () => {
  it.each(['\n', '\r\n', '\r'])('is read whatever ends its lines (%j)', (end) => {
    const text = ['x_um,y_um,ppm', '0,0,12.5', '', ' -3.6 , 2.85,-1e2', ''].join(end);
    expect(parseGradientMap(`\ufeff${text}`, 'm')).toEqual({
      ok: true,
      value: [
        { x_um: 0, y_um: 0, ppm: 12.5 },
        { x_um: -3.6, y_um: 2.85, ppm: -100 },
      ],
    });
  });

  it('has every problem named with line and column', () => {
    const text = 'x_um,y_um,ppm\r\n1,2\r\n1,two,3\r\n1,2,\r\n\r\n1,2,3\r\n 1.0,2,4\r\n1e9,0,0x1\r\n';
    expect(problems(text)).toEqual([
      '2:1 2 values | three: x_um,y_um,ppm',
      '3:3 "two" | y_um: a number from -33554 to 33554',
      '4:5 nothing | ppm: a number from -999999 to 999999',
      '7:1 a point at 1, 2 once more | each place once; it stands in line 6',
      '8:1 "1e9" | x_um: a number from -33554 to 33554',
      '8:7 "0x1" | ppm: a number from -999999 to 999999',
    ]);
  });

  it.each([
    ['', '1:1 no point | the header x_um,y_um,ppm and a point a line'],
    ['x_um,y_um,ppm\n', '1:1 no point | the header x_um,y_um,ppm and a point a line'],
    ['x,y,ppm\n1,2,3\n', '1:1 "x,y,ppm" | the header x_um,y_um,ppm'],
    ['1,2,3\n', '1:1 "1,2,3" | the header x_um,y_um,ppm'],
    ['{"format": "steelyard/floorplan"}', '1:1 "{\\"format\\": \\"steelyard/floorplan\\"}" | the header x_um,y_um,ppm'],
  ])('%j is none', (text, problem) => {
    expect(problems(text)).toEqual([problem]);
  });

  it('may have 100,000 points', () => {
    const text = (count: number) =>
      `x_um,y_um,ppm\n${Array.from({ length: count }, (_, i) => `${i % 1000},${Math.floor(i / 1000)},1\n`).join('')}`;
    expect(problems(text(100_000))).toEqual([]);
    expect(problems(text(100_001))).toEqual(['1:1 100001 points | 100000 at most']);
  });

  it('is never the end of the program, whatever the text', () => {
    const piece = fc.constantFrom('x_um,y_um,ppm', '\n', ',', '1', '-', '{', '"', '\u2028', 'e', '.', '\\', '[');
    fc.assert(
      fc.property(fc.array(piece, { maxLength: 30 }), (pieces) => {
        const parsed = parseGradientMap(pieces.join(''), 'm');
        if (!parsed.ok) expect(parsed.issues.length).toBeGreaterThan(0);
      }),
    );
  });
});
