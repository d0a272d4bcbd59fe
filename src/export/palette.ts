import type { Capacitor } from '../spec/floorplan.js';

/**
 * Colours of the bits, the largest bit first. Bits that follow each other differ by 20 and more in CIE lightness, so a print in grey
 * keeps them apart; the first nine also differ for the common kinds of colour blindness. Past that the marks decide.
 */
export const bitColours = [
  '#86b6d9',
  '#1f7a55',
  '#e8c447',
  '#24408e',
  '#d2763a',
  '#6a2a5e',
  '#9fd6b0',
  '#7d6cc4',
  '#c9a97c',
  '#5c4a12',
  '#14b8b0',
  '#8a4b1f',
  '#d5e07a',
  '#3c6e8f',
  '#c78fd8',
  '#1f4d3a',
  '#f7b7a3',
  '#4a3f9a',
  '#8fae4f',
  '#8c3f7a',
] as const;

type Mark = readonly (readonly [from: readonly [number, number], to: readonly [number, number]])[];

/** Second cue where names are too small to read: strokes in a square of side 8 around 0,0, one figure per bit, the largest first. */
const marks: readonly Mark[] = [
  [],
  [segment(0, -4, 0, 4)],
  [segment(-4, 0, 4, 0)],
  [segment(-4, 4, 4, -4)],
  [segment(-4, -4, 4, 4)],
  [segment(0, -4, 0, 4), segment(-4, 0, 4, 0)],
  [segment(-4, 4, 4, -4), segment(-4, -4, 4, 4)],
  [segment(-3, -4, -3, 4), segment(3, -4, 3, 4)],
  [segment(-4, -3, 4, -3), segment(-4, 3, 4, 3)],
  [segment(-4, 4, 4, 4), segment(4, 4, 0, -4), segment(0, -4, -4, 4)],
];

function segment(x0: number, y0: number, x1: number, y1: number): Mark[number] {
  return [
    [x0, y0],
    [x1, y1],
  ];
}

export const ink = '#1c2126';
export const faintInk = '#6b737b';
export const paper = '#ffffff';
export const topColour = '#c8102e';
const groundColour = '#b4b9be';
const terminationColour = '#3c434c';

export interface Paint {
  readonly colour: string;
  /** Readable on the colour. */
  readonly onColour: string;
  readonly mark: Mark;
}

const paint = (colour: string, mark: Paint['mark'] = []): Paint => ({
  colour,
  onColour: luminance(colour) > 0.22 ? ink : paper,
  mark,
});

export const groundPaint = paint(groundColour);
export const topPaint = paint(topColour);

/** Who is painted how: bits from the largest down, so that the largest areas keep their colours whatever the number of bits. */
export function paintsOf(capacitors: readonly Capacitor[]): Map<string, Paint> {
  const paints = new Map<string, Paint>();
  const bits = capacitors.filter((c) => c.role === 'bit').reverse();
  bits.forEach(({ name }, i) => paints.set(name, paint(bitColours[i % bitColours.length], marks[i % marks.length])));
  for (const c of capacitors) if (c.role === 'termination') paints.set(c.name, paint(terminationColour));
  return paints;
}

function channels(colour: string): [number, number, number] {
  return [parseInt(colour.slice(1, 3), 16), parseInt(colour.slice(3, 5), 16), parseInt(colour.slice(5, 7), 16)];
}

/** The colour mixed with another: share 0 leaves it, share 1 is the other. */
export function mixed(colour: string, other: string, share: number): string {
  const b = channels(other);
  const mix = channels(colour).map((value, i) => Math.round(value + (b[i] - value) * share));
  return `#${mix.map((value) => value.toString(16).padStart(2, '0')).join('')}`;
}

/** Relative luminance 0 to 1, with the square in place of the sRGB curve: enough to choose between dark and light ink. */
function luminance(colour: string): number {
  const [r, g, b] = channels(colour).map((value) => (value / 255) * (value / 255)) as [number, number, number];
  return 0.2126 * r + 0.7152 * g + 0.0722 * b;
}
