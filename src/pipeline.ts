import { bentTerm } from './array/bent-term.js';
import type { ColumnLimit } from './array/column-limit.js';
import { candidateCores, type CoreGrid } from './array/core-grid.js';
import { checkFloorplan } from './check/floorplan.js';
import type { Neighbourhood } from './check/neighbourhood.js';
import { judgePolygons } from './check/polygons.js';
import { Candidates } from './comparison/candidates.js';
import type { Finding } from './check/finding.js';
import { figure } from './core/figure.js';
import { InputError } from './core/problem.js';
import { Random } from './core/random.js';
import { um } from './core/units.js';
import { type Circuit, circuitOf } from './extraction/circuit.js';
import { type Extraction, extractCoupling } from './extraction/extract.js';
import { type Parasitics, parasiticFigures } from './extraction/parasitic.js';
import type { BitTiming } from './extraction/timing.js';
import { drawPolygons } from './geometry/draw.js';
import { columnLimitTerm } from './hookup/column-limit.js';
import { columnNets, columnNetsTerm } from './hookup/column-nets.js';
import { hookupFigures } from './hookup/figures.js';
import { asWired, planAsWired } from './hookup/orientation.js';
import type { Placed } from './hookup/plan.js';
import {
  drawingRules,
  mostColumnNets,
  pitchOf,
  planOf,
  refuseTooFewTrunks,
  ringColumn,
  type StyledRules,
  tracksNeeded,
  wire,
} from './hookup/style.js';
import { analyseGradient, type GradientFigures } from './linearity/analyse-gradient.js';
import { firstOrderTerm, secondOrderTerm } from './linearity/cost-terms.js';
import { columnCorrelation, comparisonLength, correlationOf } from './linearity/correlation.js';
import { mismatchTerm } from './linearity/mismatch-term.js';
import { secondOrderInl } from './linearity/exact-inl.js';
import { lowerBound, type PlacementClass } from './linearity/lower-bound.js';
import { analyseYield } from './linearity/analyse-yield.js';
import { missedLimits } from './linearity/limits.js';
import { analyseMismatch, type Covariances } from './linearity/mismatch.js';
import { type LeastOfReflected, provedClass } from './linearity/proved.js';
import { totalFigures } from './linearity/total.js';
import { dealBlocks, type DealtNet } from './placement/dealing.js';
import { ringsToReach, unitMismatch } from './spec/options.js';
import { workFor } from './placement/effort.js';
import { arrangementOf, type Blend, heatOf, recipes, weighingOf, weighings, workOf } from './placement/emphasis.js';
import { isSearchable } from './placement/exact-search.js';
import { firstOrderBound } from './placement/first-order-bound.js';
import { ProvingSearch } from './placement/proving-search.js';
import type { Resumable } from './placement/resumable.js';
import { Rounds, type Sought } from './placement/rounds.js';
import { Search, type SearchOptions, SearchStart, type StartResult } from './placement/search.js';
import type { Effort } from './spec/array-spec.js';
import type { Capacitor, Core, Floorplan, Placement, RingUnit } from './spec/floorplan.js';
import type { Metrics, ParasiticFigures } from './spec/metrics.js';
import { type PinsWanted, pinsWanted } from './spec/pins.js';
import type { Polygons } from './spec/polygons.js';
import type { ResolvedArray, ResolvedSpec } from './spec/resolve.js';
import type { Technology } from './spec/technology.js';

export interface PlaceRequest {
  readonly array: ResolvedArray;
  /** Arrays to draw for the yield, where the array states limits. */
  readonly samples?: number;
  /** Cells only, no wires; on a pitch of one's own where given. */
  readonly floorplanOnly?: { readonly pitch_um?: readonly [x: number, y: number] };
  /** Weights between those of the array's emphasis and another's. */
  readonly blend?: Blend;
}

/** A placed array, wired, drawn and measured. `polygons` and what comes of them are absent without wires. */
export interface Drawn {
  readonly floorplan: Floorplan;
  readonly polygons?: Polygons;
  readonly metrics: Metrics;
  readonly gradient: GradientFigures;
  /** Capacitances as drawn, and what they make of the array; absent where the technology does not say enough. */
  readonly extraction?: Extraction;
  readonly parasitics?: Parasitics;
  /** The wires as a circuit, of a size to be simulated. */
  readonly circuit?: Circuit;
  /** Of random mismatch. */
  readonly covariances: Covariances;
  /** The array's own limits that it does not keep; a sentence each. */
  readonly missed: readonly string[];
  readonly findings: readonly Finding[];
  /** How alike the surroundings of the units are. */
  readonly neighbourhood?: Neighbourhood;
  /** What the user should know before using the result; a sentence each. */
  readonly warnings: readonly string[];
  /** What was decided on the way; a sentence each. */
  readonly notes: readonly string[];
}

