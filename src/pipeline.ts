import { bentTerm } from './array/bent-term.js';
import { candidateCores, type CoreGrid } from './array/core-grid.js';
import { checkFloorplan } from './check/floorplan.js';
import { checkPolygons } from './check/polygons.js';
import type { Finding } from './check/finding.js';
import { figure } from './core/figure.js';
import { InputError } from './core/problem.js';
import { Random } from './core/random.js';
import { um } from './core/units.js';
import { drawPolygons } from './geometry/draw.js';
import { columnNets, columnNetsTerm } from './hookup/column-nets.js';
import { hookupFigures } from './hookup/figures.js';
import { misfit } from './hookup/misfit.js';
import { type Placed, type Plan, planHookup } from './hookup/plan.js';
import { drawingRules, pitchOf, type Rules } from './hookup/rules.js';
import { type Hookup, layWires } from './hookup/wires.js';
import { analyseGradient, type GradientFigures } from './linearity/analyse-gradient.js';
import { firstOrderTerm, secondOrderTerm } from './linearity/cost-terms.js';
import { columnCorrelation, comparisonLength, correlationOf } from './linearity/correlation.js';
import { mismatchTerm } from './linearity/mismatch-term.js';
import { secondOrderInl } from './linearity/exact-inl.js';
import { lowerBound } from './linearity/lower-bound.js';
import { mismatchFigures } from './linearity/mismatch.js';
import { dealBlocks, type DealtNet } from './placement/dealing.js';
import { ringsToReach, unitMismatch } from './spec/options.js';
import { workFor } from './placement/effort.js';
import { arrangementOf, type Weighing, weighings, workOf } from './placement/emphasis.js';
import { firstOrderBound } from './placement/first-order-bound.js';
import { Search } from './placement/search.js';
import type { Effort } from './spec/array-spec.js';
import type { Capacitor, Core, Floorplan, Placement, RingUnit } from './spec/floorplan.js';
import type { Metrics } from './spec/metrics.js';
import type { Polygons } from './spec/polygons.js';
import type { ResolvedArray, ResolvedSpec } from './spec/resolve.js';
import type { Technology } from './spec/technology.js';

export interface PlaceRequest {
  readonly array: ResolvedArray;
  /** Cells only, no wires; on a pitch of one's own where given. */
  readonly floorplanOnly?: { readonly pitch_um?: readonly [x: number, y: number] };
}

/** A placed array, wired, drawn and measured. `polygons` and what comes of them are absent without wires. */
export interface Drawn {
  readonly floorplan: Floorplan;
  readonly polygons?: Polygons;
  readonly metrics: Metrics;
  readonly gradient: GradientFigures;
  readonly findings: readonly Finding[];
  /** What the user should know before using the result; a sentence each. */
  readonly warnings: readonly string[];
  /** What was decided on the way; a sentence each. */
  readonly notes: readonly string[];
}

/** A resumable run. It depends on the request alone, not on how the work is cut into steps. */
export interface PlaceRun {
  /** Runs some `work` trial swaps. Returns whether there is more to do. */
  step(work: number): boolean;
  /** 0 to 1. */
  readonly progress: number;
  /** Whether a placement exists that `finish` could draw. */
  readonly started: boolean;
  /** Trial swaps so far. */
  readonly work: number;
  /** The best so far, wired, drawn and measured. @throws Infeasible where the tracks asked for do not suffice. */
  finish(interrupted: boolean): Drawn;
}

type Pitch = readonly [x: number, y: number];

/** A search on one core at one pitch; `share` of the whole run's work. */
interface Stage {
  readonly grid: CoreGrid;
  readonly pitch: Pitch;
  /** Tracks per channel that the pitch is made for. */
  readonly tracks: number;
  readonly search: Search;
  readonly share: number;
}

interface Setting {
  readonly spec: ResolvedSpec;
  readonly technology: Technology;
  readonly capacitors: readonly Capacitor[];
  /** Those with units inside the core. */
  readonly inCore: readonly Capacitor[];
  readonly rules: Rules;
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
/** One um of first order against one um^2 of second. */
const FIRST_BEFORE_ALL = 1e3;

/** Full searches at a pitch before the tracks that the wires turn out to need are taken as they are; only one where it is long. */
const roundsFor = (units: number): number => (units < 2000 ? 2 : 1);

/**
 * Starts a placement.
 * @throws InputError where the request contradicts itself, Infeasible where it cannot be met.
 */
export function startPlacement(request: PlaceRequest): PlaceRun {
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
  return new Run({
    spec,
    technology,
    capacitors,
    inCore,
    rules: drawingRules(technology),
    wired,
    ...(pitch && { pitch }),
  });
}

class Run implements PlaceRun {
  readonly #setting: Setting;
  readonly #stages: Generator<Stage, Stage, void>;
  #stage: Stage;
  #done = false;
  #workBefore = 0;
  #shareBefore = 0;

