import type { HookupPlan } from '../spec/floorplan.js';
import type { PinsWanted } from '../spec/pins.js';
import type { Placed } from './plan.js';

type Side = Pick<PinsWanted, 'bits'>;

/** A placement as it is wired, with the bits' pins at the bottom; upside down where they lie at the top. Twice is the placement itself. */
export function asWired(placed: Placed, { bits }: Side): Placed {
  if (bits === 'bottom') return placed;
  const { cells, ringUnits } = placed;
  const overturned = (row: number) => cells.length - 1 - row;
  return {
    ...placed,
    cells: [...cells].reverse(),
    ringUnits: ringUnits.map((unit) => ({ ...unit, row: overturned(unit.row) })),
  };
}

/** The same for what a floorplan says of its wires. */
export const planAsWired = (plan: HookupPlan, { bits }: Side): HookupPlan =>
  bits === 'bottom' || plan.columns !== undefined ? plan : { ...plan, sides: [...plan.sides].reverse() };
