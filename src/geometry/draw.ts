import type { Reference } from '../core/layout.js';
import { Infeasible } from '../core/problem.js';
import { nm, um } from '../core/units.js';
import { rectangle } from '../core/rectangle.js';
import { pitchOf, type Rules, viaBetween } from '../hookup/rules.js';
import type { Hookup } from '../hookup/wires.js';
import type { Placed } from '../hookup/plan.js';
import type { Polygons } from '../spec/polygons.js';
import type { Technology } from '../spec/technology.js';
import { drawRing } from './ring.js';
import { Sheet } from './sheet.js';
import { channelShield } from './shield.js';
import { drawStrips } from './strips.js';
import { unitStructures } from './unit-cell.js';

/** Where the fill dummies' top plates go. */
export type FillTop = 'TOP' | 'VSS';

/**
 * Draws the block as polygons: one unit structure, and a top structure with an array of it and all wires. The lower left corner of the
 * bounding box is 0,0.
 * @param name of the array; the structures' names begin with it.
 */
export function drawPolygons(
  name: string,
  technology: Technology,
  rules: Rules,
  placed: Placed,
  hookup: Hookup,
  fillTop: FillTop,
): Polygons {
  const { frame } = hookup;
  const { rows, columns, rings } = frame;
  const { roles } = technology;
  const sheet = new Sheet(technology);
  const block = rectangle(0, 0, frame.width, frame.height);
  sheet.add(roles.boundary, block);
  sheet.add(roles.fillExclusion, block);

  const inRing = new Map(placed.ringUnits.map((unit) => [`${unit.row} ${unit.column}`, unit.capacitor]));
  const ringCell = (row: number, column: number) => inRing.get(`${row} ${column}`) ?? '-';
  const cellAt = (row: number, column: number) =>
    row >= 0 && row < rows && column >= 0 && column < columns ? placed.cells[row][column] : ringCell(row, column);
  drawRing(sheet, technology, frame, ringCell);
  drawWires(sheet, technology, hookup);
  drawRingUnits(sheet, technology, hookup);
  drawTop(sheet, technology, placed, hookup, fillTop);
  if (fillTop === 'VSS') drawGroundedFills(sheet, technology, placed, hookup);

  if (rules.strip) drawStrips(sheet, technology, hookup, rules.strip);
  const [unit, ...cellsOfUnit] = unitStructures(`${name}_unit`, technology, rules);
  if (cellsOfUnit.some((structure) => structure.name === name || structure.name === unit.name))
    throw new Infeasible(
      `The array's structures are called ${name} and ${unit.name}, and so is the technology's cell.`,
      'Give the array another name.',
    );
  const cells: string[] = [];
  for (let row = rows - 1 + rings; row >= -rings; row--)
    for (let column = -rings; column <= columns - 1 + rings; column++) {
      const cell = cellAt(row, column);
      const isFill = cell === '-' && row >= 0 && row < rows && column >= 0 && column < columns;
      cells.push(isFill && fillTop === 'TOP' ? '=' : cell);
    }
  const [pitchX, pitchY] = pitchOf(rules, frame.tracks);
  const units: Reference = {
    structure: unit.name,
    origin: [frame.columnX(-rings), frame.rowY(rows - 1 + rings)],
    columns: columns + 2 * rings,
    rows: rows + 2 * rings,
    columnStep: [pitchX, 0],
    rowStep: [0, pitchY],
    mirrored: false,
    angle_deg: 0,
    cells,
  };
  return {
    format: 'steelyard/polygons',
    version: 1,
    databaseUnit_m: 1e-9,
    userUnit_m: 1e-6,
    topStructure: name,
    technology,
    capacitors: placed.capacitors,
    structures: [...cellsOfUnit, unit, { name, polygons: sheet.polygons, references: [units], labels: sheet.labels }],
  };
}

