import type { Reference, Structure } from '../core/layout.js';
import { Infeasible } from '../core/problem.js';
import { rectangle, type Rectangle } from '../core/rectangle.js';
import { nm, um } from '../core/units.js';
import type { Frame } from '../hookup/frame.js';
import { tiesOf } from '../hookup/ties.js';
import type { Technology } from '../spec/technology.js';
import { joinToFrame } from './frame-joint.js';
import { Sheet } from './sheet.js';

/** Contacts are drawn as structures of one, and arrays of it. */
export interface Ties {
  readonly structures: readonly Structure[];
  readonly references: readonly Reference[];
}

/**
 * What lies below it all: the underlay, and beneath the `VSS` frame a tie ring, with contacts up to the trunks' metal along its left, right
 * and top sides, where no bit's wire passes. A wire there joins them; on `VSS` it hangs on the frame, on a net of the underlay's own it runs
 * along the left side alone, down to a pin.
 *
 *     ooooooooooo    contacts under the frame
 *     o         o
 *     o         o
 *     -----------    diffusion alone under the VSS bus
 *        bits
 */
export function drawTies(sheet: Sheet, technology: Technology, frame: Frame, name: string): Ties {
  const { underlay } = technology;
  const ties = tiesOf(technology);
  if (underlay)
    sheet.add(underlay.layer, rectangle(0, frame.frameLow, frame.width, frame.height), {
      net: underlay.net,
      part: 'shield',
    });
  if (ties.length === 0) return { structures: [], references: [] };
  const own = ties.find(({ net }) => net !== 'VSS')?.net;
  if (own === undefined) drawGroundLines(sheet, technology, frame);
  else drawOwnLine(sheet, technology, frame, own);
  const { width, height, frameLow, rules } = frame;
  const w = rules.frameWidth;
  const { tieRing } = technology;
  const structures: Structure[] = [];
  const references: Reference[] = [];
  ties.forEach(({ layer, via, net }, i) => {
    const isRing = layer === tieRing?.diffusion;
    const inset = isRing ? nm(tieRing.implantEnclosure_um ?? 0) : 0;
    const sides = isRing ? around(inset, frame) : net === 'VSS' ? [] : [rectangle(0, frameLow, w, height)];
    for (const side of sides) sheet.add(layer, side, { net, part: 'ring' });
    if (isRing && tieRing.implant !== undefined) for (const side of around(0, frame)) sheet.add(tieRing.implant, side);

    const size = nm(via.size_um);
    const step = size + nm(via.spacing_um);
    const contact = new Sheet(technology);
    contact.via(via.name, size, 0, 0, net);
    const structure = {
      name: `${name}_contact${i === 0 ? '' : i + 1}`,
      polygons: contact.polygons,
      references: [],
      labels: [],
    };
    structures.push(structure);
    const along = (x: number, y: number, axis: 'x' | 'y', length: number): Reference => {
      const count = Math.floor(length / step) + 1;
      return {
        structure: structure.name,
        origin: [x, y],
        columns: axis === 'x' ? count : 1,
        rows: axis === 'y' ? count : 1,
        columnStep: [axis === 'x' ? step : 0, 0],
        rowStep: [0, axis === 'y' ? step : 0],
        mirrored: false,
        angle_deg: 0,
      };
    };
    // From the middle of a corner to a step before the next, so that rows of contacts end apart.
    const tall = height - frameLow - w - step;
    references.push(along(w / 2, frameLow + w / 2, 'y', tall));
    if (net !== 'VSS') return;
    references.push(along(width - w / 2, frameLow + w / 2, 'y', tall));
    references.push(along(w / 2, height - w / 2, 'x', width - w));
  });
  return { structures, references };
}

/** Four sides of a ring below the frame. */
function around(inset: number, { width, height, frameLow, rules }: Frame): Rectangle[] {
  const [near, far] = [inset, rules.frameWidth - inset];
  const [left, low, right, high] = [near, frameLow + near, width - near, height - near];
  return [
    rectangle(left, low, right, frameLow + far),
    rectangle(left, height - far, right, high),
    rectangle(left, low, far, high),
    rectangle(width - far, low, right, high),
  ];
}

/** Wires below three sides of the frame, and vias from them to it. */
function drawGroundLines(sheet: Sheet, technology: Technology, frame: Frame): void {
  const { roles } = technology;
  const { rules, width, height, frameLow } = frame;
  const w = rules.frameWidth;
  const line = { net: 'VSS', part: 'ring' } as const;
  room(technology, frame);
  sheet.add(roles.trunk, rectangle(0, height - w, width, height), line);
  sheet.add(roles.trunk, rectangle(0, frameLow, w, height), line);
  sheet.add(roles.trunk, rectangle(width - w, frameLow, width, height), line);
  for (let row = -frame.rings; row < frame.rows + frame.rings; row++)
    for (const x of [w / 2, width - w / 2]) joinToFrame(sheet, technology, rules, x, frame.rowY(row), 'VSS');
}

/** A wire below the frame's left side, down to the edge, and its pin. */
function drawOwnLine(sheet: Sheet, technology: Technology, frame: Frame, net: string): void {
  const { roles } = technology;
  const w = frame.rules.frameWidth;
  room(technology, frame);
  sheet.add(roles.trunk, rectangle(0, 0, w, frame.height), { net, part: 'drop' });
  sheet.pin(roles.trunk, rectangle(0, 0, w, w), net);
}

/** The frame must not count as wide, nor the wire below it; without rings the first track lies a spacing of the plates' metal beside it. */
function room({ layers, roles }: Technology, { rules }: Frame): void {
  for (const { name, wideFrom_um, minSpacing_um } of layers) {
    if (name !== roles.trunk && name !== roles.bottomPlate) continue;
    if (wideFrom_um !== undefined && rules.frameWidth >= nm(wideFrom_um))
      throw new Infeasible(
        `The frame and the wire below it are ${um(rules.frameWidth)} um wide, which counts as wide on ${name}.`,
        "Narrow the tie ring or the underlay's contacts, or leave them out.",
      );
    if (rules.spacing < nm(minSpacing_um ?? 0))
      throw new Infeasible(
        `The wire below the frame keeps ${minSpacing_um} um on ${name}; beside it are ${um(rules.spacing)} um.`,
        'Leave the tie ring or the underlay out, or raise minSpacing_um of the plate metal.',
      );
  }
}
