import type { Capacitor, Core } from '../spec/floorplan.js';
import { pitchNm } from './figures.js';
import { type PlacementClass, strongerBound } from './lower-bound.js';
import { momentsOfCells } from './moments.js';
import { endPointResiduals } from './residuals.js';
import { worstSecondOrder } from './worst-code.js';

/** What an exact search has proved: the least `squared`, as `secondOrderInl` has it, of all point-reflected placements on this core. */
export interface LeastOfReflected {
  readonly core: Core;
  readonly squared: bigint;
}

/**
 * In which class a placement of zero first order has the least second order: told by the bounds of three capacitors, or by an exact
 * search of the same core. Point-reflected: every cell has the name of its reflection.
 *
 * @param bits all there is inside the core, but for fill dummies. @param cells rows of capacitor names from the top.
 * @returns undefined where nothing is proved.
 */
export function provedClass(
  core: Core,
  bits: readonly Capacitor[],
  cells: readonly (readonly string[])[],
  known?: LeastOfReflected,
): PlacementClass | undefined {
  const names = bits.map(({ name }) => name);
  const weights = bits.map(({ weight }) => weight);
  const residuals = endPointResiduals(momentsOfCells(names, weights, cells));
  const { squared } = worstSecondOrder(residuals, pitchNm(core.pitch_um));
  const { x, y } = residuals;
  if (![...x, ...y].every((sum) => sum === 0n)) return undefined;
  if (strongerBound(core, bits, 'zero-first-order')?.squared === squared) return 'zero-first-order';
  const flat = cells.flat();
  if (!flat.every((name, cell) => name === flat[flat.length - 1 - cell])) return undefined;
  const least = known && sameCore(known.core, core) ? known : strongerBound(core, bits, 'point-reflected');
  return least?.squared === squared ? 'point-reflected' : undefined;
}

function sameCore(a: Core, b: Core): boolean {
  const of = ({ rows, columns, pitch_um }: Core): number[] => [rows, columns, ...pitchNm(pitch_um)];
  return of(a).every((value, i) => value === of(b)[i]);
}
