import type { Capacitor, HookupPlan } from '../spec/floorplan.js';
import type { PinsWanted } from '../spec/pins.js';
import type { Technology } from '../spec/technology.js';
import { channelLengths, channelPitch } from './channel-frame.js';
import { type ChannelRules, channelRules } from './channel-rules.js';
import { type ChannelHookup, layChannelWires } from './channel-wires.js';
import { misfit } from './misfit.js';
import { type Judged, type Placed, type Plan, planHookup } from './plan.js';
import { underPlatePitch } from './under-plate-frame.js';
import { checkTrunks, mostTrunks, planColumns, underPlateMisfit } from './under-plate-plan.js';
import { type UnderPlateRules, underPlateRules } from './under-plate-rules.js';
import { layUnderPlateWires, type UnderPlateHookup } from './under-plate-wires.js';

/** What tells the styles apart: everything that asks which one it is stands in this file or draws polygons. */
export type StyledRules = ChannelRules | UnderPlateRules;
export type Hookup = ChannelHookup | UnderPlateHookup;

/**
 * Derives the dimensions of a drawing from a technology's rules.
 * @throws Infeasible where the rules leave no room: which rule, and what would make it possible.
 */
export const drawingRules = (technology: Technology): StyledRules =>
  technology.hookup === 'channel' ? channelRules(technology) : underPlateRules(technology);

/** Column and row pitch in nanometres; `tracks` per channel widen it. */
export const pitchOf = (rules: StyledRules, tracks: number): readonly [x: number, y: number] =>
  rules.hookup === 'channel' ? channelPitch(rules, tracks) : underPlatePitch(rules);

/** Tracks per channel that a placement's wires take, 1 under plates. @throws Infeasible where those asked for do not suffice. */
export const tracksNeeded = (rules: StyledRules, placed: Placed, asked?: number): number =>
  rules.hookup === 'channel' ? planHookup(placed, channelLengths(rules), asked).channels[0].length : 1;

/** The most nets, fill among them, that may have units in one column of the core. */
export const mostColumnNets = (rules: StyledRules, asked?: number): number =>
  rules.hookup === 'channel' ? Infinity : mostTrunks(rules, asked);

/**
 * Refuses an array whose nets cannot all have a trunk below the columns, however its units are placed.
 * @param nets those with units in the core. @param grids cores that are thought of.
 * @throws Infeasible
 */
export function refuseTooFewTrunks(
  rules: StyledRules,
  grids: readonly { readonly rows: number; readonly columns: number }[],
  nets: readonly Capacitor[],
  asked?: number,
): void {
  if (rules.hookup === 'under-plate') checkTrunks(rules, grids, nets, asked);
}

/** The column of the ring row below the core where what has no cell can be wired; `bare`: the placement without it. */
export function ringColumn(rules: StyledRules, bare: Placed): number {
  const { cells, rings } = bare;
  const free = (): number => {
    if (rules.hookup === 'channel')
      return planHookup(bare, channelLengths(rules)).channels.findIndex((list) => list.includes('VSS'));
    const nets = cells[0].map((_, column) => new Set(cells.map((names) => names[column])).size);
    return nets.findIndex((count) => count < rules.places.length);
  };
  return rings > 1 || rules.hookup === 'under-plate' ? Math.min(Math.max(free(), 0), cells[0].length - 1) : 0;
}

interface Wiring {
  readonly hookup: Hookup;
  /** Why the plan given does not fit. */
  readonly unfit?: string;
  /** Of a plan that was made for channels, how good it is. */
  readonly judged?: Judged;
}

/**
 * Wires a placement: by the plan given where it fits, else anew.
 * @param tracks asked for; `atLeast`: what the pitch was made for.
 * @throws Infeasible where the tracks asked for do not suffice, or the pins do not fit the bottom edge as they are wanted.
 */
export function wire(
  rules: StyledRules,
  placed: Placed,
  pins: PinsWanted,
  asked: { readonly given?: HookupPlan; readonly tracks?: number; readonly atLeast?: number },
): Wiring {
  const { given } = asked;
  const unfit = given && whyUnfit(rules, placed, given);
  if (given === undefined || unfit !== undefined)
    return { ...wiredAnew(rules, placed, pins, asked), ...(unfit !== undefined && { unfit }) };
  const buses = given.buses.filter((net) => net !== 'VSS');
  if (rules.hookup === 'channel') return { hookup: layChannelWires(rules, placed, given as Plan, pins, buses) };
  return { hookup: layUnderPlateWires(rules, placed, { columns: given.columns ?? [] }, pins, buses) };
}

function whyUnfit(rules: StyledRules, placed: Placed, given: HookupPlan): string | undefined {
  if (rules.hookup === 'channel')
    return given.columns === undefined ? misfit(placed, given) : 'its trunks run under the plates';
  return given.columns === undefined ? 'its trunks run in channels' : underPlateMisfit(rules, placed, given);
}

function wiredAnew(
  rules: StyledRules,
  placed: Placed,
  pins: PinsWanted,
  { tracks, atLeast = 0 }: { readonly tracks?: number; readonly atLeast?: number },
): Wiring {
  if (rules.hookup === 'under-plate')
    return { hookup: layUnderPlateWires(rules, placed, planColumns(rules, placed, pins, tracks), pins) };
  const lengths = channelLengths(rules);
  const plan = planHookup(placed, lengths, tracks);
  const wide = plan.channels[0].length < atLeast ? planHookup(placed, lengths, atLeast) : plan;
  const { proved, bound } = wide;
  return {
    hookup: layChannelWires(rules, placed, wide, pins),
    judged: { proved, bound: { ...bound, tracks: plan.bound.tracks } },
  };
}

/** A hookup as a floorplan's file has it. */
export function planOf(hookup: Hookup): HookupPlan {
  const buses = ['VSS', ...hookup.buses];
  if (hookup.style === 'under-plate') return { columns: hookup.plan.columns, buses };
  return { sides: hookup.plan.sides, channels: hookup.plan.channels, buses };
}

/** Places side by side: tracks of every channel, or the most trunks below one column. */
export const tracksOf = (hookup: Hookup): number =>
  hookup.style === 'channel'
    ? hookup.frame.tracks
    : hookup.plan.columns.reduce((most, list) => Math.max(most, list.length), 0);