/** A placement and what its drawing needs to know of it. Plain data. */
export interface Kept {
  readonly floorplan: Floorplan;
  readonly options: DrawOptions;
  /** Why the first order is not 0. */
  readonly because?: string;
}

/** One start of one of a run's searches, to be run anywhere: plain data. */
export interface StartJob {
  readonly request: PlaceRequest;
  readonly stage: StageRequest;
  readonly start: number;
  /** Which search of the run it is of. */
  readonly search: number;
  /** Of the whole run's work. */
  readonly share: number;
}

/** A resumable run, whose jobs `beginStart` runs. It depends on the request alone. */
export interface PlaceRun extends Resumable<StartJob> {
  /** Whether a placement exists that `finish` could draw. */
  readonly started: boolean;
  /** The best so far, as cells alone. */
  best(interrupted: boolean): Kept;
  /** The best so far, wired, drawn and measured. @throws Infeasible where the tracks asked for do not suffice. */
  finish(interrupted: boolean): Drawn;
}

type Pitch = readonly [x: number, y: number];

/** A search on one core at one pitch. */
interface StageRequest {
  readonly grid: CoreGrid;
  readonly pitch: Pitch;
  /** Tracks per channel that the pitch is made for. */
  readonly tracks: number;
  /** With the emphasis's own weights, or to find out what the second order alone could come to. */
  readonly weights: 'own' | 'second-order';
  /** What the second order is weighed against, over `spread`. */
  readonly relative: number;
  readonly effort: Effort;
  /** Of the whole run's work. */
  readonly share: number;
}

type Stage = StageRequest & Sought;

interface Setting {
  readonly request: PlaceRequest;
  readonly spec: ResolvedSpec;
  readonly technology: Technology;
  readonly capacitors: readonly Capacitor[];
  /** Those with units inside the core. */
  readonly inCore: readonly Capacitor[];
  readonly rules: StyledRules;
  readonly pins: PinsWanted;
  /** On the nets of a column, where the drawing limits them. */
  readonly limit?: ColumnLimit;
  /** The pitch asked for, where the drawing does not decide it. */
  readonly pitch?: Pitch;
  readonly wired: boolean;
}

const BEYOND_LIMIT = 80;
/**
 * What the mismatch term comes to for the chessboard rule, LSB per sigma of one unit: fitted to 6, 8, 10 and 12 bits, within 3 %. It is the
 * scale on which mismatch is weighed, for arrays that have no chessboard too.
 */
const chessboardSigma = (units: number): number =>
  Math.sqrt(units) * (0.168 - 0.00024 * Math.max(0, Math.sqrt(units) - 16));
/** What a chessboard's column nets come to: exactly so for an even number of bits. */
const chessboardNets = (units: number): number => 3 * (Math.sqrt(units + 1) - 1);
/** One um of first order against one um^2 of second. */
const FIRST_BEFORE_ALL = 1e3;
/** A net too many in a column: more than all that the other terms could gain by it. */
const FITTING_BEFORE_ALL = 10;

/** Full searches at a pitch before the tracks that the wires turn out to need are taken as they are; only one where it is long. */
const roundsFor = (units: number): number => (units < 2000 ? 2 : 1);

/**
 * Starts a placement.
 * @throws InputError where the request contradicts itself, Infeasible where it cannot be met.
 */
export function startPlacement(request: PlaceRequest): PlaceRun {
  return new Run(settingOf(request));
}

/**
 * Starts a search of several floorplans, none dominated by another: `count` of them, or fewer where no more are found. The array's own
 * emphasis is of no account; `best` tells which they are, in the order of their second order.
 * @throws as `startPlacement`
 */
