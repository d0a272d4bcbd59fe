import { figure } from '../core/figure.js';
import { InputError } from '../core/problem.js';
import { columnNets } from '../hookup/column-nets.js';
import { analyseGradient } from '../linearity/analyse-gradient.js';
import { comparisonLength } from '../linearity/correlation.js';
import { underMap } from '../linearity/measured-map.js';
import { placementSigma } from '../linearity/mismatch.js';
import type { Floorplan } from '../spec/floorplan.js';
import type { GradientMap } from '../spec/gradient-map.js';
import type { Metrics } from '../spec/metrics.js';
import { isBetter } from './dominance.js';
import { comparedFigures } from './figures.js';
import type { ComparedFigures } from './figures.js';
import { sentencesOn } from './sentences.js';

export interface Candidate {
  readonly floorplan: Floorplan;
  /** What its wires came to, where it has been drawn. */
  readonly drawn?: Pick<Metrics, 'hookup' | 'area_um2' | 'total'>;
}

export interface CompareOptions {
  /** One for all, or each on its own; else that of the first one that is drawn, of the first where none is. */
  readonly pitch?: readonly [x: number, y: number] | 'own';
  /** Of random mismatch, the same for all; else the one that gives 0.9 at a distance of the one pitch. */
  readonly correlationLength_um?: number;
  readonly map?: GradientMap;
}

/** Plain data, figures rounded as files show them. */
export interface Comparison {
  /** Absent where each is compared on its own. */
  readonly pitch_um?: readonly [x: number, y: number];
  readonly correlationLength_um: number;
  readonly floorplans: readonly ComparedFigures[];
  /** By key of a figure: the name of the first floorplan that has the least. */
  readonly best: Readonly<Record<string, string>>;
  /** [a, b]: a is worse than b in no figure that decides, and better in one or more. */
  readonly dominates: readonly (readonly [better: string, worse: string])[];
  /** Who dominates whom, and why. */
  readonly sentences: readonly string[];
}

/**
 * Sets floorplans of one array side by side. What decides are the absolute figures: the worst first and second order, sigma INL and sigma
 * DNL at one correlation length, the column nets, and the area where both are drawn. They are compared as files show them, to 12 digits.
 * Only core, capacitors and cells of a floorplan are needed.
 * @throws InputError: at /floorplans/i if its weights are not those of the first, at /map where it does not cover a core.
 */
export function compare(candidates: readonly Candidate[], options: CompareOptions = {}): Comparison {
  refuseOtherWeights(candidates.map(({ floorplan }) => floorplan));
  const leader = candidates.find(({ drawn }) => drawn !== undefined) ?? candidates[0];
  const common = options.pitch ?? leader.floorplan.core.pitch_um;
  const length =
    options.correlationLength_um ?? comparisonLength(common === 'own' ? leader.floorplan.core.pitch_um : common);
  const names = uniqueNames(candidates.map(({ floorplan }) => floorplan.name ?? 'floorplan'));
  const floorplans = candidates.map(({ floorplan, drawn }, i): ComparedFigures => {
    const { capacitors, cells } = floorplan;
    const core = common === 'own' ? floorplan.core : { ...floorplan.core, pitch_um: common };
    const { first, second } = analyseGradient({ core, capacitors, cells });
    const bits = new Set(capacitors.filter(({ role }) => role === 'bit').map(({ name }) => name));
    const figures: ComparedFigures = {
      name: names[i],
      core,
      gradient: { first, second, ...(options.map && { map: underMap(options.map, core, capacitors, cells) }) },
      mismatch: { placement: placementSigma({ core, capacitors, cells }, length) },
      hookup: drawn?.hookup ?? { columnNets: columnNets(cells, bits) },
      ...(drawn?.area_um2 !== undefined && { area_um2: drawn.area_um2 }),
      ...(drawn?.total && { total: drawn.total }),
    };
    return rounded(figures);
  });
  const dominates = floorplans.flatMap((a) =>
    floorplans.filter((b) => isBetter(a, b)).map((b) => [a.name, b.name] as const),
  );
  return {
    ...(common !== 'own' && { pitch_um: common }),
    correlationLength_um: figure(length),
    floorplans,
    best: bestOf(floorplans),
    dominates,
    sentences: sentencesOn(floorplans, dominates),
  };
}

/** LSB of arrays with other weights are other units. */
function refuseOtherWeights(floorplans: readonly Floorplan[]): void {
  const weights = floorplans.map(({ capacitors }) =>
    capacitors
      .filter(({ role }) => role === 'bit')
      .map(({ weight }) => weight)
      .sort((a, b) => a - b)
      .join(' '),
  );
  const problems = weights.flatMap((list, i) =>
    list === weights[0]
      ? []
      : [
          {
            pointer: `/floorplans/${i}`,
            found: `weights ${list}`,
            wanted: `those of the first floorplan, ${weights[0]}`,
          },
        ],
  );
  if (problems.length > 0) throw new InputError(problems);
}

/** Equal names told apart by a number. */
function uniqueNames(names: readonly string[]): string[] {
  const taken = new Set(names);
  const seen = new Set<string>();
  return names.map((name) => {
    let unique = name;
    for (let n = 2; seen.has(unique) || (unique !== name && taken.has(unique)); n++) unique = `${name}_${n}`;
    seen.add(unique);
    return unique;
  });
}

/** Every number as a file shows it. */
function rounded<T>(value: T): T {
  if (typeof value === 'number') return figure(value) as T;
  if (Array.isArray(value)) return value.map(rounded) as T;
  if (typeof value !== 'object' || value === null) return value;
  return Object.fromEntries(Object.entries(value).map(([key, each]) => [key, rounded(each as unknown)])) as T;
}

function bestOf(floorplans: readonly ComparedFigures[]): Record<string, string> {
  const best: Record<string, string> = {};
  for (const { key, of } of comparedFigures) {
    let least = Infinity;
    for (const floorplan of floorplans) {
      const value = of(floorplan);
      if (value === undefined || value >= least) continue;
      least = value;
      best[key] = floorplan.name;
    }
  }
  return best;
}
