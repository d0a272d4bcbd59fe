import { clopperPearson } from '../core/interval.js';
import type { Limits } from '../spec/converter.js';
import type { YieldFigures } from '../spec/metrics.js';
import type { Gradient } from '../spec/technology.js';
import { alongSlope, bitsOf, unitsUnder } from './expected-units.js';
import type { Covariances, Placed } from './mismatch.js';
import { ownGradient } from './own-gradient.js';
import { countWithin, meansOf } from './yield.js';
import type { Setting } from './yield.js';
import { MOST_BITS, lostShare } from './yield-tail.js';

interface YieldInput extends Placed {
  readonly gradient: Gradient;
  /** What each bit has in capacitance to the common plate beyond its units, in units; absent where nothing is known of wires. */
  readonly coupling?: ReadonlyMap<string, number>;
  /** Of the same placement. */
  readonly covariances: Covariances;
  readonly limits: Limits;
  readonly samples: number;
  readonly seed: number;
}

const CONFIDENCE = 0.95;
/** Fewer arrays lost than this tell too little of how many there are. */
const FEWEST_LOST = 100;
/** Draws in the tail. */
const DRAWS = 10_000;

/**
 * The share of arrays that keep the limits, under the expected gradient (its own direction, else the worst), with their wires and random
 * mismatch: counted, with the interval of Clopper and Pearson; where hardly any is lost, from the tail (`lostShare`). Without the gradient,
 * without the wires and without both it is that of the same random numbers.
 */
export function analyseYield(input: YieldInput): YieldFigures {
  const { core, capacitors, cells, gradient, coupling, covariances, limits, samples, seed } = input;
  const bits = bitsOf(capacitors);
  const weight = bits.map((bit) => bit.weight);
  const wiring = bits.map(({ name }) => coupling?.get(name) ?? 0);
  const own = ownGradient(gradient);
  const { flat, x, y } = unitsUnder(own, { core, cells }, bits);
  // The worst direction is that of all errors together.
  const wired = flat.map((units, k) => units + wiring[k]);
  const expected = alongSlope({ flat: wired, x, y }, weight, own.direction);
  const bent = expected.map((units, k) => units - wiring[k] - weight[k]);
  const means = meansOf(weight, bent, wiring);
  const { capacitance } = covariances;

  const within = countWithin(weight, means, capacitance, limits, samples, seed);
  const isTail = samples - within.all < FEWEST_LOST && weight.length <= MOST_BITS;
  const lost = (setting: Setting) => lostShare(weight, means[setting], capacitance, limits, DRAWS, seed);
  const all = isTail ? lost('all') : undefined;
  const share = (setting: Setting): number => (isTail ? 1 - lost(setting).share : within[setting] / samples);
  const interval = all ? { low: 1 - all.high, high: 1 - all.low } : clopperPearson(within.all, samples, CONFIDENCE);
  return {
    share: all ? 1 - all.share : within.all / samples,
    ...interval,
    samples,
    seed,
    method: isTail ? 'tail' : 'counted',
    randomOnly: share('randomOnly'),
    withoutGradient: share('withoutGradient'),
    ...(coupling && { withoutWiring: share('withoutWiring') }),
  };
}
