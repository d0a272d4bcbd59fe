import type { ArraySpec } from '../spec/array-spec.js';
import type { ResolvedConverter } from '../spec/converter.js';
import { unitMismatch } from '../spec/options.js';
import { withUnitOf } from '../spec/scale-unit.js';
import type { Technology } from '../spec/technology.js';
import type { Sizing } from './size.js';

/**
 * The array file of a sized converter.
 * @param reference how the file names its technology; absent: the standard one
 */
export function arrayFileOf(
  { unit, array: { bits, weights, limits }, switch: resistances }: Sizing,
  converter: ResolvedConverter,
  technology: Technology,
  reference?: string,
): ArraySpec {
  const { mismatch, topLoad_fF } = converter;
  const drive = resistances?.drive ?? converter.drive;
  const made = withUnitOf(technology, unit.capacitance_fF);
  return {
    format: 'steelyard/array',
    version: 1,
    ...(weights ? { weights } : { bits }),
    ...(reference !== undefined && { technology: reference }),
    unit_fF: unit.capacitance_fF,
    ...(mismatch && { mismatch: unitMismatch({ ...made, mismatch: { ...made.mismatch, ...mismatch } }) }),
    ...(drive && { drive }),
    ...(topLoad_fF > 0 && { topLoad_fF }),
    limits,
  };
}
