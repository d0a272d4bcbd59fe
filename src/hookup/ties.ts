import { nm } from '../core/units.js';
import type { Technology, Via } from '../spec/technology.js';

/** A layer below the trunks that contacts lead up from, beneath the `VSS` frame. */
export interface Tie {
  readonly layer: string;
  readonly via: Via;
  readonly net: string;
}

/** What is tied, from the lowest up, as the technology says. */
export function tiesOf({ roles, vias, layers, tieRing, underlay }: Technology): readonly Tie[] {
  const way = (lower: string, uppers: readonly string[]) =>
    uppers.flatMap((upper) => vias.find((via) => via.lower === lower && via.upper === upper) ?? [])[0];
  const tie = (layer: string, net: string, ...uppers: string[]): Tie[] => {
    const via = way(layer, uppers);
    return via === undefined ? [] : [{ layer, via, net }];
  };
  const isWell = layers.some(({ name, kind }) => name === underlay?.layer && kind === 'well');
  const direct = underlay === undefined ? undefined : isWell ? underlay.tie : underlay.layer;
  return [
    ...(tieRing ? tie(tieRing.diffusion, 'VSS', roles.trunk, underlay?.layer ?? roles.trunk) : []),
    ...(underlay && direct !== undefined && direct !== tieRing?.diffusion
      ? tie(direct, underlay.net, roles.trunk)
      : []),
  ];
}

/** The least width (nm) of a side of the frame that has ties beneath it: each layer holds its contacts, an implant its diffusion. */
export function tieWidth(technology: Technology): number {
  const { layers, tieRing } = technology;
  const least = (name: string) => nm(layers.find((layer) => layer.name === name)?.minWidth_um ?? 0);
  return Math.max(
    0,
    ...tiesOf(technology).map(({ layer, via }) => {
      const around = layer === tieRing?.diffusion ? nm(tieRing.implantEnclosure_um ?? 0) : 0;
      const landing = nm(via.size_um) + 2 * nm(via.enclosure_um);
      return Math.max(landing, least(layer), least(via.upper)) + 2 * around;
    }),
  );
}
