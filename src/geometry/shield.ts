import type { Rectangle } from '../core/rectangle.js';
import type { ChannelHookup } from '../hookup/channel-wires.js';

/** Pieces of the `VSS` shield on the plates' metal in one channel, and where they join the `VSS` lines below. */
export interface Shield {
  readonly pieces: readonly Rectangle[];
  readonly vias: readonly (readonly [x: number, y: number])[];
}

/**
 * The shield of a channel: between the two wide spacings, from the frame's bottom side to its top side, cut at every stub by the plain
 * spacing. What stays free beside a stub's end joins the pieces.
 *
 *     |######|        full slab
 *     ====o |#|       a stub to the left-hand track; the strip beside its end joins
 *     |######|
 *
 * Slabs that touch hang together. Such a group is drawn if it touches the frame or lies over a `VSS` line long enough for a via; one that
 * has neither would float and is left out. At the width that counts as wide the shield is slit between two tracks.
 */
export function channelShield(hookup: ChannelHookup, channel: number): Shield {
  const { frame } = hookup;
  const { rules, tracks } = frame;
  const pieces: Rectangle[] = [];
  const vias: [number, number][] = [];
  const low = frame.frameLow + rules.frameWidth;
  const high = frame.height - rules.frameWidth;
  const left = frame.trackX(channel, 0);
  const lines = hookup.vertical.filter(
    (wire) => wire.net === 'VSS' && wire.x0 > left && wire.x0 < frame.trackX(channel, tracks - 1) + rules.trackWidth,
  );
  // A fill dummy's stub lies on the shield and has its via on a line already.
  const fills = hookup.joints.filter((joint) => joint.net === 'VSS');
  const cuts = hookup.cuts.filter((cut) => cut.channel === channel).sort((a, b) => a.y - b.y);
  const window = rules.trackWidth / 2 + rules.spacing;
  const halfLanding = rules.viaTrack.landing / 2;
  const strips = Math.ceil(tracks / rules.tracksPerShield);
  for (let strip = 0; strip < strips; strip++) {
    const from = Math.round((strip * tracks) / strips);
    const to = Math.round(((strip + 1) * tracks) / strips);
    const x0 = frame.trackX(channel, from);
    const x1 = frame.trackX(channel, to - 1) + rules.trackWidth;
    const slabs: (Rectangle & { group: number })[] = [];
    let group = 0;
    let y = low;
    const slab = (bottom: number, top: number, a: number, b: number) =>
      slabs.push({ x0: a, y0: bottom, x1: b, y1: top, group });
    for (const cut of cuts) {
      const stubEnd = frame.trackX(channel, cut.track);
      const a = cut.side === 'R' ? Math.max(x0, stubEnd + rules.trackWidth + rules.spacing) : x0;
      const b = cut.side === 'R' ? x1 : Math.min(x1, stubEnd - rules.spacing);
      if (a === x0 && b === x1) continue;
      if (cut.y - window > y) slab(y, cut.y - window, x0, x1);
      y = cut.y + window;
      if (b - a >= rules.minPlateWidth) slab(cut.y - window, y, a, b);
      else group++;
    }
    if (high > y) slab(y, high, x0, x1);
    for (let g = 0; g <= group; g++) {
      const members = slabs.filter((member) => member.group === g);
      const joints: [number, number][] = [];
      let joined = members.some((member) => member.y0 === low || member.y1 === high);
      for (const line of lines) {
        if (line.x0 < x0 || line.x0 > x1) continue;
        if (fills.some((at) => at.x === line.x0 && members.some((m) => m.y0 < at.y && at.y < m.y1))) {
          joined = true;
          continue;
        }
        // The tallest common stretch of this line and the group's slabs takes the via in its middle.
        // It keeps its spacing to the via at either end of the line: on the frame, or of the trunk that ends below.
        const own = rules.viaTrack.size + rules.viaTrack.spacing - halfLanding;
        const onFrame = frame.frameLow + rules.frameWidth / 2;
        const below = line.y0 > onFrame ? line.y0 - rules.trackWidth - rules.lineSpacing : onFrame;
        const [lowest, highest] = [below + own, frame.height - rules.frameWidth / 2 - own];
        let best: readonly [number, number] | undefined;
        for (const member of members) {
          if (line.x0 - halfLanding < member.x0 || line.x0 + halfLanding > member.x1) continue;
          const bottom = Math.max(member.y0, line.y0 - rules.trackWidth / 2, lowest);
          const top = Math.min(member.y1, line.y1 + rules.trackWidth / 2, highest);
          if (top - bottom >= rules.viaTrack.landing && (best === undefined || top - bottom > best[1] - best[0]))
            best = [bottom, top];
        }
        if (best !== undefined) joints.push([line.x0, Math.floor((best[0] + best[1]) / 2 / rules.grid) * rules.grid]);
      }
      if (joints.length === 0 && !joined) continue;
      pieces.push(...members.map(({ x0: a, y0: b, x1: c, y1: d }) => ({ x0: a, y0: b, x1: c, y1: d })));
      vias.push(...joints);
    }
  }
  return { pieces, vias };
}