/** Trunks, stubs, buses and drops of the bits; the `VSS` lines and the shield above the trunks; vias at every joint; pins. */
function drawWires(sheet: Sheet, technology: Technology, hookup: Hookup): void {
  const { frame } = hookup;
  const { rules } = frame;
  const { roles } = technology;
  const via = viaBetween(technology, roles.trunk, roles.stub).name;
  const half = rules.trackWidth / 2;
  for (const { net, part, x0, y0, x1, y1 } of hookup.vertical) {
    // A trunk without a bus and a drop end at the block's edge, not half a track beyond it.
    const low = y0 === 0 ? 0 : y0 - half;
    sheet.add(roles.trunk, rectangle(x0 - half, low, x1 + half, y1 + half), { net, part });
  }
  for (const { net, part, x0, y0, x1, y1, side } of hookup.horizontal) {
    // A stub begins at its tab; only the end over the trunk is half a track longer.
    const a = side === 'R' ? x0 : x0 - half;
    const b = side === 'L' ? x1 : x1 + half;
    sheet.add(part === 'bus' ? roles.bus : roles.stub, rectangle(a, y0 - half, b, y1 + half), { net, part });
  }
  for (const { net, x, y } of hookup.joints) sheet.via(via, rules.viaTrack.size, x, y, net);
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
  for (const { net, x } of hookup.pins)
    sheet.pin(roles.trunk, rectangle(x, 0, x + rules.trackWidth, rules.trackWidth), net);
}

/** Units of the ring that belong to the array: a tab downwards with a via to a line of their own, under the frame. */
function drawRingUnits(sheet: Sheet, technology: Technology, hookup: Hookup): void {
  const { frame, buses } = hookup;
  const { rules } = frame;
  const { roles } = technology;
  const via = viaBetween(technology, roles.trunk, roles.stub).name;
  const half = rules.trackWidth / 2;
  for (const line of hookup.ringLines) {
    const net = line.capacitor;
    const x = line.x + half;
    const plateLow = frame.rowY(frame.rows) - rules.plate[1] / 2;
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

/** Straps along the columns, a tab to each unit's pad, the spine above the topmost row, and the pin at the top. */
function drawTop(sheet: Sheet, technology: Technology, placed: Placed, hookup: Hookup, fillTop: FillTop): void {
  const { frame } = hookup;
  const { rules, rows, columns } = frame;
  const { roles } = technology;
  const half = rules.strapWidth / 2;
  const pad = rules.padSize / 2;
  const plateTop = frame.rowY(0) + rules.plate[1] / 2;
  const plateLow = frame.rowY(rows - 1) - rules.plate[1] / 2;
  const spineTop = plateTop + rules.rowGap;
  for (let column = 0; column < columns; column++) {
    const x = frame.columnX(column);
    const strapX = x + rules.strapX;
    const below = placed.ringUnits.filter((unit) => unit.column === column);
    const low = below.length > 0 ? frame.rowY(rows) + rules.pad[1] - pad : plateLow - rules.rowGap;
    sheet.add(roles.strap, rectangle(strapX - half, low, strapX + half, spineTop), { net: 'TOP', part: 'strap' });
    // A cross-bar over the gap below the lowest row makes it look like the rows within.
    sheet.add(
      roles.strap,
      rectangle(x - rules.plate[0] / 2, plateLow - rules.rowGap, x + rules.plate[0] / 2, plateLow),
      { net: 'TOP', part: 'strap' },
    );
    const tabs = [
      ...placed.cells.map((names, row) => ({ row, tied: names[column] !== '-' || fillTop === 'TOP' })),
      ...below.map(({ row }) => ({ row, tied: true })),
    ];
    for (const { row, tied } of tabs) {
      if (!tied) continue;
      const y = frame.rowY(row) + rules.pad[1];
      sheet.add(roles.strap, rectangle(strapX, y - pad, x + rules.pad[0] + pad, y + pad), {
        net: 'TOP',
        part: 'strap',
      });
    }
  }
  const first = frame.columnX(0) + rules.strapX;
  const last = frame.columnX(columns - 1) + rules.strapX;
  sheet.add(roles.spine, rectangle(first - half, plateTop, last + half, spineTop), { net: 'TOP', part: 'spine' });
  const middle = frame.columnX((columns - 1) >> 1) + rules.strapX;
  sheet.add(roles.spine, rectangle(middle - half, plateTop, middle + half, frame.height), {
    net: 'TOP',
    part: 'spine',
  });
  sheet.pin(roles.spine, rectangle(middle - half, frame.height - rules.strapWidth, middle + half, frame.height), 'TOP');
}

/**
 * Fill dummies with the top plate on `VSS`: upper metal runs from the pad to the level of the right-hand tab and on to a via on that tab,
 * which is widened to the via's landing.
 */
function drawGroundedFills(sheet: Sheet, technology: Technology, placed: Placed, hookup: Hookup): void {
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
