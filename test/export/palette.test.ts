import { describe, expect, it } from 'vitest';
import { bitColours, mixed, paintsOf } from '../../src/export/palette.js';

const capacitors = (count: number) =>
  Array.from({ length: count }, (_, i) => ({ name: `B${i}`, role: 'bit' as const, weight: 2 ** i, units: 2 ** i }));

const linear = (colour: string): number[] =>
  [1, 3, 5].map((at) => {
    const value = parseInt(colour.slice(at, at + 2), 16) / 255;
    return value <= 0.04045 ? value / 12.92 : ((value + 0.055) / 1.055) ** 2.4;
  });
/** CIE L* from sRGB (IEC 61966-2-1, CIE 15; from memory). */
const lightness = (colour: string): number => {
  const [r, g, b] = linear(colour);
  return 116 * Math.cbrt(0.2126 * r + 0.7152 * g + 0.0722 * b) - 16;
};
const contrast = (a: string, b: string): number => {
  const [light, dark] = [a, b]
    .map((colour) => linear(colour).reduce((sum, value, i) => sum + value * [0.2126, 0.7152, 0.0722][i], 0.05))
    .sort((x, y) => y - x);
  return light / dark;
};

describe('colours of the bits', () => {
  it('are twenty different ones in hexadecimal', () => {
    expect(new Set(bitColours).size).toBe(20);
    for (const colour of bitColours) expect(colour).toMatch(/^#[0-9a-f]{6}$/);
  });

  it('keep neighbours in the bit order apart in grey', () => {
    for (let i = 1; i < bitColours.length; i++)
      expect(Math.abs(lightness(bitColours[i]) - lightness(bitColours[i - 1]))).toBeGreaterThan(20);
  });

  it('are told apart by colour or mark, each pair by one of them at least', () => {
    const looks = [...paintsOf(capacitors(20)).values()].map(({ colour, mark }) => `${colour} ${JSON.stringify(mark)}`);
    expect(new Set(looks).size).toBe(20);
    const marks = [...paintsOf(capacitors(10)).values()].map(({ mark }) => JSON.stringify(mark));
    expect(new Set(marks).size).toBe(10);
  });

  // WCAG 2: 3 : 1 for large or bold text (common practice).
  it('leave the names on them readable', () => {
    for (const { colour, onColour } of paintsOf(capacitors(20)).values())
      expect(contrast(colour, onColour)).toBeGreaterThan(3);
  });

  it('go to the largest bit first, whatever the number of bits', () => {
    expect(paintsOf(capacitors(4)).get('B3')).toEqual(paintsOf(capacitors(14)).get('B13'));
  });
});

it('mixes colours channel by channel', () => {
  expect(mixed('#000000', '#ff8040', 0)).toBe('#000000');
  expect(mixed('#000000', '#ff8040', 1)).toBe('#ff8040');
  expect(mixed('#002040', '#ffffff', 0.5)).toBe('#8090a0');
});
