import { Infeasible } from '../core/problem.js';
import { nm } from '../core/units.js';
import type { Layer, Technology, Via } from '../spec/technology.js';
import { tabLevelsApart, trackWidthOf } from '../spec/tracks.js';
import { isWideUnit } from '../spec/unit-geometry.js';
import { unitBody } from './unit-body.js';

/** What the channel style needs of a technology, in whole nanometres on its grid. Widths are even multiples of the grid, so that centre lines lie on it. */
export interface Rules {
  readonly grid: number;
  /** All that a unit has of the bottom terminal's metal, its tabs aside: bottom plate, frame, or the landing around a named cell. */
  readonly plate: readonly [width: number, height: number];
  /** The least that is solid at the plate's edge. */
  readonly plateRim: number;
  /** Tab on the bottom plate: how far it stands out, how tall it is. The left one sits `tabLevel` above the middle, the right one below. */
  readonly tab: readonly [length: number, height: number];
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
  /** End-to-end spacing of two wires on one track. */
  readonly lineSpacing: number;
  /** Between two drops, whose vias may stand side by side on one bus. */
  readonly dropSpacing: number;
  readonly rowGap: number;
  readonly strapWidth: number;
  /** The middle of a strap from the middle of its column: 0 unless the pad needs the room. */
  readonly strapX: number;
  readonly frameWidth: number;
  /** Between the frame's bottom side and the plates above it: a track and its spacing fit there. */
  readonly bottomGap: number;
  readonly minPlateWidth: number;
  /** The most tracks under one piece of shield before it would count as wide metal. */
  readonly tracksPerShield: number;
  /** Half the width of the `VSS` strip under a column, and the room that it keeps; absent without a shield. */
  readonly strip?: { readonly half: number; readonly spacing: number };
  readonly viaTrack: { readonly size: number; readonly landing: number; readonly spacing: number };
  readonly viaFrame: { readonly size: number; readonly landing: number };
}

