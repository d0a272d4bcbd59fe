import type { MapFigures } from '../linearity/measured-map.js';
import type { FirstOrder, HookupFigures, Metrics, MismatchFigures, SecondOrder } from '../spec/metrics.js';

/** A floorplan's figures in a comparison, nested as in a metrics file. */
export interface ComparedFigures {
  /** Unique in the comparison. */
  readonly name: string;
  /** On the pitch that it is compared on. */
  readonly core: Metrics['core'];
  readonly gradient: { readonly first: FirstOrder; readonly second: SecondOrder; readonly map?: MapFigures };
  readonly mismatch: Pick<MismatchFigures, 'placement'>;
  readonly hookup: HookupFigures;
  /** As drawn, on its own pitch; absent where it is not. */
  readonly area_um2?: number;
  /** As drawn, under the gradient and the mismatch that its own array expects. */
  readonly total?: Metrics['total'];
}

/** The figures of a metrics file, each on its own pitch. */
export const figuresOf = (metrics: Metrics, name: string): ComparedFigures => ({
  ...metrics,
  mismatch: metrics.mismatch ?? { placement: { inlSigma_perUnitSigma: NaN } },
  name,
});

/** A figure that is less the better. Absent where a floorplan has none. */
export interface ComparedFigure {
  readonly key: string;
  readonly label: string;
  readonly unit: string;
  /** One of those that decide dominance. */
  readonly decides: boolean;
  readonly of: (figures: ComparedFigures) => number | undefined;
}

/** Every figure that floorplans are compared by, in the order in which they are shown. */
export const comparedFigures: readonly ComparedFigure[] = [
  {
    key: 'gradient.first.inl_lsb_per_ppm_per_um',
    label: 'first order INL',
    unit: 'LSB per ppm/um',
    decides: true,
    of: ({ gradient }) => gradient.first.inl_lsb_per_ppm_per_um,
  },
  {
    key: 'gradient.first.dnl_lsb_per_ppm_per_um',
    label: 'first order DNL',
    unit: 'LSB per ppm/um',
    decides: false,
    of: ({ gradient }) => gradient.first.dnl_lsb_per_ppm_per_um,
  },
  {
    key: 'gradient.first.inl_lsb',
    label: 'first order INL',
    unit: 'LSB at 1 %',
    decides: false,
    of: ({ gradient }) => gradient.first.inl_lsb,
  },
  {
    key: 'gradient.first.dnl_lsb',
    label: 'first order DNL',
    unit: 'LSB at 1 %',
    decides: false,
    of: ({ gradient }) => gradient.first.dnl_lsb,
  },
  {
    key: 'gradient.second.inl_lsb_per_ppm_per_um2',
    label: 'second order INL',
    unit: 'LSB per ppm/um2',
    decides: true,
    of: ({ gradient }) => gradient.second.inl_lsb_per_ppm_per_um2,
  },
  {
    key: 'gradient.second.dnl_lsb_per_ppm_per_um2',
    label: 'second order DNL',
    unit: 'LSB per ppm/um2',
    decides: false,
    of: ({ gradient }) => gradient.second.dnl_lsb_per_ppm_per_um2,
  },
  {
    key: 'gradient.second.inl_lsb',
    label: 'second order INL',
    unit: 'LSB at 1 %',
    decides: false,
    of: ({ gradient }) => gradient.second.inl_lsb,
  },
  {
    key: 'gradient.second.dnl_lsb',
    label: 'second order DNL',
    unit: 'LSB at 1 %',
    decides: false,
    of: ({ gradient }) => gradient.second.dnl_lsb,
  },
  {
    key: 'gradient.map.inl_lsb',
    label: 'measured map INL',
    unit: 'LSB',
    decides: false,
    of: ({ gradient }) => gradient.map?.inl_lsb,
  },
  {
    key: 'gradient.map.dnl_lsb',
    label: 'measured map DNL',
    unit: 'LSB',
    decides: false,
    of: ({ gradient }) => gradient.map?.dnl_lsb,
  },
  {
    key: 'mismatch.placement.inlSigma_perUnitSigma',
    label: 'sigma INL',
    unit: 'per unit sigma',
    decides: true,
    of: ({ mismatch }) => mismatch.placement.inlSigma_perUnitSigma,
  },
  {
    key: 'mismatch.placement.dnlSigma_perUnitSigma',
    label: 'sigma DNL',
    unit: 'per unit sigma',
    decides: true,
    of: ({ mismatch }) => mismatch.placement.dnlSigma_perUnitSigma,
  },
  {
    key: 'hookup.columnNets',
    label: 'column nets',
    unit: '',
    decides: true,
    of: ({ hookup }) => hookup.columnNets,
  },
  {
    key: 'area_um2',
    label: 'area',
    unit: 'um2',
    decides: true,
    of: ({ area_um2 }) => area_um2,
  },
  {
    key: 'total.inl3Sigma_lsb',
    label: 'all errors INL',
    unit: 'LSB at 3 sigma',
    decides: false,
    of: ({ total }) => total?.inl3Sigma_lsb,
  },
];
