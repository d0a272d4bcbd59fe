/** How a converter's logic moves its capacitors from decision to decision; `energy` of a sizing has the same keys. */
export const switchings = ['conventional', 'splitMsb', 'monotonic', 'vcmBased'] as const;
export type Switching = (typeof switchings)[number];

/** Resistances that charge the array: switch of B0, larger bits in inverse proportion to their weight, or one of each bit; reference. */
export interface Drive {
  readonly switch_ohm: number | readonly number[];
  readonly reference_ohm?: number;
}

/** What the converter, or a drawn array, must keep; `yield` is a share of all that are made. */
export interface Limits {
  readonly inl_lsb?: number;
  readonly dnl_lsb?: number;
  readonly yield?: number;
}

/** A converter file: what the array is for. Every key but `format` and `version` may be absent. */
export interface Converter {
  readonly format: 'steelyard/converter';
  readonly version: 1;
  readonly bits?: number;
  /** Peak to peak; of a differential converter that of the difference. */
  readonly fullScale_Vpp?: number;
  readonly differential?: boolean;
  readonly sampling?: 'top-plate' | 'bottom-plate';
  readonly switching?: Switching;
  readonly temperature_K?: number;
  readonly sampleRate_MHz?: number;
  /** Power of the sampled noise over that of the quantisation. */
  readonly thermalToQuantization?: number;
  /** Root mean square of one comparison, at the comparator's input. */
  readonly comparatorNoise_uV?: number;
  readonly comparatorOffset_uV?: number;
  readonly drive?: Drive;
  readonly topLoad_fF?: number;
  readonly mismatch?: { readonly coefficient_percent_um: number; readonly of: 'single' | 'pair' };
  /** A shipped template's name, or a file relative to this one. */
  readonly technology?: string;
  readonly limits?: Limits;
  /** Points of a record. */
  readonly samples?: number;
  readonly seed?: number;
}

type Defaulted =
  | 'fullScale_Vpp'
  | 'differential'
  | 'sampling'
  | 'switching'
  | 'temperature_K'
  | 'thermalToQuantization'
  | 'comparatorNoise_uV'
  | 'comparatorOffset_uV'
  | 'topLoad_fF'
  | 'samples'
  | 'seed';

/** A converter file with every default filled in; what has none (bits, rate, drive, limits, mismatch, technology) as it was given. */
export type ResolvedConverter = Converter & Required<Pick<Converter, Defaulted>>;
