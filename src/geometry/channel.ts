import { Infeasible } from '../core/problem.js';
import { rectangle } from '../core/rectangle.js';
import { nm, um } from '../core/units.js';
import type { ChannelHookup } from '../hookup/channel-wires.js';
import type { Placed } from '../hookup/plan.js';
import { viaBetween } from '../hookup/rules.js';
import type { Technology } from '../spec/technology.js';
import type { Sheet } from './sheet.js';
import { drawShieldLines } from './shield-lines.js';
import { channelShield } from './shield.js';
import { drawStrips } from './strips.js';

/** What the channel style adds to its wires: the shield over the channels, ring units' lines, strips under the columns, lines above. */
export function drawChannels(
  sheet: Sheet,
  technology: Technology,
  hookup: ChannelHookup,
  groundedFills: boolean,
): void {
  const { frame } = hookup;
  const { rules } = frame;
  const { roles } = technology;
  const via = viaBetween(technology, roles.trunk, roles.stub).name;
  const middle = rules.frameWidth / 2;
  for (const wire of hookup.vertical) {
    if (wire.part !== 'shield') continue;
    sheet.via(via, rules.viaTrack.size, wire.x0, frame.height - middle, 'VSS');
    if (wire.y0 === frame.frameLow + middle) sheet.via(via, rules.viaTrack.size, wire.x0, wire.y0, 'VSS');
  }
  for (let channel = 0; channel <= frame.columns; channel++) {
    const shield = channelShield(hookup, channel);
    for (const piece of shield.pieces) sheet.add(roles.stub, piece, { net: 'VSS', part: 'shield' });
    for (const [x, y] of shield.vias) sheet.via(via, rules.viaTrack.size, x, y, 'VSS');
  }
  drawRingUnits(sheet, technology, hookup);
  if (rules.strip) drawStrips(sheet, technology, hookup, rules.strip);
  if (technology.shieldLines) drawShieldLines(sheet, technology, hookup, groundedFills);
}

/** Units of the ring that belong to the array: a tab downwards with a via to a line of their own, under the frame. */
function drawRingUnits(sheet: Sheet, technology: Technology, hookup: ChannelHookup): void {
  const { frame, buses } = hookup;
  const { rules } = frame;
  const { roles } = technology;
  const via = viaBetween(technology, roles.trunk, roles.stub).name;
  const half = rules.trackWidth / 2;
  for (const line of hookup.ringLines) {
    const net = line.capacitor;
    const x = line.x + half;
    const plateLow = frame.rowY(frame.rows) - rules.plateLow;
    const y = plateLow - half;
    sheet.add(roles.stub, rectangle(line.x, plateLow - rules.trackWidth, line.x + rules.trackWidth, plateLow), {
      net,
      part: 'tab',
    });
    sheet.via(via, rules.viaTrack.size, x, y, net);
    const bus = buses.indexOf(net);
    const end = bus === -1 ? 0 : frame.busY(bus);
    sheet.add(roles.trunk, rectangle(x - half, end, x + half, y + half), { net, part: 'drop' });
    if (bus !== -1) sheet.via(via, rules.viaTrack.size, x, end + half, net);
  }
}

/**
 * Fill dummies with the top plate on `VSS`: upper metal runs from the pad to the level of the right-hand tab and on to a via on that tab,
 * which is widened to the via's landing.
 */
export function drawGroundedFills(sheet: Sheet, technology: Technology, placed: Placed, hookup: ChannelHookup): void {
  const { frame } = hookup;
  const { rules } = frame;
  const { roles } = technology;
  const via = viaBetween(technology, roles.bottomPlate, roles.strap).name;
  const landing = rules.viaFrame.landing / 2;
  const half = rules.padSize / 2;
  const rim = rules.plate[0] / 2;
  const edge = rim + rules.tab[0];
  if (!placed.cells.some((names) => names.includes('-'))) return;
  const room = rules.plate[1] / 2 - rules.tabLevel - half;
  if (room < rules.upperSpacing)
    throw new Infeasible(
      `A wire from a fill dummy's top terminal to its tab stands ${um(room)} um from what runs between the rows; ${um(rules.upperSpacing)} um are needed.`,
      'Lower tabLevel_um, take a larger unit, or ask for "fillTop": "TOP".',
    );
  if (roles.topPlate === roles.bottomPlate) {
    const { spacing_um, size_um } = viaBetween(technology, roles.bottomPlate, roles.strap);
    const apart = Math.max(edge - landing - rules.pad[0], Math.abs(rules.pad[1] + rules.tabLevel)) - nm(size_um);
    if (apart < nm(spacing_um))
      throw new Infeasible(
        `The vias on a fill dummy's comb and on its tab stand ${um(apart)} um apart; ${spacing_um} um are needed.`,
        'Move terminals.top to the left, lengthen tab_um, or ask for "fillTop": "TOP".',
      );
  }
  placed.cells.forEach((names, row) =>
    names.forEach((name, column) => {
      if (name !== '-') return;
      const x = frame.columnX(column);
      const padX = x + rules.pad[0];
      const padY = frame.rowY(row) + rules.pad[1];
      const y = frame.stubY(row, 'R');
      sheet.add(
        roles.bottomPlate,
        rectangle(x + rim - Math.min(landing, rules.plateRim), y - landing, x + edge, y + landing),
        { net: 'VSS', part: 'tab' },
      );
      sheet.via(via, rules.viaFrame.size, x + edge - landing, y, 'VSS');
      const wire = { net: 'VSS', part: 'ring' } as const;
      if (padY !== y)
        sheet.add(
          roles.strap,
          rectangle(padX - half, Math.min(padY, y) - half, padX + half, Math.max(padY, y) + half),
          wire,
        );
      sheet.add(roles.strap, rectangle(padX - half, y - half, x + edge, y + half), wire);
    }),
  );
}
