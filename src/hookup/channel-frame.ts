import type { ChannelRules } from './channel-rules.js';
import { type Frame, frameOf, type FrameSize } from './frame.js';
import type { Lengths } from './track-order.js';

/** The frame with the channels between its columns. */
export interface ChannelFrame extends Frame {
  readonly rules: ChannelRules;
  /** Of every channel. */
  readonly tracks: number;
  /** Left edge of a track in channel 0 .. columns. */
  trackX(channel: number, track: number): number;
  /** Middle of the stub of a unit. */
  stubY(row: number, side: 'L' | 'R'): number;
}

/** Column and row pitch in nanometres for a number of tracks per channel. */
export const channelPitch = (rules: ChannelRules, tracks: number): [x: number, y: number] => [
  rules.plate[0] + 2 * rules.wideSpacing + tracks * rules.trackWidth + (tracks - 1) * rules.trackSpacing,
  rules.plate[1] + rules.rowGap,
];

/** What the router measures wires in. */
export const channelLengths = (rules: ChannelRules): Lengths => ({
  row: rules.plate[1] + rules.rowGap,
  level: rules.tabLevel,
  track: rules.trackWidth + rules.trackSpacing,
  reach: rules.plate[0] / 2 + rules.wideSpacing + rules.trackWidth / 2,
});

export function channelFrame(rules: ChannelRules, size: FrameSize & { readonly tracks: number }): ChannelFrame {
  const { rings, tracks } = size;
  const pitch = channelPitch(rules, tracks);
  const besideCore = pitch[0] - rules.plate[0] - 2 * rules.wideSpacing;
  const sideGap = rings > 0 ? rules.wideSpacing : rules.spacing + besideCore + rules.wideSpacing;
  const frame = frameOf(rules, size, pitch, sideGap);
  return {
    ...frame,
    tracks,
    trackX: (channel, track) =>
      frame.columnX(channel) -
      pitch[0] +
      rules.plate[0] / 2 +
      rules.wideSpacing +
      track * (rules.trackWidth + rules.trackSpacing),
    stubY: (row, side) => frame.rowY(row) + (side === 'L' ? rules.tabLevel : -rules.tabLevel),
  };
}
