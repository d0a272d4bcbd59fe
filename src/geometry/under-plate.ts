import { Infeasible } from '../core/problem.js';
import { rectangle } from '../core/rectangle.js';
import { nm, um } from '../core/units.js';
import type { Placed } from '../hookup/plan.js';
import { viaBetween } from '../hookup/rules.js';
import type { UnderPlateFrame } from '../hookup/under-plate-frame.js';
import type { UnderPlateHookup } from '../hookup/under-plate-wires.js';
import type { Technology } from '../spec/technology.js';
import { joinToFrame } from './frame-joint.js';
import type { Sheet } from './sheet.js';

/** What the under-plate style adds to its wires: a via on every unit's landing strip, and the fill dummies' trunks joined to the frame. */
export function drawUnderPlates(sheet: Sheet, technology: Technology, hookup: UnderPlateHookup): void {
  const { rules } = hookup.frame;
  const { roles } = technology;
  const via = viaBetween(technology, roles.trunk, roles.stub).name;
  for (const { net, x, y } of hookup.landings) sheet.via(via, rules.viaTrack.size, x, y, net);
  for (const { net, x, y } of hookup.grounds) joinToFrame(sheet, technology, rules, x, y, net);
}

/** Fill dummies with the top plate on `VSS`: upper metal runs from the pad straight down to a via on the dummy's own landing strip. */
export function groundFillTops(sheet: Sheet, technology: Technology, placed: Placed, frame: UnderPlateFrame): void {
  const { rules } = frame;
  const { roles, unit } = technology;
  const via = viaBetween(technology, roles.bottomPlate, roles.strap);
  const { landing, size } = rules.viaFrame;
  const half = rules.padSize / 2;
  const below = rules.pad[1] + rules.plateLow - landing / 2;
  if (roles.topPlate === roles.bottomPlate && below - size < nm(via.spacing_um))
    throw new Infeasible(
      `The vias on a fill dummy's comb and on its frame stand ${um(below - size)} um apart; ${via.spacing_um} um are needed.`,
      'Raise strip_um, or ask for "fillTop": "TOP".',
    );
  const solid =
    unit.kind === 'parallel-plate'
      ? rules.plateLow - nm(unit.topPlate_um[1]) / 2
      : rules.plateLow - rules.plate[1] / 2 + rules.plateRim;
  if (solid < landing)
    throw new Infeasible(
      `A via to a fill dummy's landing strip needs ${um(landing)} um; ${um(solid)} um lie outside its top plate.`,
      'Raise strip_um, or ask for "fillTop": "TOP".',
    );
  placed.cells.forEach((names, row) =>
    names.forEach((name, column) => {
      if (name !== '-') return;
      const x = frame.columnX(column) + rules.pad[0];
      const y = frame.rowY(row) + rules.pad[1];
      const low = frame.rowY(row) - rules.plateLow + landing / 2;
      sheet.via(via.name, size, x, low, 'VSS');
      sheet.add(roles.strap, rectangle(x - half, low - landing / 2, x + half, y + half), { net: 'VSS', part: 'ring' });
    }),
  );
}
