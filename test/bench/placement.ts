import { spawnSync } from 'node:child_process';
import { mkdtempSync, readFileSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { columnNets } from '../../src/hookup/column-nets.js';
import { analyseGradient } from '../../src/linearity/analyse-gradient.js';
import { comparisonLength } from '../../src/linearity/correlation.js';
import { lowerBound, strongerBound } from '../../src/linearity/lower-bound.js';
import { placementSigma } from '../../src/linearity/mismatch.js';
import { drawKept, startPlacement } from '../../src/pipeline.js';
import type { PlaceRequest } from '../../src/pipeline.js';
import { placeByRule, publishedRules } from '../../src/placement/published-rules.js';
import type { Emphasis } from '../../src/spec/array-spec.js';
import type { Capacitor, Core } from '../../src/spec/floorplan.js';
import { parseTechnology } from '../../src/spec/parse-technology.js';
import { resolveArray } from '../../src/spec/resolve.js';
import { annealBySwaps } from './baseline.js';
import { exponent } from './fit.js';

const file = 'templates/parallel-plate.technology.json';
const parsed = parseTechnology(readFileSync(file, 'utf8'), file);
if (!parsed.ok) throw new Error('the shipped template does not parse');
const technology = parsed.value;

type Pitches = 'square' | 'own';
const emphases: readonly Emphasis[] = ['balanced', 'gradient', 'dispersed', 'wiring'];

function requestFor(bits: number, emphasis: Emphasis, pitches: Pitches, seed: number): PlaceRequest {
  const array = resolveArray({ format: 'steelyard/array', version: 1, bits, emphasis, seed }, technology);
  if (!array.ok) throw new Error(JSON.stringify(array.issues));
  return { array: array.value, ...(pitches === 'square' && { floorplanOnly: { pitch_um: [1, 1] } }) };
}

/** The search in one piece, with one worker. */
function solve(request: PlaceRequest) {
  const run = startPlacement(request);
  const start = performance.now();
  while (run.step(1e6));
  const seconds = (performance.now() - start) / 1000;
  const kept = run.best(false);
  const { metrics } = drawKept({ ...kept, options: { ...kept.options, measureOnly: true } }, technology);
  return { seconds, trials: run.work, floorplan: kept.floorplan, metrics };
}

const memo = <T>(make: (key: string) => T): ((key: string) => T) => {
  const made = new Map<string, T>();
  return (key) => {
    if (!made.has(key)) made.set(key, make(key));
    return made.get(key) as T;
  };
};
const coreOf = (key: string): { core: Core; bits: Capacitor[] } => {
  const [count, rows, columns, x, y] = key.split(' ').map(Number);
  const bits = Array.from({ length: count }, (_, k): Capacitor => {
    const units = 1 << k;
    return { name: `B${k}`, role: 'bit', weight: units, units };
  });
  return { core: { rows, columns, pitch_um: [x, y] }, bits };
};
const keyOf = (bits: number, { rows, columns, pitch_um }: Core): string => [bits, rows, columns, ...pitch_um].join(' ');

/** The strongest bound that there is, LSB per ppm/um^2. */
const boundOf = memo((key) => {
  const { core, bits } = coreOf(key);
  const bound = strongerBound(core, bits, 'point-reflected') ?? lowerBound(core, bits);
  return bound?.inl_lsb_per_ppm_per_um2 ?? NaN;
});

/** The least that emphasis gradient reached on this core and pitch, of three seeds. */
const reachedOf = memo((key) => {
  const { core, bits } = coreOf(key);
  const found = [1, 2, 3].map((seed) => {
    const { array } = requestFor(bits.length, 'gradient', 'square', seed);
    const spec = { ...array.spec, core: { rows: core.rows, columns: core.columns } };
    const { metrics } = solve({ array: { ...array, spec }, floorplanOnly: { pitch_um: core.pitch_um } });
    return metrics.gradient.second.inl_lsb_per_ppm_per_um2;
  });
  return Math.min(...found);
});

/** The chessboard's sigmas and the fewest column nets of any published rule, on a pitch. */
const published = memo((key) => {
  const [bits, x, y] = key.split(' ').map(Number);
  const chessboard = placeByRule('chessboard', bits, [x, y]);
  const names = new Set(Array.from({ length: bits }, (_, k) => `B${k}`));
  const nets = publishedRules.map(({ name }) => columnNets(placeByRule(name, bits, [x, y]).cells, names));
  return { sigma: placementSigma(chessboard, comparisonLength([x, y])), nets: Math.min(...nets) };
});

const median = (values: readonly number[]): number => {
  const sorted = [...values].sort((a, b) => a - b);
  const middle = sorted.length >> 1;
  return sorted.length % 2 === 1 ? sorted[middle] : (sorted[middle - 1] + sorted[middle]) / 2;
};
const rounded = (value: number): number => Number(value.toPrecision(4));

/** Worst and median over the seeds of what a placement comes to beside what others come to. */
function quality(bits: number, emphasis: Emphasis, pitches: Pitches, seeds: number) {
  const runs = Array.from({ length: seeds }, (_, i) => {
    const { seconds, trials, metrics } = solve(requestFor(bits, emphasis, pitches, i + 1));
    const { core, gradient, mismatch, hookup } = metrics;
    const rule = published([bits, ...core.pitch_um].join(' '));
    const second = gradient.second.inl_lsb_per_ppm_per_um2;
    return {
      first: gradient.first.inl_lsb,
      overBound: second / boundOf(keyOf(bits, core)),
      overReached: second / reachedOf(keyOf(bits, core)),
      sigmaInl: (mismatch?.placement.inlSigma_perUnitSigma ?? NaN) / rule.sigma.inlSigma_perUnitSigma,
      sigmaDnl: (mismatch?.placement.dnlSigma_perUnitSigma ?? NaN) / (rule.sigma.dnlSigma_perUnitSigma ?? NaN),
      nets: hookup.columnNets / rule.nets,
      seconds,
      trialsPerSecond: trials / seconds,
    };
  });
  const of = (key: keyof (typeof runs)[number]) => runs.map((run) => run[key]);
  const both = (key: keyof (typeof runs)[number]) => ({
    worst: rounded(Math.max(...of(key))),
    median: rounded(median(of(key))),
  });
  return {
    ...{ bits, emphasis, pitches, seeds, firstNotZero: of('first').filter((first) => first !== 0).length },
    ...{ overBound: both('overBound'), overReached: both('overReached') },
    ...{ sigmaInl: both('sigmaInl'), sigmaDnl: both('sigmaDnl'), nets: both('nets'), seconds: both('seconds') },
    trialsPerSecond: Math.round(median(of('trialsPerSecond'))),
  };
}

/** The search and the baseline on the same core, the baseline for as many seconds as the search took. */
function besideBaseline(bits: number) {
  const { seconds, trials, floorplan, metrics } = solve(requestFor(bits, 'gradient', 'square', 1));
  const { rows, columns, pitch_um: pitch } = floorplan.core;
  const request = { rows, columns, pitch, units: Array.from({ length: bits }, (_, k) => 1 << k), seed: 1 };
  const few = annealBySwaps({ ...request, trials: 2000 });
  const as = annealBySwaps({ ...request, trials: Math.max(2000, Math.round((2000 * seconds) / few.seconds)) });
  const capacitors = coreOf(keyOf(bits, floorplan.core)).bits;
  const cells = Array.from({ length: rows }, (_, row) =>
    Array.from(as.netOfCell.subarray(row * columns, (row + 1) * columns), (net) => capacitors[net]?.name ?? '-'),
  );
  const { second } = analyseGradient({ core: floorplan.core, capacitors, cells });
  const bound = boundOf(keyOf(bits, floorplan.core));
  return {
    bits,
    seconds: rounded(seconds),
    trialsPerSecond: Math.round(trials / seconds),
    baselineTrialsPerSecond: Math.round(as.trials / as.seconds),
    timesFaster: rounded(trials / seconds / (as.trials / as.seconds)),
    overBound: rounded(metrics.gradient.second.inl_lsb_per_ppm_per_um2 / bound),
    baselineOverBound: rounded(second.inl_lsb_per_ppm_per_um2 / bound),
  };
}

/** The built tool at 12 bits, without wires and drawing, which no second worker shares: seconds, the least of three. */
function wallWith(workers: number, emphasis: Emphasis): number {
  const folder = mkdtempSync(join(tmpdir(), 'steelyard-bench-'));
  try {
    const args = [
      'place',
      '--bits',
      '12',
      '--floorplan-only',
      '--emphasis',
      emphasis,
      '--out',
      folder,
      '--workers',
      String(workers),
    ];
    const times = [1, 2, 3].map(() => {
      const start = performance.now();
      const { status } = spawnSync(process.execPath, ['dist/cli/main.js', ...args], { stdio: 'ignore' });
      if (status !== 0) throw new Error(`place with ${workers} workers ended with ${status}`);
      return (performance.now() - start) / 1000;
    });
    return rounded(Math.min(...times));
  } finally {
    rmSync(folder, { recursive: true, force: true });
  }
}

export function measurePlacement(bitCounts: readonly number[], seeds: number) {
  const rows = bitCounts.flatMap((bits) =>
    emphases.flatMap((emphasis) =>
      (['square', 'own'] as const).map((pitches) => quality(bits, emphasis, pitches, seeds)),
    ),
  );
  const growth = emphases.map((emphasis) => {
    const own = rows.filter((row) => row.emphasis === emphasis && row.pitches === 'square');
    return { emphasis, exponent: rounded(exponent(own.map(({ bits, seconds }) => [2 ** bits, seconds.median]))) };
  });
  const baseline = bitCounts.map(besideBaseline);
  const workers = (['balanced', 'gradient'] as const).map((emphasis) => {
    const [one, two] = [1, 2].map((count) => wallWith(count, emphasis));
    return { emphasis, one_s: one, two_s: two, timesFaster: rounded(one / two) };
  });
  return { rows, growth, baseline, workers };
}

/** A row as a table shows it: worst and median in one cell. */
export const flat = (row: object): object =>
  Object.fromEntries(
    Object.entries(row).map(([key, value]: [string, unknown]) => {
      if (typeof value !== 'object' || value === null) return [key, value];
      const { worst, median: middle } = value as { worst: number; median: number };
      return [key, `${worst} (${middle})`];
    }),
  );
