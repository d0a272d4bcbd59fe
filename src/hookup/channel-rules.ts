import { Infeasible } from '../core/problem.js';
import { nm } from '../core/units.js';
import type { Technology } from '../spec/technology.js';
import { tabLevelsApart } from '../spec/tracks.js';
import { commonRules, inMicrometres, layerOf, lengthOf, type Rules } from './rules.js';
import { unitTabs } from './unit-body.js';

/** What the channel style needs of a technology besides: tabs that stubs leave from, tracks and the shield over them. */
export interface ChannelRules extends Rules {
  readonly hookup: 'channel';
  /** Tab on the bottom plate: how far it stands out, how tall it is. The left one sits `tabLevel` above the middle, the right one below. */
  readonly tab: readonly [length: number, height: number];
  readonly minPlateWidth: number;
  /** The most tracks under one piece of shield before it would count as wide metal. */
  readonly tracksPerShield: number;
  /** Half the width of the `VSS` strip under a column, and the room that it keeps; absent without a shield. */
  readonly strip?: { readonly half: number; readonly spacing: number };
}

/**
 * Derives the dimensions of a channel-style drawing from a technology's rules.
 * @throws Infeasible where the rules leave no room: which rule, and what would make it possible.
 */
export function channelRules(technology: Technology): ChannelRules {
  const { unit, roles } = technology;
  const common = commonRules(technology, 'straps as row gaps');
  const { grid, plate, rowGap, spacing, trackWidth, trackSpacing, lineSpacing } = common;
  const lower = layerOf(technology, roles.trunk);
  const plateMetal = layerOf(technology, roles.bottomPlate);
  const wideFrom = plateMetal.wideFrom_um === undefined ? Infinity : nm(plateMetal.wideFrom_um);

  const tabs = unitTabs(unit);
  // A shield stands off the tabs by the plain spacing, so it may pass them.
  const wideSpacing = Math.max(common.wideSpacing, tabs.length + spacing);
  // A unit in the ring has a tab downwards, with a track's via on it.
  const bottomGap = Math.max(Math.ceil((trackWidth + spacing) / (2 * grid)) * 2 * grid, common.bottomGap);
  const tabLevel = tabs.level ?? grid * Math.floor((plate[1] + rowGap) / 4 / grid);
  // A stub taller than its tab would leave a notch beside the plate.
  const tab = [tabs.length, trackWidth] as const;

  const stop = (because: string, remedy: string): never => {
    throw new Infeasible(because, remedy);
  };
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
  let strip: ChannelRules['strip'];
  if (unit.kind === 'framed-fingers' && unit.shield === true) {
    const most = Math.min(plate[0], lengthOf(lower.maxWidth_um) || Infinity);
    const wide = lower.wideFrom_um !== undefined && most >= nm(lower.wideFrom_um);
    const apart = wide ? Math.max(lineSpacing, lengthOf(lower.wideSpacing_um)) : lineSpacing;
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
    ...common,
    hookup: 'channel',
    tab,
    tabLevel,
    wideSpacing,
    bottomGap,
    minPlateWidth: lengthOf(plateMetal.minWidth_um),
    tracksPerShield: Math.min(tracksPerShield, 1000),
    ...(strip && { strip }),
  };
}
