import type { Reference, Structure } from '../core/layout.js';
import { Infeasible } from '../core/problem.js';
import { rectangle } from '../core/rectangle.js';
import type { Placed } from '../hookup/plan.js';
import { viaBetween } from '../hookup/rules.js';
import type { Hookup } from '../hookup/style.js';
import type { Wires } from '../hookup/wires.js';
import type { PinsWanted } from '../spec/pins.js';
import type { Polygons } from '../spec/polygons.js';
import type { Technology } from '../spec/technology.js';
import { drawChannels, drawGroundedFills } from './channel.js';
import { mirrorImage } from './mirror.js';
import { drawRing } from './ring.js';
import { Sheet } from './sheet.js';
import { drawTies } from './ties.js';
import { drawTopAside } from './top-aside.js';
import { drawUnderPlates, groundFillTops } from './under-plate.js';
import { unitStructures } from './unit-cell.js';

/** Where the fill dummies' top plates go. */
export type FillTop = 'TOP' | 'VSS';

/**
 * Draws the block as polygons: one unit structure, and a top structure with an array of it and all wires. The lower left corner of the
 * bounding box is 0,0.
 * @param name of the array; the structures' names begin with it.
 * @param placed as it is wired, the bits' pins at the bottom: the drawing is upside down where they are wanted at the top.
 */
export function drawPolygons(
  name: string,
  technology: Technology,
  placed: Placed,
  hookup: Hookup,
  { fillTop, pins }: { readonly fillTop: FillTop; readonly pins: PinsWanted },
): Polygons {
  const { frame } = hookup;
  const { rows, columns, rings } = frame;
  const { roles } = technology;
  const sheet = new Sheet(technology);
  const block = rectangle(0, 0, frame.blockWidth, frame.height);
  sheet.add(roles.boundary, block);
  sheet.add(roles.fillExclusion, block);

  const inRing = new Map(placed.ringUnits.map((unit) => [`${unit.row} ${unit.column}`, unit.capacitor]));
  const ringCell = (row: number, column: number) => inRing.get(`${row} ${column}`) ?? '-';
  const cellAt = (row: number, column: number) =>
    row >= 0 && row < rows && column >= 0 && column < columns ? placed.cells[row][column] : ringCell(row, column);
  drawRing(sheet, technology, frame, ringCell);
  drawWires(sheet, technology, hookup);
  const grounded = fillTop === 'VSS' && placed.cells.some((names) => names.includes('-'));
  if (hookup.style === 'channel') drawChannels(sheet, technology, hookup, grounded);
  else drawUnderPlates(sheet, technology, hookup);
  const ties = drawTies(sheet, technology, frame, name);
  drawPins(sheet, technology, hookup);
  drawTop(sheet, technology, placed, hookup, fillTop);
  if (grounded && hookup.style === 'channel') drawGroundedFills(sheet, technology, placed, hookup);
  if (grounded && hookup.style === 'under-plate') groundFillTops(sheet, technology, placed, hookup.frame);

  const [unit, ...cellsOfUnit] = unitStructures(`${name}_unit`, technology, hookup.frame.rules);
  const own = [name, unit.name, ...ties.structures.map((structure) => structure.name)];
  if (cellsOfUnit.some((structure) => own.includes(structure.name)))
    throw new Infeasible(
      `The array's structures are called ${own.join(', ')}, and so is the technology's cell.`,
      'Give the array another name.',
    );
  const cells: string[] = [];
  for (let row = rows - 1 + rings; row >= -rings; row--)
    for (let column = -rings; column <= columns - 1 + rings; column++) {
      const cell = cellAt(row, column);
      const isFill = cell === '-' && row >= 0 && row < rows && column >= 0 && column < columns;
      cells.push(isFill && fillTop === 'TOP' ? '=' : cell);
    }
  const [pitchX, pitchY] = frame.pitch;
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
  const upright: Structure = {
    name,
    polygons: sheet.polygons,
    references: [units, ...ties.references],
    labels: sheet.labels,
  };
  const top = pins.bits === 'bottom' ? upright : mirrorImage(upright, 'y', frame.height);
  return {
    format: 'steelyard/polygons',
    version: 1,
    databaseUnit_m: 1e-9,
    userUnit_m: 1e-6,
    topStructure: name,
    technology,
    capacitors: placed.capacitors,
    structures: [...cellsOfUnit, unit, ...ties.structures, top],
  };
}

/** Trunks, stubs, buses, drops and `VSS` lines, and a via at every joint. */
function drawWires(sheet: Sheet, technology: Technology, hookup: Wires): void {
  const { rules } = hookup.frame;
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
}

function drawPins(sheet: Sheet, { roles }: Technology, { frame: { rules }, pins }: Wires): void {
  for (const { net, x } of pins) sheet.pin(roles.trunk, rectangle(x, 0, x + rules.trackWidth, rules.trackWidth), net);
}

/** Straps along the columns, a tab to each unit's pad, the spine above the topmost row, and the pin. */
function drawTop(sheet: Sheet, technology: Technology, placed: Placed, hookup: Hookup, fillTop: FillTop): void {
  const { frame } = hookup;
  const { rules, rows, columns } = frame;
  const { roles } = technology;
  const half = rules.strapWidth / 2;
  const pad = rules.padSize / 2;
  const plateTop = frame.rowY(0) + rules.plate[1] / 2;
  const plateLow = frame.rowY(rows - 1) - rules.plateLow;
  const spineTop = plateTop + rules.rowGap;
  for (let column = 0; column < columns; column++) {
    const x = frame.columnX(column);
    const strapX = x + rules.strapX;
    const below = placed.ringUnits.filter((unit) => unit.column === column);
    const low = below.length > 0 ? frame.rowY(rows) + rules.pad[1] - pad : plateLow - rules.rowGap;
    sheet.add(roles.strap, rectangle(strapX - half, low, strapX + half, spineTop), { net: 'TOP', part: 'strap' });
    // A cross-bar over the gap below the lowest row makes it look like the rows within; trunks that pass there it would couple to.
    if (hookup.style === 'channel')
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
  if (frame.aside) return drawTopAside(sheet, technology, frame, frame.aside, { x: last, y0: plateTop, y1: spineTop });
  const middle = frame.columnX((columns - 1) >> 1) + rules.strapX;
  sheet.add(roles.spine, rectangle(middle - half, plateTop, middle + half, frame.height), {
    net: 'TOP',
    part: 'spine',
  });
  sheet.pin(roles.spine, rectangle(middle - half, frame.height - rules.strapWidth, middle + half, frame.height), 'TOP');
}
