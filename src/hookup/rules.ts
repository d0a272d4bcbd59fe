import { Infeasible } from '../core/problem.js';
import { nm } from '../core/units.js';
import type { Layer, Technology, Via } from '../spec/technology.js';
import { trackWidthOf } from '../spec/tracks.js';
import { isWideUnit } from '../spec/unit-geometry.js';
import { tiesOf, tieWidth } from './ties.js';
import { unitBody } from './unit-body.js';

/**
 * What a drawing needs of a technology whatever the style, in whole nanometres on its grid. Widths are even multiples of the grid, so that
 * centre lines lie on it.
 */
export interface Rules {
  readonly grid: number;
  /** All that a unit has of the bottom terminal's metal, its tabs and strip aside: bottom plate, frame, or the landing around a named cell. */
  readonly plate: readonly [width: number, height: number];
  /** From the unit's middle down to its lower edge: half the plate, and the landing strip where it has one. */
  readonly plateLow: number;
  /** The least that is solid at the plate's edge. */
  readonly plateRim: number;
  /** A unit is met from the left at this level above its middle, from the right as far below. */
  readonly tabLevel: number;
  /** Where the pad that leads from the top plate to the straps has its middle. */
  readonly pad: readonly [x: number, y: number];
  /** Side of that pad, and of any other landing between plate metal and the straps' metal. */
  readonly padSize: number;
  /** Room beside a bottom plate, so that a shield passes its tab too, and plain spacing on its metal. */
  readonly wideSpacing: number;
  readonly spacing: number;
  readonly trackWidth: number;
  readonly trackSpacing: number;
  /** Spacing on the straps' metal. */
  readonly upperSpacing: number;
  /** Spacing on the trunks' metal. */
  readonly lineSpacing: number;
  /** From the block's left edge to the leftmost place for a pin. */
  readonly pinsFrom: number;
  /** Between two drops, whose vias may stand side by side on one bus. */
  readonly dropSpacing: number;
  readonly rowGap: number;
  readonly strapWidth: number;
  /** The middle of a strap from the middle of its column: 0 unless the pad needs the room. */
  readonly strapX: number;
  readonly frameWidth: number;
  /** Of a line on the straps' metal that a via to the frame fits on. */
  readonly guardWidth: number;
  /** Between the frame's bottom side and the plates above it. */
  readonly bottomGap: number;
  readonly viaTrack: { readonly size: number; readonly landing: number; readonly spacing: number };
  readonly viaFrame: { readonly size: number; readonly landing: number };
}

export const inMicrometres = (value: number): string => `${value / 1000} um`;

/** A length of a technology, 0 where it states none. */
export const lengthOf = (value: number | undefined): number => nm(value ?? 0);

export const layerOf = (technology: Technology, name: string): Layer => {
  const layer = technology.layers.find((candidate) => candidate.name === name);
  if (layer === undefined) throw new Infeasible(`The technology has no layer ${name}.`, 'Name a layer that it has.');
  return layer;
};

/** The via between two named layers. @throws Infeasible where the technology has none. */
export function viaBetween(technology: Technology, lower: string, upper: string): Via {
  const via = technology.vias.find((candidate) => candidate.lower === lower && candidate.upper === upper);
  if (via === undefined)
    throw new Infeasible(`The technology has no via from ${lower} to ${upper}.`, 'Add one to its list of vias.');
  return via;
}

/**
 * Derives the dimensions that both styles share. What a style changes of them: room beside and below the plates, where a unit is met.
 * @param straps how wide the straps are: as the gap between rows, which the spine fills, or as narrow as their metal allows.
 * @throws Infeasible where the rules leave no room: which rule, and what would make it possible.
 */
