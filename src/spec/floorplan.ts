import type { ArraySpec, Emphasis } from './array-spec.js';
import type { Technology } from './technology.js';

export interface Capacitor {
  readonly name: string;
  readonly role: 'bit' | 'termination';
  readonly weight: number;
  readonly units: number;
}

export interface Core {
  readonly rows: number;
  readonly columns: number;
  readonly pitch_um: readonly [x: number, y: number];
}

/** A unit in the ring: row -1 is the ring row above the core, row `rows` the one below. */
export interface RingUnit {
  readonly capacitor: string;
  readonly row: number;
  readonly column: number;
}

/** How the cells came about. What a search was told and how it ended is absent where none was made. */
export interface Placement {
  readonly method: string;
  readonly seed?: number;
  readonly emphasis?: Emphasis;
  readonly status?: 'proved' | 'effort-spent' | 'interrupted';
  readonly proof?: { readonly figure: string; readonly class: 'zero-first-order' | 'point-reflected' };
  readonly work?: number;
}

/** With channels: which side each unit hooks to, what each channel holds from left to right, and the buses from the ring down. */
export interface ChannelPlan {
  readonly sides: readonly (readonly string[])[];
  readonly channels: readonly (readonly string[])[];
  readonly columns?: undefined;
  readonly buses: readonly string[];
}

/** Under plates: the nets with a trunk below each column, from left to right, and the buses from the ring down. */
interface ColumnsPlan {
  readonly columns: readonly (readonly string[])[];
  readonly channels?: undefined;
  readonly buses: readonly string[];
}

export type HookupPlan = ChannelPlan | ColumnsPlan;

/**
 * A placed array. `cells` run from the top row down, "-" is a fill dummy. Only core, capacitors and cells are there in floorplans of
 * other people; technology too where it is to be drawn.
 */
export interface Floorplan {
  readonly format: 'steelyard/floorplan';
  readonly version: 1;
  readonly name?: string;
  readonly array?: ArraySpec;
  readonly core: Core;
  readonly capacitors: readonly Capacitor[];
  readonly cells: readonly (readonly string[])[];
  readonly ringUnits?: readonly RingUnit[];
  readonly placement?: Placement;
  readonly hookup?: HookupPlan;
  readonly technology?: Technology;
}
