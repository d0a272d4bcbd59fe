import { exp, ln } from './exponential.js';
import type { Random } from './random.js';

/**
 * Layers of equal area under exp(-x^2 / 2), x >= 0: layer i reaches from 0 to EDGE[i], the lowest also holds the tail beyond EDGE[1].
 * Edges go downwards to 0; every layer but the lowest lies between the heights of its edge and of the next.
 */
const LAYERS = 128;
const TAIL = 3.442619855899;
const AREA = 9.91256303526217e-3;
const TWO_32 = 4294967296;

const height = (x: number): number => exp(-0.5 * x * x);
const edges = new Float64Array(LAYERS + 1);
edges[0] = AREA / height(TAIL);
edges[1] = TAIL;
for (let i = 2; i < LAYERS; i++) edges[i] = Math.sqrt(-2 * ln(AREA / edges[i - 1] + height(edges[i - 1])));
/** Share of a layer that lies under the curve whatever the height. */
const inner = Float64Array.from({ length: LAYERS }, (_, i) => edges[i + 1] / edges[i]);
const heights = Float64Array.from(edges, height);

/**
 * Standard normal numbers by the ziggurat method (Marsaglia, Tsang, J. Stat. Software 5(8), 2000, with layer and place drawn apart as Doornik
 * 2005 has it; from memory). From + - * /, the square root and this room's exp and ln: the same on every machine.
 */
export function normal(random: Random): number {
  for (;;) {
    const layer = random.bits() & (LAYERS - 1);
    const place = (random.bits() + 0.5) / (TWO_32 / 2) - 1;
    const x = place * edges[layer];
    if (Math.abs(place) < inner[layer]) return x;
    if (layer === 0) return place < 0 ? -normalAbove(TAIL, random) : normalAbove(TAIL, random);
    const between = heights[layer] + open(random) * (heights[layer + 1] - heights[layer]);
    if (between < height(x)) return x;
  }
}

/** A number in (0, 1). */
const open = (random: Random): number => (random.bits() + 0.5) / TWO_32;

const ROOT_TWO_PI = 2.5066282746310002;
/** Beyond it the continued fraction is as good as a double within TERMS terms. */
const FAR = 2.5;
const TERMS = 200;

/** The share of the standard normal distribution above x, to 13 digits of whichever side is smaller. */
export function normalTail(x: number): number {
  if (x < 0) return 1 - normalTail(-x);
  const density = exp(-0.5 * x * x) / ROOT_TWO_PI;
  if (x < FAR) {
    // density (x + x^3 / 3 + x^5 / (3 5) + ...) up to x (Marsaglia, J. Stat. Software 11(4), 2004; from memory)
    let term = x;
    let sum = 0;
    for (let odd = 3; term > 1e-18; odd += 2) {
      sum += term;
      term *= (x * x) / odd;
    }
    return 0.5 - density * sum;
  }
  // density / (x + 1 / (x + 2 / (x + 3 / ...))) (Laplace)
  let fraction = x;
  for (let n = TERMS; n > 0; n--) fraction = x + n / fraction;
  return density / fraction;
}

/** A normal number known to lie above x: exponential trials where x is above 0 (Robert, Stat. Comput. 5, 1995; from memory). */
export function normalAbove(x: number, random: Random): number {
  if (x <= 0) {
    for (;;) {
      const drawn = normal(random);
      if (drawn > x) return drawn;
    }
  }
  const rate = (x + Math.sqrt(x * x + 4)) / 2;
  for (;;) {
    const drawn = x - ln(open(random)) / rate;
    const off = drawn - rate;
    if (open(random) <= exp(-0.5 * off * off)) return drawn;
  }
}
