import { pitchOf, type Rules } from './rules.js';

/**
 * Where everything stands, in nanometres from the block's lower left corner.
 *
 *     frameTop  +--------------------------+  VSS frame
 *               | ring, core, ring         |  rows 0 .. rows - 1 from the top, ring rows beyond
 *     frameLow  +==========================+  its bottom side is the VSS bus
 *               | buses, the largest first |
 *     0         +--------------------------+  pins
 */
export interface Frame {
  readonly rules: Rules;
  readonly rows: number;
  readonly columns: number;
  readonly rings: number;
  readonly tracks: number;
  readonly buses: number;
  readonly pitch: readonly [x: number, y: number];
  readonly width: number;
  readonly height: number;
  /** Underside of the frame's bottom side. */
  readonly frameLow: number;
  /** Middle of a column (-rings .. columns - 1 + rings). */
  columnX(column: number): number;
  /** Middle of a row (-rings .. rows - 1 + rings), row 0 at the top of the core. */
  rowY(row: number): number;
  /** Left edge of a track in channel 0 .. columns. */
  trackX(channel: number, track: number): number;
  /** Middle of the stub of a unit. */
  stubY(row: number, side: 'L' | 'R'): number;
  /** Underside of a bus, counted from the ring down. */
  busY(bus: number): number;
  readonly busWidth: number;
}

export function frameOf(
  rules: Rules,
  size: { rows: number; columns: number; rings: number; tracks: number; buses: number },
): Frame {
  const { rows, columns, rings, tracks, buses } = size;
  const pitch = pitchOf(rules, tracks);
  const busWidth = rules.trackWidth;
  const busPitch = busWidth + rules.trackSpacing;
  const edge = Math.ceil((rules.trackWidth + rules.spacing / 2) / rules.grid) * rules.grid;
  const frameLow = edge + buses * busPitch;
  const besideCore = pitch[0] - rules.plate[0] - 2 * rules.wideSpacing;
  const sideGap = rings > 0 ? rules.wideSpacing : rules.spacing + besideCore + rules.wideSpacing;
  const x0 = rules.frameWidth + sideGap + rules.plate[0] / 2 + rings * pitch[0];
  const yLast = frameLow + rules.frameWidth + rules.bottomGap + rules.plate[1] / 2 + rings * pitch[1];
  const columnX = (column: number) => x0 + column * pitch[0];
  const rowY = (row: number) => yLast + (rows - 1 - row) * pitch[1];
  return {
    ...size,
    rules,
    pitch,
    busWidth,
    frameLow,
    width: columnX(columns - 1 + rings) + rules.plate[0] / 2 + sideGap + rules.frameWidth,
    height: rowY(-rings) + rules.plate[1] / 2 + rules.rowGap + rules.frameWidth,
    columnX,
    rowY,
    trackX: (channel, track) =>
      columnX(channel) -
      pitch[0] +
      rules.plate[0] / 2 +
      rules.wideSpacing +
      track * (rules.trackWidth + rules.trackSpacing),
    stubY: (row, side) => rowY(row) + (side === 'L' ? rules.tabLevel : -rules.tabLevel),
    busY: (bus) => frameLow - (bus + 1) * busPitch,
  };
}
