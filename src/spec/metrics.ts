import type { Placement } from './floorplan.js';

/** A figure that is exactly 0 has no worst direction, shape or code. */
export interface FirstOrder {
  readonly inl_lsb: number;
  readonly dnl_lsb?: number;
  readonly inl_lsb_per_ppm_per_um: number;
  readonly dnl_lsb_per_ppm_per_um?: number;
  /** Counter-clockwise from the x axis, 0 to 180. */
  readonly worstDirection_deg?: number;
  /** The bits that are on. */
  readonly worstCode?: readonly string[];
}

export interface SecondOrder {
  readonly inl_lsb: number;
  readonly dnl_lsb?: number;
  readonly inl_lsb_per_ppm_per_um2: number;
  readonly dnl_lsb_per_ppm_per_um2?: number;
  /** Spectral norm 1, first non-zero entry positive. */
  readonly worstShape?: { readonly xx: number; readonly xy: number; readonly yy: number };
  readonly worstCode?: readonly string[];
  readonly lowerBound_inl_lsb?: number;
}

export interface HookupFigures {
  readonly columnNets: number;
  readonly trunks?: number;
  readonly tracksPerChannel?: number;
  readonly crossovers?: number;
  readonly sameMetalCrossings?: number;
  readonly bends?: number;
  readonly vias?: number;
  readonly wireLength_um?: number;
  /** "proved": no hookup of these cells on as many tracks has fewer trunks, or as many and fewer crossovers, then less wire in the core. */
  readonly status?: 'proved' | 'effort-spent';
  /** Where it is not proved: what no hookup goes below, each figure as long as those before it are met. */
  readonly lowerBound?: { readonly tracksPerChannel: number; readonly trunks: number; readonly crossovers: number };
}

/** Standard deviations at the worst code. `placement`: of units of variance 1, correlated by their distance alone. */
export interface MismatchFigures {
  readonly inlSigma_lsb?: number;
  readonly dnlSigma_lsb?: number;
  readonly inlSigmaLeastSquares_lsb?: number;
  readonly placement: { readonly inlSigma_perUnitSigma: number; readonly dnlSigma_perUnitSigma?: number };
}

/** What the drawn wires do: see README, "Figures". Coupling and load of a bit's wires; absent where the technology does not say enough. */
export interface ParasiticFigures {
  readonly inl_lsb: number;
  readonly dnl_lsb?: number;
  readonly topToGround_fF: number;
  readonly attenuation_percent: number;
  readonly bits: readonly BitFigures[];
}

/** Of a bit's wires, with `TOP` held; delays absent where the technology does not state resistances. */
interface BitFigures {
  readonly name: string;
  readonly topCoupling_fF: number;
  readonly load_fF: number;
  /** From an ideal step, through the drive where there is one, to the unit that it reaches last. */
  readonly elmore_ps?: number;
  /** Until half an LSB is left; absent without a drive. */
  readonly settling_ps?: number;
}

/** The share of arrays that keep the limits, with the interval that holds it at 95 %. */
export interface YieldFigures {
  readonly share: number;
  readonly low: number;
  readonly high: number;
  /** Arrays drawn. */
  readonly samples: number;
  readonly seed: number;
  /** Counted, or, where hardly any array is lost, from the tail of the distribution. */
  readonly method: 'counted' | 'tail';
  /** What the share would be with random mismatch alone, without the gradient, and without the wires. */
  readonly randomOnly: number;
  readonly withoutGradient: number;
  readonly withoutWiring?: number;
}

export interface Metrics {
  readonly format: 'steelyard/metrics';
  readonly version: 1;
  readonly name: string;
  readonly core: { readonly rows: number; readonly columns: number; readonly pitch_um: readonly [number, number] };
  readonly status?: Placement['status'];
  readonly gradient: {
    readonly first: FirstOrder;
    readonly second: SecondOrder;
    readonly own?: { readonly inl_lsb: number; readonly dnl_lsb?: number };
  };
  readonly mismatch?: MismatchFigures;
  readonly hookup: HookupFigures;
  readonly area_um2?: number;
  readonly parasitic?: ParasiticFigures;
  /** All errors together at three sigma; absent where the wires' capacitances are not known. */
  readonly total?: { readonly inl3Sigma_lsb: number; readonly dnl3Sigma_lsb?: number };
  readonly yield?: YieldFigures;
}
