import { streamKey } from '../core/flatten.js';
import type { Label, Point } from '../core/layout.js';
import { InputError } from '../core/problem.js';
import type { Layer, Technology } from '../spec/technology.js';
import type { Polygons } from '../spec/polygons.js';
import { unitSize_um } from '../spec/unit-geometry.js';
import { visitDrawn } from './drawn-shapes.js';
import { greatestCommonDivisor } from './path-data.js';

/**
 * `cover` is ground on the metal of the plates over a channel: it would hide the trunks below it. `under` is ground below whole units, which
 * would hide them as the other wires below may not.
 */
export type GroupKind = 'under' | 'cover' | 'plate' | 'topPlate' | 'lower' | 'middle' | 'upper' | 'via' | 'topVia';

/** All shapes of one net on one layer; of vias and top plates all nets together, for they look alike. */
export interface DrawnGroup {
  readonly kind: GroupKind;
  readonly net: string;
  /** Underside of the layer; of a via that of the layer above it. */
  readonly height: number;
  readonly outlines: (readonly Point[])[];
}

/** A plate that belongs to a capacitor: where its name may stand. */
interface NamedPlate {
  readonly net: string;
  readonly left: number;
  readonly right: number;
  readonly top: number;
}

export interface Drawn {
  /** In the order of drawing: plates, then wires from the lowest metal up, each with the vias that end on it. */
  readonly groups: readonly DrawnGroup[];
  readonly plates: readonly NamedPlate[];
  readonly labels: readonly Label[];
  /** The longest step on which every corner lies. */
  readonly step: number;
  /** Bounding box of all outlines and of the block's boundary. */
  readonly extent: { readonly x0: number; readonly y0: number; readonly x1: number; readonly y1: number };
}

const order: readonly GroupKind[] = [
  'under',
  'cover',
  'plate',
  'topPlate',
  'lower',
  'middle',
  'upper',
  'via',
  'topVia',
];

/**
 * Sorts what conducts into groups to be painted alike. Layers that the technology does not know are left out.
 * @throws InputError if nothing is left, or a structure is missing.
 */
export function drawnGroups(p: Polygons): Drawn {
  const layers = paintedLayers(p.technology);
  const capacitors = new Set(p.capacitors.map((c) => c.name));
  const groups = new Map<string, DrawnGroup>();
  const plates: NamedPlate[] = [];
  let step = 0;
  let [x0, y0, x1, y1] = [Infinity, Infinity, -Infinity, -Infinity];

  const reach = (xy: readonly Point[]) => {
    for (const [x, y] of xy) {
      step = greatestCommonDivisor(greatestCommonDivisor(x, y), step);
      x0 = Math.min(x0, x);
      y0 = Math.min(y0, y);
      x1 = Math.max(x1, x);
      y1 = Math.max(y1, y);
    }
  };
  const { roles, layers: known } = p.technology;
  const boundary = known.find((l) => l.name === roles.boundary);
  for (const { polygons } of p.structures.filter((s) => s.name === p.topStructure))
    for (const q of polygons) if (boundary && streamKey(q) === streamKey(boundary.stream)) reach(q.xy);

  const unitWidth = 1000 * unitSize_um(p.technology.unit)[0];
  const labels = visitDrawn(p, (polygon, net, xy) => {
    const painted = layers.get(streamKey(polygon));
    if (painted === undefined) return;
    const { height } = painted;
    const isShield = polygon.part === 'shield';
    const kind =
      painted.kind === 'lower'
        ? isShield && Math.max(...xy.map(([x]) => x)) - Math.min(...xy.map(([x]) => x)) > unitWidth / 2
          ? 'under'
          : 'lower'
        : painted.kind !== 'middle'
          ? painted.kind
          : polygon.part === 'plate'
            ? 'plate'
            : isShield
              ? 'cover'
              : 'middle';
    const alike = kind === 'via' || kind === 'topVia' || kind === 'topPlate';
    const key = `${kind} ${height} ${alike ? '' : net}`;
    const group = groups.get(key);
    if (group) group.outlines.push(xy);
    else groups.set(key, { kind, net, height, outlines: [xy] });

    reach(xy);
    if (kind === 'plate' && capacitors.has(net)) plates.push(namedPlate(net, xy));
  });

  if (groups.size === 0)
    throw new InputError([
      { pointer: '/structures', found: 'no metal with a net', wanted: 'a drawing of plates and wires' },
    ]);
  const rank = new Map(['', ...p.capacitors.map((c) => c.name), 'VSS', 'TOP'].map((net, i) => [net, i]));
  const sorted = [...groups.values()].sort(
    (a, b) =>
      order.indexOf(a.kind) - order.indexOf(b.kind) ||
      a.height - b.height ||
      (rank.get(a.net) ?? -1) - (rank.get(b.net) ?? -1),
  );
  // A frame may be drawn in pieces: the narrow ones bear no name.
  const widest = plates.reduce((width, { left, right }) => Math.max(width, right - left), 0);
  const named = plates.filter(({ left, right }) => 2 * (right - left) > widest);
  return { groups: sorted, plates: named, labels, step: step || 1, extent: { x0, y0, x1, y1 } };
}

/** The widest level part of a plate's top edge, so that tabs do not count. */
function namedPlate(net: string, xy: readonly Point[]): NamedPlate {
  const top = Math.max(...xy.map(([, y]) => y));
  const edge = xy.filter(([, y]) => y === top).map(([x]) => x);
  return { net, left: Math.min(...edge), right: Math.max(...edge), top };
}

interface PaintedLayer {
  readonly kind: Exclude<GroupKind, 'plate' | 'cover' | 'under'>;
  readonly height: number;
}

function paintedLayers(technology: Technology): Map<string, PaintedLayer> {
  const { layers, vias, roles } = technology;
  const painted = new Map<string, PaintedLayer>();
  const byName = new Map(layers.map((l) => [l.name, l]));
  // Only a top plate on a layer of its own is thin: combs and landings lie on the wires' metals.
  const thinTop = roles.topPlate !== roles.bottomPlate && roles.topPlate !== roles.strap;
  const height = (name: string) => byName.get(name)?.height_um ?? 0;
  const plateHeight = height(roles.bottomPlate);
  const kindOf = (l: Layer): PaintedLayer['kind'] | undefined => {
    if (l.kind !== 'metal' && l.kind !== 'plate') return undefined;
    if (thinTop && l.name === roles.topPlate) return 'topPlate';
    const above = (l.height_um ?? 0) - plateHeight;
    return above < 0 ? 'lower' : above > 0 ? 'upper' : 'middle';
  };
  for (const l of layers) {
    const kind = kindOf(l);
    if (kind) painted.set(streamKey(l.stream), { kind, height: l.height_um ?? 0 });
  }
  for (const v of vias)
    painted.set(streamKey(v.stream), {
      kind: thinTop && v.lower === roles.topPlate ? 'topVia' : 'via',
      height: height(v.upper),
    });
  return painted;
}
