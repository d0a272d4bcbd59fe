import { candidateCores } from '../array/core-grid.js';
import { drawingRules, pitchOf } from '../hookup/style.js';
import { ringsToReach } from '../spec/options.js';
import type { Technology } from '../spec/technology.js';
import { digits } from './worked.js';
import type { Worked } from './worked.js';

/** Tracks that a channel of a well-placed array takes on the mean; the drawing decides. */
const tracksExpected = (capacitors: number): number => Math.min(6, 1 + Math.floor(capacitors / 4));

/** The area (um2) of core and rings of an array, before it is placed: what buses and pins take comes to it. */
export function estimatedArea(weights: readonly number[], technology: Technology): Worked {
  const pitch = pitchOf(drawingRules(technology), tracksExpected(weights.length));
  const [x, y] = pitch.map((length_nm) => length_nm / 1000) as [number, number];
  const [{ rows, columns }] = candidateCores(weights, 0, [x, y]);
  const rings = ringsToReach(technology);
  return {
    name: 'area',
    value: (columns + 2 * rings) * x * (rows + 2 * rings) * y,
    unit: 'um2 an array',
    formula: '(columns + 2 rings) x pitch by (rows + 2 rings) x pitch',
    inserted: `(${columns} + ${2 * rings}) x ${digits(x)} um by (${rows} + ${2 * rings}) x ${digits(y)} um`,
    source: 'an estimate: buses and pins come to it, and the wires decide the pitch',
  };
}
