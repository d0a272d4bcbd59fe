import type { HookupPlan } from '../spec/floorplan.js';
import type { PinsWanted } from '../spec/pins.js';
import type { Technology } from '../spec/technology.js';
import { channelLengths, channelPitch } from './channel-frame.js';
import { type ChannelRules, channelRules } from './channel-rules.js';
import { type ChannelHookup, layChannelWires } from './channel-wires.js';
import { misfit } from './misfit.js';
import { type Judged, type Placed, type Plan, planHookup } from './plan.js';

/** What tells the styles apart: everything that asks which one it is stands in this file or draws polygons. */
export type StyledRules = ChannelRules;
export type Hookup = ChannelHookup;

/**
 * Derives the dimensions of a drawing from a technology's rules.
 * @throws Infeasible where the rules leave no room: which rule, and what would make it possible.
 */
export const drawingRules = (technology: Technology): StyledRules => channelRules(technology);

/** Column and row pitch in nanometres for a number of tracks per channel. */
export const pitchOf = (rules: StyledRules, tracks: number): readonly [x: number, y: number] =>
  channelPitch(rules, tracks);

/** Tracks per channel that a placement's wires take. @throws Infeasible where those asked for do not suffice. */
export const tracksNeeded = (rules: StyledRules, placed: Placed, asked?: number): number =>
  planHookup(placed, channelLengths(rules), asked).channels[0].length;

/** The column of the ring row below the core where what has no cell can be wired; `bare`: the placement without it. */
export function ringColumn(rules: StyledRules, bare: Placed): number {
  const free =
    bare.rings > 1 ? planHookup(bare, channelLengths(rules)).channels.findIndex((list) => list.includes('VSS')) : 0;
  return Math.min(Math.max(free, 0), bare.cells[0].length - 1);
}

/**
 * Wires a placement: by the plan given where it fits, else anew.
 * @param tracks asked for; `atLeast`: what the pitch was made for.
 * @returns `unfit`: why the plan given does not fit; `judged`: of a plan that was made, how good it is.
 * @throws Infeasible where the tracks asked for do not suffice, or the pins do not fit the bottom edge as they are wanted.
 */
export function wire(
  rules: StyledRules,
  placed: Placed,
  pins: PinsWanted,
  { given, tracks, atLeast = 0 }: { given?: HookupPlan; tracks?: number; atLeast?: number },
): { readonly hookup: Hookup; readonly unfit?: string; readonly judged?: Judged } {
  const unfit = given && misfit(placed, given);
  if (given !== undefined && unfit === undefined) {
    const buses = given.buses.filter((net) => net !== 'VSS');
    return { hookup: layChannelWires(rules, placed, given as Plan, pins, buses) };
  }
  const lengths = channelLengths(rules);
  const plan = planHookup(placed, lengths, tracks);
  const wide = plan.channels[0].length < atLeast ? planHookup(placed, lengths, atLeast) : plan;
  const { proved, bound } = wide;
  return {
    hookup: layChannelWires(rules, placed, wide, pins),
    judged: { proved, bound: { ...bound, tracks: plan.bound.tracks } },
    ...(unfit !== undefined && { unfit }),
  };
}

/** A hookup as a floorplan's file has it. */
export const planOf = ({ plan, buses }: Hookup): HookupPlan => ({
  sides: plan.sides,
  channels: plan.channels,
  buses: ['VSS', ...buses],
});