export function startCandidates(request: PlaceRequest, count: number): Candidates<StartJob, Kept> {
  const { spec, technology } = request.array;
  return new Candidates<StartJob, Kept>(count, {
    begin: (number) => {
      const { emphasis, blend } = recipes[number % recipes.length];
      const seed = Math.min(spec.seed + Math.floor(number / recipes.length), Number.MAX_SAFE_INTEGER);
      const array = { ...request.array, spec: { ...spec, emphasis, seed } };
      return startPlacement({ ...request, array, ...(blend && { blend }) });
    },
    measure: (kept) => {
      const { floorplan, metrics } = drawKept({ ...kept, options: { ...kept.options, measureOnly: true } }, technology);
      return { kept, floorplan, metrics };
    },
  });
}

/** A job of a run, begun anew wherever this is called: it depends on the job alone. */
export function beginStart({ request, stage, start }: StartJob): SearchStart {
  return new SearchStart(searchOptions(settingOf(request), stage), start);
}

function settingOf(request: PlaceRequest): Setting {
  const { spec, technology, capacitors } = request.array;
  const wired = request.floorplanOnly === undefined;
  const pitch = request.floorplanOnly?.pitch_um ?? spec.core?.pitch_um;
  if (wired && pitch !== undefined)
    throw new InputError([
      {
        pointer: '/core/pitch_um',
        found: 'a pitch of its own',
        wanted: 'no pitch, since the drawing decides it; or --floorplan-only',
      },
    ]);
  const inCore = capacitors.filter((capacitor) => capacitor.role === 'bit' || spec.termination === 'core');
  const rules = drawingRules(technology);
  const pins = pinsWanted(capacitors, spec.pins);
  const most = wired ? mostColumnNets(rules, spec.tracksPerChannel) : Infinity;
  const limit = most < Infinity && {
    most,
    forFill: spec.termination === 'core' ? 2 : 1,
    spare: spec.termination === 'ring',
  };
  return {
    request,
    spec,
    technology,
    capacitors,
    inCore,
    rules,
    pins,
    wired,
    ...(limit && { limit }),
    ...(pitch && { pitch }),
  };
}

class Run implements PlaceRun {
  readonly #setting: Setting;
  readonly #rounds: Rounds<Stage>;

  constructor(setting: Setting) {
    this.#setting = setting;
    this.#rounds = new Rounds(roundsOf(setting));
  }

  get started(): boolean {
    return this.#rounds.started;
  }

  get over(): boolean {
    return this.#rounds.over;
  }

  get waiting(): boolean {
    return this.#rounds.waiting;
  }

  get progress(): number {
    return this.#rounds.progress;
  }

  get work(): number {
    return this.#rounds.work;
  }

  step(work: number): boolean {
    return this.#rounds.step(work);
  }

  take(): StartJob | undefined {
    const taken = this.#rounds.take();
    if (taken === undefined) return undefined;
    const { search: _, ...stage } = taken.stage;
    return {
      request: this.#setting.request,
      stage,
      start: taken.start,
      search: taken.number,
      share: stage.share / taken.starts,
    };
  }

  offer({ search }: StartJob, result: StartResult, done: boolean): boolean {
    return this.#rounds.offer(search, result, done);
  }

