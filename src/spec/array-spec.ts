import type { Drive, Limits } from './converter.js';
import type { Gradient } from './technology.js';

export type Emphasis = 'balanced' | 'gradient' | 'dispersed' | 'wiring';
export type Effort = 'quick' | 'normal' | 'thorough';

/** An array file. As resolved (in a floorplan) every default is filled in. */
export interface ArraySpec {
  readonly format: 'steelyard/array';
  readonly version: 1;
  readonly name?: string;
  readonly bits?: number;
  readonly weights?: readonly number[];
  /** A shipped template's name, or a file relative to this one. */
  readonly technology?: string;
  readonly hookup?: 'channel' | 'under-plate';
  readonly unit_fF?: number;
  readonly core?: { readonly rows: number; readonly columns: number; readonly pitch_um?: readonly [number, number] };
  readonly tracksPerChannel?: number;
  readonly rings?: number;
  readonly termination?: 'ring' | 'core' | 'none';
  readonly fillTop?: 'TOP' | 'VSS';
  readonly emphasis?: Emphasis;
  readonly effort?: Effort;
  readonly seed?: number;
  readonly balance?: 'on' | 'off';
  readonly gradient?: Gradient;
  readonly mismatch?: {
    readonly localSigma_percent: number;
    readonly correlatedSigma_percent: number;
    readonly correlationLength_um: number;
  };
  readonly pins?: {
    readonly bits?: {
      readonly side?: 'bottom' | 'top';
      readonly order?: readonly string[];
      readonly pitch_um?: number;
    };
    readonly top?: { readonly side?: 'bottom' | 'top' };
  };
  readonly pair?: 'none' | 'mirrored';
  readonly drive?: Drive;
  /** What hangs on `TOP` outside the array. */
  readonly topLoad_fF?: number;
  readonly limits?: Limits;
}
