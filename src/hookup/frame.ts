import type { Rules } from './rules.js';

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
  readonly buses: number;
  readonly pitch: readonly [x: number, y: number];
  /** Of the `VSS` frame from outside to outside, pins and buses included. */
  readonly width: number;
  readonly height: number;
  /** Of all that is drawn. */
  readonly blockWidth: number;
  /** Where `TOP` leaves on the bits' side: left edges of a line of it right of the frame, and of a `VSS` line beyond. */
  readonly aside?: { readonly top: number; readonly guard: number };
  /** Underside of the frame's bottom side. */
  readonly frameLow: number;
  /** Middle of a column (-rings .. columns - 1 + rings). */
  columnX(column: number): number;
  /** Middle of a row (-rings .. rows - 1 + rings), row 0 at the top of the core. */
  rowY(row: number): number;
  /** Underside of a bus, counted from the ring down. */
  busY(bus: number): number;
  readonly busWidth: number;
}

export interface FrameSize {
  readonly rows: number;
  readonly columns: number;
  readonly rings: number;
  readonly buses: number;
  /** True: `TOP` leaves on the bits' side, right of the frame. */
  readonly topAside?: boolean;
}

/** @param sideGap between the frame's left and right sides and the outermost plates. */
export function frameOf<R extends Rules>(
  rules: R,
  size: FrameSize,
  pitch: readonly [x: number, y: number],
  sideGap: number,
): Frame & { readonly rules: R } {
  const { rows, columns, rings, buses, topAside = false } = size;
  const busWidth = rules.trackWidth;
  const busPitch = busWidth + rules.trackSpacing;
  const edge = Math.ceil((rules.trackWidth + rules.spacing / 2) / rules.grid) * rules.grid;
  const frameLow = edge + buses * busPitch;
  const x0 = rules.frameWidth + sideGap + rules.plate[0] / 2 + rings * pitch[0];
  const yLast = frameLow + rules.frameWidth + rules.bottomGap + rules.plateLow + rings * pitch[1];
  const columnX = (column: number) => x0 + column * pitch[0];
  const rowY = (row: number) => yLast + (rows - 1 - row) * pitch[1];
  const width = columnX(columns - 1 + rings) + rules.plate[0] / 2 + sideGap + rules.frameWidth;
  const top = width + rules.upperSpacing;
  const guard = top + rules.strapWidth + rules.upperSpacing;
  return {
    rows,
    columns,
    rings,
    buses,
    rules,
    pitch,
    busWidth,
    frameLow,
    width,
    height: rowY(-rings) + rules.plate[1] / 2 + rules.rowGap + rules.frameWidth,
    blockWidth: topAside ? guard + rules.guardWidth : width,
    ...(topAside && { aside: { top, guard } }),
    columnX,
    rowY,
    busY: (bus) => frameLow - (bus + 1) * busPitch,
  };
}