  best(interrupted: boolean): Kept {
    const { request, spec, capacitors, wired } = this.#setting;
    const stage = this.#rounds.best();
    const { grid, pitch, tracks, search } = stage;
    const { dealing } = search.best();
    const placed = placedOf(this.#setting, stage);
    const { blend } = request;
    const weights = blend ? `, weights ${Math.round(100 * blend.share)} % of the way to ${blend.towards}` : '';
    const placement: Placement = {
      method: `${dealing.exactZero ? 'annealed zero-first-order deal' : 'annealed deal'}${weights}`,
      seed: spec.seed,
      emphasis: spec.emphasis,
      status: interrupted ? 'interrupted' : 'effort-spent',
      work: this.work,
    };
    const floorplan: Floorplan = {
      format: 'steelyard/floorplan',
      version: 1,
      name: spec.name,
      array: { ...spec, core: grid },
      core: { ...grid, pitch_um: pitch },
      capacitors,
      cells: placed.cells,
      ...(placed.ringUnits.length > 0 && { ringUnits: placed.ringUnits }),
      placement,
    };
    const least = spec.tracksPerChannel ?? tracks;
    const known = search instanceof ProvingSearch ? search.proved : undefined;
    return {
      floorplan,
      options: {
        wired,
        tracksAtLeast: least,
        ...(known && { known }),
        ...(request.samples !== undefined && { samples: request.samples }),
      },
      ...(!dealing.exactZero && { because: dealing.because }),
    };
  }

  finish(interrupted: boolean): Drawn {
    return drawKept(this.best(interrupted), this.#setting.technology);
  }
}

/**
 * A run's placement wired, drawn and measured; measured alone where its options say so.
 * @throws Infeasible where the tracks asked for do not suffice.
 */
export function drawKept({ floorplan, options, because }: Kept, technology: Technology): Drawn {
  const drawn = drawFloorplan(floorplan, technology, options);
  if (because === undefined) return drawn;
  const placed = new Set(floorplan.cells.flat());
  const dealt = dealtNets(floorplan.capacitors.filter(({ name }) => placed.has(name)));
  const bound = firstOrderBound(floorplan.core, dealt, floorplan.core.pitch_um);
  const floor = bound > 0 ? ` No placement on this core comes below ${figure(bound)} LSB per ppm/um.` : '';
  return { ...drawn, warnings: [`The first order is not 0: ${because}${floor}`, ...drawn.warnings] };
}

/** The search of a stage, without its starts: what it deals and what that costs. */
function searchOptions(
  { request, spec, capacitors, inCore, limit }: Setting,
  { grid, pitch, weights, relative, effort }: StageRequest,
): SearchOptions {
  const cost = weights === 'own' ? weighingOf(spec.emphasis, request.blend) : weighings.gradient;
  const bits = capacitors.filter(({ role }) => role === 'bit');
  const total = unitsOf(inCore);
  const nets = dealtNets(inCore);
  const reference = relative * spread(grid, pitch);
  const bound = lowerBound({ ...grid, pitch_um: pitch }, bits);
  const fewestNets = bits.reduce((sum, bit) => sum + Math.ceil(bit.units / grid.rows), 0);
  const dispersed = chessboardSigma(total);
  const correlation = correlationOf(grid.rows, grid.columns, pitch, comparisonLength(pitch));
  return {
    deals: (start) =>
      dealBlocks({
        ...grid,
        nets,
        random: new Random(spec.seed, start),
        arrangement: arrangementOf(
          cost,
          start,
          chessboardNets(total),
          () => columnCorrelation(correlation),
          limit && { limit, tight: columnNetsOfChance(nets, grid) > limit.most - 1 },
        ),
      }),
    terms: (deal) => [
      // Where the first order is 0 by the deal this term stays 0; elsewhere it comes before all others.
      { term: firstOrderTerm(deal, pitch), weight: FIRST_BEFORE_ALL / reference },
      {
        term: bentTerm(secondOrderTerm(deal, pitch), cost.limit * reference, BEYOND_LIMIT),
        weight: cost.second / reference,
      },
      ...(limit ? [{ term: columnLimitTerm(deal, limit), weight: FITTING_BEFORE_ALL }] : []),
      ...(cost.nets > 0
        ? [
            {
              term: bentTerm(columnNetsTerm(deal), cost.netsLimit * chessboardNets(total), BEYOND_LIMIT),
              weight: cost.nets / fewestNets / BEYOND_LIMIT,
            },
          ]
        : []),
      ...(cost.mismatch > 0
        ? [
            {
              term: bentTerm(mismatchTerm(deal, correlation), cost.mismatchLimit * dispersed, BEYOND_LIMIT),
              weight: cost.mismatch / dispersed,
            },
          ]
        : []),
    ],
    ...workOf(cost, workFor(effort, total), total),
    heat: (start) => heatOf(cost, start),
    seed: spec.seed,
    stopWhen: ({ dealing }) =>
      cost === weighings.gradient && bound?.squared === secondOrderInl(dealing.deal, pitch).squared,
  };
}

/**
 * The searches of a run, round after round: a short one per orientation of the core, which decides by the lower absolute second order,
 * then the fewer columns; a short one with the emphasis's own weights, which tells how many tracks the wires will need; the full one at
 * that pitch, once more if it needs another number of tracks. Where the second order alone counts and an exact search is possible, the
 * full search is a short one and the exact one follows it.
 */
function* roundsOf(setting: Setting): Generator<readonly Stage[], Stage, void> {
  const { spec, rules, inCore, wired } = setting;
  const emphasis = weighingOf(spec.emphasis, setting.request.blend);
  const bits = setting.capacitors.filter((capacitor) => capacitor.role === 'bit');
  const total = unitsOf(inCore);
  const dealt = dealtNets(inCore);
  const pitchFor = (tracks: number): Pitch => {
    const [x, y] = pitchOf(rules, tracks);
    return setting.pitch ?? [um(x), um(y)];
  };
  const stage = (request: Omit<StageRequest, 'pitch'>): Stage => {
    const whole = { ...request, pitch: pitchFor(request.tracks) };
    return { ...whole, search: new Search(searchOptions(setting, whole)) };
  };

  let tracks = spec.tracksPerChannel ?? Math.min(6, 1 + Math.floor(inCore.length / 4));
  const grids = spec.core
    ? [{ rows: spec.core.rows, columns: spec.core.columns }]
    : candidateCores(
        dealt.filter((net) => net.weight > 0).map((net) => net.units),
        total - unitsOf(bits),
        pitchFor(tracks),
      );
  if (wired) refuseTooFewTrunks(rules, grids, inCore, spec.tracksPerChannel);
  const mostRounds = roundsFor(total);
  // What each orientation can have, and with what the choice between them begins.
  const short = { tracks, effort: 'quick' } as const;
  const searches = grids.map((grid) =>
    stage({ ...short, grid, weights: 'second-order', relative: 1, share: 0.15 / grids.length }),
  );
  yield searches;
  const probes = searches.map(({ grid, pitch, search }) => {
    const least = secondOrderInl(search.best().dealing.deal, pitch).inl_lsb_per_ppm_per_um2;
    return { grid, least, relative: least > 0 ? least / spread(grid, pitch) : 1 };
  });
  const bySecondOrder = probes.reduce((a, b) => (b.least < a.least ? b : a));
  const near = probes.filter(({ least }) => least <= emphasis.orientation * bySecondOrder.least);
  const contenders = emphasis.orientation === 1 ? [bySecondOrder] : near;
  let { grid, relative } = bySecondOrder;
  const needed = (of: Stage) =>
    wired ? tracksNeeded(rules, asWired(placedOf(setting, of), setting.pins), spec.tracksPerChannel) : of.tracks;
  const scouts = contenders.map(({ grid, relative }) =>
    stage({ ...short, grid, weights: 'own', relative, share: 0.1 / contenders.length }),
  );
  yield scouts;
  // Between orientations as good as each other the fewer wires decide.
  const netsOf = ({ search }: Stage) => columnNetsTerm(search.best().dealing.deal).value();
  const scout = scouts.reduce((a, b) => (netsOf(b) < netsOf(a) ? b : a));
  ({ grid, relative } = probes.find((probe) => probe.grid === scout.grid)!);
  if (spec.tracksPerChannel === undefined) tracks = needed(scout);
  for (let round = 1; ; round++) {
    const core: Core = { ...grid, pitch_um: pitchFor(tracks) };
    const provable =
      spec.emphasis === 'gradient' &&
      inCore.every(({ role }) => role === 'bit') &&
      isSearchable(core, bits) &&
      (setting.limit === undefined || inCore.length < setting.limit.most);
    const effort = provable ? 'quick' : spec.effort;
    let full = stage({ grid, tracks, weights: 'own', relative, effort, share: 0.75 / mostRounds });
    yield [full];
    if (provable) {
      full = { ...full, search: new ProvingSearch(full.search.best(), core, inCore), share: 0 };
      yield [full];
    }
    const actual = needed(full);
    if (actual === tracks || round === mostRounds) return full;
    tracks = actual;
  }
}

/** What the second order scales with from pitch to pitch: twelve times the mean square distance of a cell from the centre. */
const spread = ({ rows, columns }: CoreGrid, [x, y]: Pitch): number =>
  x * x * (columns * columns - 1) + y * y * (rows * rows - 1) || 1;

const unitsOf = (capacitors: readonly Capacitor[]): number => capacitors.reduce((sum, { units }) => sum + units, 0);

const dealtNets = (capacitors: readonly Capacitor[]): DealtNet[] =>
  capacitors.map(({ name, role, weight, units }) => ({ name, weight: role === 'bit' ? weight : 0, units }));

/** Nets of a column when units stand anywhere: a net is in every column once it has as many units. */
const columnNetsOfChance = (nets: readonly DealtNet[], { columns }: CoreGrid): number =>
  nets.reduce((sum, { units }) => sum + Math.min(units, columns) / columns, 0);

/** The best of a stage's search as cells and ring units. */
function placedOf(setting: Setting, { grid, search }: Stage): Placed {
  const { netOfCell } = search.best();
  const name = (cell: number) => setting.inCore[netOfCell[cell]]?.name ?? '-';
  const cells = Array.from({ length: grid.rows }, (_, row) =>
    Array.from({ length: grid.columns }, (_, column) => name(row * grid.columns + column)),
  );
  return withRingUnits(setting.rules, setting.capacitors, cells, setting.spec.rings, setting.pins);
}

/**
 * Puts what has no cell into the ring row between the core and the bits' pins: at its left end, or where a free track lies beside it if
 * more rings follow.
 */
function withRingUnits(
  rules: StyledRules,
  capacitors: readonly Capacitor[],
  cells: readonly (readonly string[])[],
  rings: number,
  pins: PinsWanted,
): Placed {
  const outside = capacitors.filter(({ name }) => !cells.some((row) => row.includes(name)));
  const bare: Placed = asWired({ cells, capacitors, ringUnits: [], rings }, pins);
  const column = outside.length === 0 ? 0 : ringColumn(rules, bare);
  const ringUnits = outside.map(({ name }): RingUnit => ({ capacitor: name, row: cells.length, column }));
  return asWired({ ...bare, ringUnits }, pins);
}

export interface DrawOptions {
  /** False: figures of the placement alone, on the floorplan's own pitch. */
  readonly wired?: boolean;
  /** Keep the floorplan's own hookup where it fits its cells. */
  readonly keepHookup?: boolean;
  readonly tracksAtLeast?: number;
  /** Wires and figures, but no polygons. */
  readonly measureOnly?: boolean;
  /** False: no capacitances of what is drawn. */
  readonly extracted?: boolean;
  /** What an exact search has proved of a core. */
  readonly known?: LeastOfReflected;
  /** Arrays to draw for the yield, where the array states limits; absent: no yield, and no limit is looked at. */
  readonly samples?: number;
}

/**
 * Wires, draws, checks and measures a placed array; its cells stay as they are.
 * @throws Infeasible where the rules or the tracks asked for leave no room.
 */
export function drawFloorplan(floorplan: Floorplan, technology: Technology, options: DrawOptions = {}): Drawn {
  const { wired = true, keepHookup = false, tracksAtLeast, measureOnly = false } = options;
  const { extracted = true, known, samples } = options;
  const { cells, capacitors } = floorplan;
  const { array } = floorplan;
  const gradient = array?.gradient ?? technology.gradient;
  const name = floorplan.name ?? `cdac${capacitors.filter((capacitor) => capacitor.role === 'bit').length}`;
  const notes: string[] = [];
  const bits = new Set(capacitors.filter((capacitor) => capacitor.role === 'bit').map((capacitor) => capacitor.name));
  const finish = (
    core: Core,
    rest: Partial<Floorplan>,
    figures: Pick<Metrics, 'hookup' | 'area_um2'>,
    polygons?: Polygons,
  ): Drawn => {
    const analysed = analyseGradient({ core, capacitors, cells, gradient });
    const { leastSquares: _, meetsBound, ...metricsGradient } = analysed;
    const placement =
      floorplan.placement &&
      withProof(floorplan.placement, () => {
        if (meetsBound) return 'zero-first-order';
        const inCore = capacitors.filter(({ name }) => cells.some((row) => row.includes(name)));
        const sought = floorplan.placement?.emphasis === 'gradient' && inCore.every(({ role }) => role === 'bit');
        return sought ? provedClass(core, inCore, cells, known) : undefined;
      });
    const complete: Floorplan = { ...floorplan, name, core, ...(placement && { placement }), ...rest, technology };
    const extraction = polygons && extracted ? extractCoupling(polygons) : undefined;
    if (typeof extraction === 'string') notes.push(`The capacitances of the wires are not known: ${extraction}.`);
    const wired = typeof extraction === 'object' ? extraction : undefined;
    const parasitics =
      wired && parasiticFigures(wired, capacitors, technology.unit.capacitance_fF, array?.topLoad_fF ?? 0);
    const timed = polygons && wired && circuitOf(polygons, wired.coupling, array?.drive);
    const placed = { core, capacitors, cells };
    const coupling = parasitics?.excess ?? new Map<string, number>();
    const analysis = analyseMismatch(placed, array?.mismatch ?? unitMismatch(technology));
    const { figures: mismatch, ...covariances } = analysis;
    const total = () => totalFigures({ ...placed, gradient, coupling, mismatch: analysis });
    const { limits } = array ?? {};
    const asked = limits && samples !== undefined && !measureOnly ? { limits, samples } : undefined;
    const share =
      asked &&
      analyseYield({
        ...placed,
        gradient,
        ...(parasitics && { coupling }),
        covariances,
        ...asked,
        seed: array?.seed ?? 1,
      });
    const metrics: Metrics = {
      format: 'steelyard/metrics',
      version: 1,
      name,
      core,
      ...(placement?.status && { status: placement.status }),
      gradient: metricsGradient,
      mismatch,
      ...figures,
      ...(parasitics && { parasitic: withDelays(parasitics.figures, timed?.timings ?? []), total: total() }),
      ...(share && { yield: share }),
    };
    const judged = polygons && judgePolygons(polygons);
    const findings = [...checkFloorplan(complete), ...(judged?.findings ?? [])];
    return {
      floorplan: complete,
      ...(polygons && { polygons }),
      metrics,
      gradient: analysed,
      ...(wired && { extraction: wired }),
      ...(parasitics && { parasitics }),
      ...(timed && { circuit: timed.circuit }),
      covariances,
      findings,
      ...(judged && { neighbourhood: judged.neighbourhood }),
      missed: asked && share ? missedLimits(asked.limits, share.share, total()) : [],
      warnings: [],
      notes,
    };
  };
  if (!wired) return finish(floorplan.core, {}, { hookup: { columnNets: columnNets(cells, bits) } });

  const rules = drawingRules(technology);
  const rings = array?.rings ?? ringsToReach(technology);
  const pins = pinsWanted(capacitors, array?.pins);
  const ringRow = pins.bits === 'bottom' ? cells.length : -1;
  const { ringUnits } = floorplan;
  const stands = ringUnits?.every(({ row }) => row === ringRow);
  if (stands === false)
    notes.push("Units in the ring were moved: they are wired in the row between the core and the bits' pins.");
  const placed: Placed =
    ringUnits && stands
      ? { cells, capacitors, ringUnits, rings }
      : withRingUnits(rules, capacitors, cells, rings, pins);
  const facing = asWired(placed, pins);
  const { hookup, unfit, judged } = wire(rules, facing, pins, {
    ...(keepHookup && floorplan.hookup && { given: planAsWired(floorplan.hookup, pins) }),
    ...(array?.tracksPerChannel !== undefined && { tracks: array.tracksPerChannel }),
    ...(tracksAtLeast !== undefined && { atLeast: tracksAtLeast }),
  });
  if (unfit !== undefined) notes.push(`The floorplan's hookup does not fit its cells (${unfit}); it was routed anew.`);
  const { frame } = hookup;
  const polygons = measureOnly
    ? undefined
    : drawPolygons(name, technology, facing, hookup, { fillTop: array?.fillTop ?? 'TOP', pins });
  const core: Core = { rows: frame.rows, columns: frame.columns, pitch_um: [um(frame.pitch[0]), um(frame.pitch[1])] };
  const drawnAs = {
    ...(array && { array: { ...array, ...(hookup.style === 'channel' && { tracksPerChannel: hookup.frame.tracks }) } }),
    ...(placed.ringUnits.length > 0 && { ringUnits: placed.ringUnits }),
    hookup: planAsWired(planOf(hookup), pins),
  };
  const area_um2 = figure(um(frame.blockWidth) * um(frame.height));
  return finish(core, drawnAs, { hookup: hookupFigures(facing, hookup, judged), area_um2 }, polygons);
}

/** The figures of bits with how fast these are. */
function withDelays(figures: ParasiticFigures, timings: readonly BitTiming[]): ParasiticFigures {
  return {
    ...figures,
    bits: figures.bits.map((bit) => ({ ...bit, ...timings.find(({ name }) => name === bit.name) })),
  };
}

/** @param provedFor asked where the search came to its end by itself: the class in which the placement is proved to be the best. */
function withProof(placement: Placement, provedFor: () => PlacementClass | undefined): Placement {
  const proved = placement.status === 'effort-spent' ? provedFor() : undefined;
  if (proved === undefined) return placement;
  const { work = 0, ...rest } = placement;
  return { ...rest, status: 'proved', proof: { figure: 'gradient.second.inl_lsb', class: proved }, work };
}
