import { rectangle } from '../core/rectangle.js';
import type { Frame } from '../hookup/frame.js';
import { viaBetween } from '../hookup/rules.js';
import type { Technology } from '../spec/technology.js';
import type { Sheet } from './sheet.js';

/** What stands in each place of the ring: a dummy on `VSS`, or a capacitor of the array. */
export type RingCell = (row: number, column: number) => string;

/**
 * The `VSS` frame around the block and the pieces that tie the ring's dummies to it: bottom plates on the plates' metal, top plates on the
 * straps' metal with a via on the frame. Left and right columns go sideways, the rows above and below (corners with them) up and down; with
 * several rings the pieces run through the units further out.
 */
export function drawRing(sheet: Sheet, technology: Technology, frame: Frame, cellAt: RingCell): void {
  const { rules, rows, columns, rings, width, height, frameLow } = frame;
  const { roles } = technology;
  const plateMetal = roles.bottomPlate;
  const inFrame = { net: 'VSS', part: 'ring' } as const;
  const w = rules.frameWidth;
  sheet.add(plateMetal, rectangle(0, frameLow, width, frameLow + w), { net: 'VSS', part: 'bus' });
  sheet.add(plateMetal, rectangle(0, height - w, width, height), inFrame);
  sheet.add(plateMetal, rectangle(0, frameLow, w, height), inFrame);
  sheet.add(plateMetal, rectangle(width - w, frameLow, width, height), inFrame);
  sheet.add(plateMetal, rectangle(width - w, 0, width, frameLow), { net: 'VSS', part: 'drop' });
  sheet.pin(plateMetal, rectangle(width - w, 0, width, w), 'VSS');
  sheet.pin(plateMetal, rectangle(0, height - w, w, height), 'VSS');

  const via = viaBetween(technology, plateMetal, roles.strap).name;
  const half = rules.trackWidth / 2;
  const pad = rules.padSize / 2;
  const [px, py] = [rules.plate[0] / 2, rules.plate[1] / 2];
  const low = rules.plateLow;
  const last = rows - 1 + rings;
  const right = columns - 1 + rings;
  const landing = w / 2;

  for (let column = -rings; column <= right; column++) {
    const x = frame.columnX(column) + rules.pad[0];
    // Upwards from every ring row above the core, downwards from every one below: unit to unit, the outermost to the frame.
    for (let row = -1; row >= -rings; row--) {
      const y = frame.rowY(row);
      const next = row === -rings ? height - w : frame.rowY(row - 1) - low;
      sheet.add(plateMetal, rectangle(x - half, y + py, x + half, next), inFrame);
      const padNext = row === -rings ? height : frame.rowY(row - 1) + rules.pad[1] + pad;
      sheet.add(roles.strap, rectangle(x - pad, y + rules.pad[1] - pad, x + pad, padNext), inFrame);
    }
    if (rings > 0) sheet.via(via, rules.viaFrame.size, x, height - landing, 'VSS');
    for (let row = rows; row <= last; row++) {
      if (cellAt(row, column) !== '-') continue;
      const y = frame.rowY(row);
      const next = row === last ? frameLow + w : frame.rowY(row + 1) + py;
      sheet.add(plateMetal, rectangle(x - half, next, x + half, y - low), inFrame);
      const padNext = row === last ? frameLow : frame.rowY(row + 1) + rules.pad[1] - pad;
      sheet.add(roles.strap, rectangle(x - pad, padNext, x + pad, y + rules.pad[1] + pad), inFrame);
      if (row === last) sheet.via(via, rules.viaFrame.size, x, frameLow + landing, 'VSS');
    }
  }
  for (let row = 0; row < rows && rings > 0; row++) {
    const y = frame.rowY(row);
    const upper = y + rules.tabLevel;
    const lower = y - rules.tabLevel;
    const padY = y + rules.pad[1];
    for (let column = -1; column >= -rings; column--) {
      const outermost = column === -rings;
      const x = frame.columnX(column);
      const next = outermost ? w : frame.columnX(column - 1) + px;
      sheet.add(plateMetal, rectangle(next, upper - half, x - px, upper + half), inFrame);
      const padNext = outermost ? 0 : frame.columnX(column - 1) + rules.pad[0] - pad;
      sheet.add(roles.strap, rectangle(padNext, padY - pad, x + rules.pad[0] + pad, padY + pad), inFrame);
    }
    for (let column = columns; column <= right; column++) {
      const outermost = column === right;
      const x = frame.columnX(column);
      const next = outermost ? width - w : frame.columnX(column + 1) - px;
      sheet.add(plateMetal, rectangle(x + px, lower - half, next, lower + half), inFrame);
      const padNext = outermost ? width : frame.columnX(column + 1) + rules.pad[0] + pad;
      sheet.add(roles.strap, rectangle(x + rules.pad[0] - pad, padY - pad, padNext, padY + pad), inFrame);
    }
    sheet.via(via, rules.viaFrame.size, landing, padY, 'VSS');
    sheet.via(via, rules.viaFrame.size, width - landing, padY, 'VSS');
  }
}
