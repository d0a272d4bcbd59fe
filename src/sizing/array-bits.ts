import { powerOfTwo } from '../core/power-of-two.js';
import type { ResolvedConverter } from '../spec/converter.js';
import { mostWeights } from '../spec/options.js';

/** A converter whose number of bits is known. */
export type Sized = ResolvedConverter & { readonly bits: number };

/**
 * Whether the sign of the sampled input is decided before anything switches: the first bit then costs no capacitor. That takes the input
 * on the top plates and a scheme that needs no trial of the largest bit.
 */
export const decidesFirst = ({ sampling, switching }: Pick<Sized, 'sampling' | 'switching'>): boolean =>
  sampling === 'top-plate' && (switching === 'monotonic' || switching === 'vcmBased');

/** Bits of each array. */
export const arrayBits = (converter: Sized): number => converter.bits - (decidesFirst(converter) ? 1 : 0);

/** Arrays at the comparator: monotonic switching lowers one side or the other, so a single-ended input needs the second side as well. */
export const arraysOf = ({ differential, switching }: Pick<Sized, 'differential' | 'switching'>): 1 | 2 =>
  differential || switching === 'monotonic' ? 2 : 1;

/**
 * The weights of an array whose largest bit is split into a copy of all others and one more unit, least significant first.
 * @returns undefined where the array could not have so many capacitors.
 */
export function splitWeights(bits: number): readonly number[] | undefined {
  if (2 * bits - 1 > mostWeights) return undefined;
  const others = Array.from({ length: bits - 1 }, (_, bit) => powerOfTwo(bit));
  return [1, ...others.flatMap((weight) => [weight, weight])];
}