  constructor(setting: Setting) {
    this.#setting = setting;
    this.#stages = stagesOf(setting);
    this.#stage = this.#stages.next().value;
  }

  get started(): boolean {
    return this.#done || this.work > 0;
  }

  get progress(): number {
    return this.#done ? 1 : Math.min(0.99, this.#shareBefore + this.#stage.share * this.#stage.search.progress);
  }

  get work(): number {
    return this.#workBefore + (this.#done ? 0 : this.#stage.search.work);
  }

  step(work: number): boolean {
    if (this.#done) return false;
    const { search, share } = this.#stage;
    if (search.step(work)) return true;
    this.#workBefore += search.work;
    this.#shareBefore += share;
    const next = this.#stages.next();
    this.#done = next.done === true;
    this.#stage = next.value;
    return !this.#done;
  }

  finish(interrupted: boolean): Drawn {
    const { spec, technology, capacitors, inCore, wired } = this.#setting;
    const { grid, pitch, tracks, search } = this.#stage;
    const { dealing } = search.best();
    const placed = placedOf(this.#setting, this.#stage);
    const placement: Placement = {
      method: dealing.exactZero ? 'annealed zero-first-order deal' : 'annealed deal',
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
    const drawn = drawFloorplan(floorplan, technology, { wired, tracksAtLeast: least });
    if (dealing.exactZero) return drawn;
    const bound = firstOrderBound(grid, dealtNets(inCore), pitch);
    const floor = bound > 0 ? ` No placement on this core comes below ${figure(bound)} LSB per ppm/um.` : '';
    return { ...drawn, warnings: [`The first order is not 0: ${dealing.because}${floor}`, ...drawn.warnings] };
  }
}

/**
 * The searches of a run, one after the other: a short one per orientation of the core, which decides by the lower absolute second order,
 * then the fewer columns; a short one with the emphasis's own weights, which tells how many tracks the wires will need; the full one at
 * that pitch, once more if it needs another number of tracks.
 */
function* stagesOf(setting: Setting): Generator<Stage, Stage, void> {
  const { spec, rules, inCore, wired } = setting;
  const emphasis = weighings[spec.emphasis];
  const bits = setting.capacitors.filter((capacitor) => capacitor.role === 'bit');
  const total = inCore.reduce((sum, capacitor) => sum + capacitor.units, 0);
  const dealt = dealtNets(inCore);
  const pitchFor = (tracks: number): Pitch => {
    const [x, y] = pitchOf(rules, tracks);
    return setting.pitch ?? [um(x), um(y)];
  };
  const stage = (
    grid: CoreGrid,
    tracks: number,
    cost: Weighing,
    relative: number,
    effort: Effort,
    share: number,
  ): Stage => {
    const pitch = pitchFor(tracks);
    const reference = relative * spread(grid, pitch);
    const bound = lowerBound({ ...grid, pitch_um: pitch }, bits);
    const { starts, workPerStart } = workOf(cost, workFor(effort, total), total);
    const dispersed = chessboardSigma(total);
    const correlation = correlationOf(grid.rows, grid.columns, pitch, comparisonLength(pitch));
    const search = new Search({
      deals: (start) =>
        dealBlocks({
          ...grid,
          nets: dealt,
          random: new Random(spec.seed, start),
          arrangement: arrangementOf(cost, start, () => columnCorrelation(correlation)),
        }),
      terms: (deal) => [
        // Where the first order is 0 by the deal this term stays 0; elsewhere it comes before all others.
        { term: firstOrderTerm(deal, pitch), weight: FIRST_BEFORE_ALL / reference },
        {
          term: bentTerm(secondOrderTerm(deal, pitch), cost.limit * reference, BEYOND_LIMIT),
          weight: cost.second / reference,
        },
        ...(cost.nets > 0 ? [{ term: columnNetsTerm(deal), weight: cost.nets / fewestNets(grid) }] : []),
        ...(cost.mismatch > 0
          ? [
              {
                term: bentTerm(mismatchTerm(deal, correlation), cost.mismatchLimit * dispersed, BEYOND_LIMIT),
                weight: cost.mismatch / dispersed,
              },
            ]
          : []),
      ],
      starts,
      workPerStart,
      seed: spec.seed,
      stopWhen: ({ dealing }) =>
        cost === weighings.gradient && bound?.squared === secondOrderInl(dealing.deal, pitch).squared,
    });
    return { grid, pitch, tracks, search, share };
  };

  const fewestNets = ({ rows }: CoreGrid) => bits.reduce((sum, bit) => sum + Math.ceil(bit.units / rows), 0);

  let tracks = spec.tracksPerChannel ?? Math.min(6, 1 + Math.floor(inCore.length / 4));
  const grids = spec.core
    ? [{ rows: spec.core.rows, columns: spec.core.columns }]
    : candidateCores(
        dealt.filter((net) => net.weight > 0).map((net) => net.units),
        total - bits.reduce((sum, bit) => sum + bit.units, 0),
        pitchFor(tracks),
      );
  const mostRounds = roundsFor(total);
  // What each orientation can have, and with what the choice between them begins.
  const probes: { grid: CoreGrid; relative: number; least: number }[] = [];
  for (const grid of grids) {
    const probe = stage(grid, tracks, weighings.gradient, 1, 'quick', 0.15 / grids.length);
    yield probe;
    const least = secondOrderInl(probe.search.best().dealing.deal, probe.pitch).inl_lsb_per_ppm_per_um2;
    probes.push({ grid, least, relative: least > 0 ? least / spread(grid, probe.pitch) : 1 });
  }
  const bySecondOrder = probes.reduce((a, b) => (b.least < a.least ? b : a));
  const near = probes.filter(({ least }) => least <= emphasis.orientation * bySecondOrder.least);
  const contenders = emphasis.orientation === 1 ? [bySecondOrder] : near;
  let { grid, relative } = bySecondOrder;
  const needed = (of: Stage) =>
    wired ? planHookup(placedOf(setting, of), spec.tracksPerChannel).channels[0].length : of.tracks;
  const scouts: Stage[] = [];
  for (const probe of contenders) {
    const scout = stage(probe.grid, tracks, emphasis, probe.relative, 'quick', 0.1);
    yield scout;
    scouts.push(scout);
  }
  // Between orientations as good as each other the fewer wires decide.
  const netsOf = ({ search }: Stage) => columnNetsTerm(search.best().dealing.deal).value();
  const scout = scouts.reduce((a, b) => (netsOf(b) < netsOf(a) ? b : a));
  ({ grid, relative } = probes.find((probe) => probe.grid === scout.grid)!);
  if (spec.tracksPerChannel === undefined) tracks = needed(scout);
  for (let round = 1; ; round++) {
    const full = stage(grid, tracks, emphasis, relative, spec.effort, 0.75 / mostRounds);
    yield full;
    const actual = needed(full);
    if (actual === tracks || round === mostRounds) return full;
    tracks = actual;
  }
}

/** What the second order scales with from pitch to pitch: twelve times the mean square distance of a cell from the centre. */
const spread = ({ rows, columns }: CoreGrid, [x, y]: Pitch): number =>
  x * x * (columns * columns - 1) + y * y * (rows * rows - 1) || 1;

const dealtNets = (capacitors: readonly Capacitor[]): DealtNet[] =>
  capacitors.map(({ name, role, weight, units }) => ({ name, weight: role === 'bit' ? weight : 0, units }));

/** The best of a stage's search as cells and ring units. */
function placedOf(setting: Setting, { grid, search }: Stage): Placed {
  const { netOfCell } = search.best();
  const name = (cell: number) => setting.inCore[netOfCell[cell]]?.name ?? '-';
  const cells = Array.from({ length: grid.rows }, (_, row) =>
    Array.from({ length: grid.columns }, (_, column) => name(row * grid.columns + column)),
  );
  return withRingUnits(setting.capacitors, cells, setting.spec.rings);
}

/** Puts what has no cell into the ring row below the core: at its left end, or where a free track lies beside it if more rings follow. */
function withRingUnits(capacitors: readonly Capacitor[], cells: readonly (readonly string[])[], rings: number): Placed {
  const outside = capacitors.filter(({ name }) => !cells.some((row) => row.includes(name)));
  const bare: Placed = { cells, capacitors, ringUnits: [], rings };
  if (outside.length === 0) return bare;
  const free = rings > 1 ? planHookup(bare).channels.findIndex((list) => list.includes('VSS')) : 0;
  const column = Math.min(Math.max(free, 0), cells[0].length - 1);
  const ringUnits = outside.map(({ name }): RingUnit => ({ capacitor: name, row: cells.length, column }));
  return { ...bare, ringUnits };
}

export interface DrawOptions {
  /** False: figures of the placement alone, on the floorplan's own pitch. */
  readonly wired?: boolean;
  /** Keep the floorplan's own hookup where it fits its cells. */
  readonly keepHookup?: boolean;
  readonly tracksAtLeast?: number;
}

/**
 * Wires, draws, checks and measures a placed array; its cells stay as they are.
 * @throws Infeasible where the rules or the tracks asked for leave no room.
 */
export function drawFloorplan(floorplan: Floorplan, technology: Technology, options: DrawOptions = {}): Drawn {
  const { wired = true, keepHookup = false, tracksAtLeast } = options;
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
    const placement = floorplan.placement && provedIf(meetsBound, floorplan.placement);
    const complete: Floorplan = { ...floorplan, name, core, ...(placement && { placement }), ...rest, technology };
    const metrics: Metrics = {
      format: 'steelyard/metrics',
      version: 1,
      name,
      core,
      ...(placement?.status && { status: placement.status }),
      gradient: metricsGradient,
      mismatch: mismatchFigures({ core, capacitors, cells }, array?.mismatch ?? unitMismatch(technology)),
      ...figures,
    };
    const findings = [...checkFloorplan(complete), ...(polygons ? checkPolygons(polygons) : [])];
    return {
      floorplan: complete,
      ...(polygons && { polygons }),
      metrics,
      gradient: analysed,
      findings,
      warnings: [],
      notes,
    };
  };
  if (!wired) return finish(floorplan.core, {}, { hookup: { columnNets: columnNets(cells, bits) } });

  const rules = drawingRules(technology);
  const rings = array?.rings ?? ringsToReach(technology);
  const placed: Placed = floorplan.ringUnits
    ? { cells, capacitors, ringUnits: floorplan.ringUnits, rings }
    : withRingUnits(capacitors, cells, rings);
  let plan: Plan | undefined;
  let buses: readonly string[] | undefined;
  if (keepHookup && floorplan.hookup) {
    const reason = misfit(placed, floorplan.hookup);
    if (reason === undefined) {
      plan = floorplan.hookup as Plan;
      buses = floorplan.hookup.buses.filter((net) => net !== 'VSS');
    } else notes.push(`The floorplan's hookup does not fit its cells (${reason}); it was routed anew.`);
  }
  if (plan === undefined) {
    plan = planHookup(placed, array?.tracksPerChannel);
    const width = plan.channels[0].length;
    if (tracksAtLeast !== undefined && width < tracksAtLeast) plan = planHookup(placed, tracksAtLeast);
  }
  const hookup: Hookup = layWires(rules, placed, plan, buses);
  const { frame } = hookup;
  const polygons = drawPolygons(name, technology, rules, placed, hookup, array?.fillTop ?? 'TOP');
  const core: Core = { rows: frame.rows, columns: frame.columns, pitch_um: [um(frame.pitch[0]), um(frame.pitch[1])] };
  const drawnAs = {
    ...(array && { array: { ...array, tracksPerChannel: frame.tracks } }),
    ...(placed.ringUnits.length > 0 && { ringUnits: placed.ringUnits }),
    hookup: { sides: plan.sides, channels: plan.channels, buses: ['VSS', ...hookup.buses] },
  };
  const area_um2 = figure(um(frame.width) * um(frame.height));
  return finish(core, drawnAs, { hookup: hookupFigures(placed, hookup), area_um2 }, polygons);
}

function provedIf(meetsBound: boolean, placement: Placement): Placement {
  if (!meetsBound || placement.status !== 'effort-spent') return placement;
  const { work = 0, ...rest } = placement;
  return { ...rest, status: 'proved', proof: { figure: 'gradient.second.inl_lsb', class: 'zero-first-order' }, work };
}
