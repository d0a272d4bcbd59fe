import { coreSchema } from './schema-floorplan.js';
import { atLeastZero, choice, file, list, name, number, object, seed, share, status, whole } from './schema-parts.js';
import type { Schema } from './schema-parts.js';

/** A magnitude: the largest value over all codes, a length, an area. */
const figure = atLeastZero;
const count = whole(0, Number.MAX_SAFE_INTEGER);
const code = list(name, 1);

const first = object({
  inl_lsb: figure,
  'dnl_lsb?': figure,
  inl_lsb_per_ppm_per_um: figure,
  'dnl_lsb_per_ppm_per_um?': figure,
  'worstDirection_deg?': { type: 'number', minimum: 0, maximum: 180 },
  'worstCode?': code,
});

const second = object({
  inl_lsb: figure,
  'dnl_lsb?': figure,
  inl_lsb_per_ppm_per_um2: figure,
  'dnl_lsb_per_ppm_per_um2?': figure,
  'worstShape?': object({ xx: number, xy: number, yy: number }),
  'worstCode?': code,
  'lowerBound_inl_lsb?': figure,
});

const mismatch = object({
  'inlSigma_lsb?': figure,
  'dnlSigma_lsb?': figure,
  'inlSigmaLeastSquares_lsb?': figure,
  'placement?': object({ inlSigma_perUnitSigma: figure, 'dnlSigma_perUnitSigma?': figure }),
});

const hookup = object({
  columnNets: count,
  'trunks?': count,
  'tracksPerChannel?': count,
  'crossovers?': count,
  'sameMetalCrossings?': count,
  'bends?': count,
  'vias?': count,
  'wireLength_um?': figure,
  'status?': choice('proved', 'effort-spent'),
  'lowerBound?': object({ tracksPerChannel: count, trunks: count, crossovers: count }),
});

const bit = object({
  name,
  'topCoupling_fF?': figure,
  'load_fF?': figure,
  'elmore_ps?': figure,
  'settling_ps?': figure,
});

const parasitic = object({
  'inl_lsb?': figure,
  'dnl_lsb?': figure,
  'topToGround_fF?': figure,
  'attenuation_percent?': figure,
  'bits?': list(bit),
});

export const metricsSchema: Schema = file('metrics', 'Figures of a placed array', {
  name,
  core: coreSchema,
  'status?': status,
  gradient: object({ first, second, 'own?': object({ inl_lsb: figure, 'dnl_lsb?': figure }) }),
  'mismatch?': mismatch,
  hookup,
  'area_um2?': figure,
  'parasitic?': parasitic,
  'total?': object({ inl3Sigma_lsb: figure, 'dnl3Sigma_lsb?': figure }),
  'yield?': object({
    share,
    low: share,
    high: share,
    samples: count,
    seed,
    'method?': choice('counted', 'tail'),
    'randomOnly?': share,
    'withoutGradient?': share,
    'withoutWiring?': share,
  }),
});