export function commonRules(technology: Technology, straps: 'straps as row gaps' | 'narrow straps'): Rules {
  const { roles } = technology;
  const grid = technology.grid_nm;
  const even = (length: number) => Math.ceil(length / (2 * grid)) * 2 * grid;

  const lower = layerOf(technology, roles.trunk);
  const plateMetal = layerOf(technology, roles.bottomPlate);
  const topPlateLayer = layerOf(technology, roles.topPlate);
  const upper = layerOf(technology, roles.strap);
  const toPlate = viaBetween(technology, roles.trunk, roles.stub);
  const toTop = roles.topPlate === roles.strap ? undefined : viaBetween(technology, roles.topPlate, roles.strap);
  const toUpper = viaBetween(technology, roles.bottomPlate, roles.strap);

  const spacing = lengthOf(plateMetal.minSpacing_um);
  const landing = (via: Via) => even(nm(via.size_um) + 2 * nm(via.enclosure_um));
  const viaTrack = { size: nm(toPlate.size_um), landing: landing(toPlate), spacing: nm(toPlate.spacing_um) };
  const viaFrame = { size: nm(toUpper.size_um), landing: landing(toUpper) };
  const lineSpacing = lengthOf(lower.minSpacing_um);
  const trackWidth = trackWidthOf(technology);
  const viaApart = nm(toPlate.spacing_um) - (trackWidth - viaTrack.size);
  const busSpacing = lengthOf(layerOf(technology, roles.bus).minSpacing_um);
  const trackSpacing = Math.max(spacing, busSpacing, lineSpacing, viaApart);
  const dropSpacing = Math.max(lineSpacing, viaApart);
  const upperSpacing = lengthOf(upper.minSpacing_um);
  const padSize = even(Math.max(toTop ? landing(toTop) : 0, viaFrame.landing, lengthOf(upper.minWidth_um)));
  const frameWidth = even(
    Math.max(lengthOf(plateMetal.minWidth_um), viaFrame.landing, trackWidth, tieWidth(technology)),
  );

  const wideSpacing = Math.max(spacing, lengthOf(plateMetal.wideSpacing_um));
  const metalSpacing = isWideUnit(technology) ? wideSpacing : spacing;
  const { plate, pad, rim, topInset } = unitBody(technology, { frameWidth, clearance: wideSpacing });
  const rowGap = even(
    Math.max(metalSpacing, lengthOf(upper.minWidth_um), lengthOf(topPlateLayer.minSpacing_um) - 2 * topInset),
  );
  const strapWidth = straps === 'narrow straps' ? even(lengthOf(upper.minWidth_um)) : rowGap;
  const strapX = Math.min(0, grid * Math.floor((pad[0] - padSize / 2 - strapWidth / 2 - upperSpacing) / grid));

  const stop = (because: string, remedy: string): never => {
    throw new Infeasible(because, remedy);
  };
  if (strapX - strapWidth / 2 < -plate[0] / 2)
    stop(
      `A strap ${inMicrometres(strapWidth)} wide, left of the top terminal by ${inMicrometres(upperSpacing)}, does not lie over its column.`,
      'Move terminals.top to the right or take a larger unit.',
    );
  if (pad[0] + padSize / 2 > plate[0] / 2 || Math.abs(pad[1]) + padSize / 2 > plate[1] / 2)
    stop(
      'The pad of the top terminal does not lie over its unit.',
      'Move terminals.top inwards or take a larger unit.',
    );
  const beyondPad = plate[1] / 2 - Math.abs(pad[1]) - padSize / 2;
  if (beyondPad < upperSpacing)
    stop(
      `The pad of the top terminal stands ${inMicrometres(beyondPad)} from what runs between the rows; ${inMicrometres(upperSpacing)} are needed on its metal.`,
      'Move terminals.top to the middle or take a larger unit.',
    );
  return {
    grid,
    plate,
    plateLow: plate[1] / 2,
    plateRim: rim,
    tabLevel: 0,
    pad,
    padSize,
    wideSpacing: metalSpacing,
    spacing,
    trackWidth,
    trackSpacing,
    upperSpacing,
    lineSpacing,
    pinsFrom: tiesOf(technology).some(({ net }) => net !== 'VSS') ? frameWidth + spacing : spacing,
    dropSpacing,
    rowGap,
    strapWidth,
    strapX,
    frameWidth,
    guardWidth: Math.max(frameWidth, padSize),
    bottomGap: even(metalSpacing),
    viaTrack,
    viaFrame,
  };
}