const layerOf = (technology: Technology, name: string): Layer => {
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
 * Derives the dimensions of a channel-style drawing from a technology's rules.
 * @throws Infeasible where the rules leave no room: which rule, and what would make it possible.
 */
export function drawingRules(technology: Technology): Rules {
  const { unit, roles } = technology;
  if (technology.hookup !== 'channel')
    throw new Infeasible(`The technology is made for the ${technology.hookup} hookup.`, 'Use a channel technology.');
  const grid = technology.grid_nm;
  const even = (length: number) => Math.ceil(length / (2 * grid)) * 2 * grid;
  const length = (value: number | undefined) => nm(value ?? 0);

  const lower = layerOf(technology, roles.trunk);
  const plateMetal = layerOf(technology, roles.bottomPlate);
  const topPlateLayer = layerOf(technology, roles.topPlate);
  const upper = layerOf(technology, roles.strap);
  const toPlate = viaBetween(technology, roles.trunk, roles.stub);
  const toTop = roles.topPlate === roles.strap ? undefined : viaBetween(technology, roles.topPlate, roles.strap);
  const toUpper = viaBetween(technology, roles.bottomPlate, roles.strap);

  const spacing = length(plateMetal.minSpacing_um);
  const minPlateWidth = length(plateMetal.minWidth_um);
  const wideFrom = plateMetal.wideFrom_um === undefined ? Infinity : nm(plateMetal.wideFrom_um);

  const landing = (via: Via) => even(nm(via.size_um) + 2 * nm(via.enclosure_um));
  const viaTrack = { size: nm(toPlate.size_um), landing: landing(toPlate), spacing: nm(toPlate.spacing_um) };
  const viaFrame = { size: nm(toUpper.size_um), landing: landing(toUpper) };
  const lineSpacing = length(lower.minSpacing_um);
  const trackWidth = trackWidthOf(technology);
  const viaApart = nm(toPlate.spacing_um) - (trackWidth - viaTrack.size);
  const trackSpacing = Math.max(spacing, lineSpacing, viaApart);
  const dropSpacing = Math.max(lineSpacing, viaApart);
  const upperSpacing = length(upper.minSpacing_um);
  const padSize = even(Math.max(toTop ? landing(toTop) : 0, viaFrame.landing, length(upper.minWidth_um)));
  const frameWidth = even(Math.max(minPlateWidth, viaFrame.landing, trackWidth));

  const isWide = isWideUnit(technology);
  const metalSpacing = isWide ? Math.max(spacing, length(plateMetal.wideSpacing_um)) : spacing;
  const body = unitBody(technology, { frameWidth, clearance: Math.max(spacing, length(plateMetal.wideSpacing_um)) });
  const { plate, pad, tabLength } = body;
  // A shield stands off the tabs by the plain spacing, so it may pass them.
  const wideSpacing = Math.max(metalSpacing, tabLength + spacing);
  const rowGap = even(
    Math.max(metalSpacing, length(upper.minWidth_um), length(topPlateLayer.minSpacing_um) - 2 * body.topInset),
  );
  const strapWidth = rowGap;
  const strapX = Math.min(0, grid * Math.floor((pad[0] - padSize / 2 - strapWidth / 2 - upperSpacing) / grid));
  const bottomGap = even(Math.max(trackWidth + spacing, metalSpacing));
  const tabLevel = body.tabLevel ?? grid * Math.floor((plate[1] + rowGap) / 4 / grid);
  // A stub taller than its tab would leave a notch beside the plate.
  const tab = [tabLength, trackWidth] as const;

  const stop = (because: string, remedy: string): never => {
    throw new Infeasible(because, remedy);
  };
  const inMicrometres = (value: number) => `${value / 1000} um`;
  const levels = tabLevelsApart(technology);
  if (2 * tabLevel < levels || plate[1] + rowGap - 2 * tabLevel < levels)
    stop(
      `The two tab levels stand ${inMicrometres(2 * tabLevel)} apart and ${inMicrometres(plate[1] + rowGap - 2 * tabLevel)} from the next row's; a stub, its spacing and a shield between them need ${inMicrometres(levels)}.`,
      'Change tabLevel_um or take a larger plate.',
    );
  if (2 * tabLevel + trackWidth > plate[1])
    stop(
      `A stub ${inMicrometres(trackWidth)} tall at a level of ${inMicrometres(tabLevel)} reaches past the edge of its unit.`,
      'Lower tabLevel_um or take a larger unit.',
    );
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
  let strip: Rules['strip'];
  if (unit.kind === 'framed-fingers' && unit.shield === true) {
    const most = Math.min(plate[0], length(lower.maxWidth_um) || Infinity);
    const wide = lower.wideFrom_um !== undefined && most >= nm(lower.wideFrom_um);
    const apart = wide ? Math.max(lineSpacing, length(lower.wideSpacing_um)) : lineSpacing;
    const half = grid * Math.floor(Math.min(most / 2, plate[0] / 2 + wideSpacing - apart) / grid);
    if (2 * half < trackWidth)
      stop(
        `The strip that shields a unit keeps ${inMicrometres(apart)} from the tracks beside it, which leaves it ${inMicrometres(Math.max(0, 2 * half))} wide; its metal needs ${inMicrometres(trackWidth)}.`,
        'Lower minSpacing_um or wideSpacing_um of the trunks\' layer, or take units without a shield ("shield": false).',
      );
    strip = { half, spacing: apart };
  }
  const tracksPerShield = Math.floor((wideFrom - 1 + trackSpacing) / (trackWidth + trackSpacing));
  if (tracksPerShield < 1)
    stop(
      `A shield one track wide (${inMicrometres(trackWidth)}) already counts as wide metal.`,
      'Raise wideFrom_um of the plate metal or narrow the track.',
    );
  return {
    grid,
    plate,
    plateRim: body.rim,
    tab,
    tabLevel,
    pad,
    padSize,
    wideSpacing,
    spacing,
    trackWidth,
    trackSpacing,
    upperSpacing,
    lineSpacing,
    dropSpacing,
    rowGap,
    strapWidth,
    strapX,
    frameWidth,
    bottomGap,
    minPlateWidth,
    tracksPerShield: Math.min(tracksPerShield, 1000),
    ...(strip && { strip }),
    viaTrack,
    viaFrame,
  };
}

/** Column and row pitch in nanometres for a number of tracks per channel. */
export const pitchOf = (rules: Rules, tracks: number): [x: number, y: number] => [
  rules.plate[0] + 2 * rules.wideSpacing + tracks * rules.trackWidth + (tracks - 1) * rules.trackSpacing,
  rules.plate[1] + rules.rowGap,
];
