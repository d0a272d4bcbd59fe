import { BoxIndex, BoxList } from '../core/boxes.js';
import { unitedSlabs } from '../core/slabs.js';
import type { Polygons } from '../spec/polygons.js';
import { type Conductors, conductorsOf } from './conductors.js';
import { checkConnectivity } from './connectivity.js';
import { coveredArea, Drawing, type Region } from './drawing.js';
import type { Finding } from './finding.js';
import { inOrder, placeUm } from './finding.js';
import { checkLattice } from './lattice.js';
import { type BitUnit, type Neighbourhood, neighbourhoodOf } from './neighbourhood.js';
import { commonPlate, pieceNames, pinLabels } from './nets.js';
import { checkShapes } from './shape-rules.js';
import { type Unit, unitsOf } from './unit-recognition.js';
import { checkUnits } from './units.js';
import { checkVertices } from './vertices.js';
import { checkVia } from './via-rules.js';

/** Shapes beyond the block's outline, where it has one, and shapes on stream layers that the technology does not name. */
function checkLayers(drawing: Drawing): Finding[] {
  const { technology, flat } = drawing;
  const outline = drawing.sheet(technology.roles.boundary);
  const findings: Finding[] = [];
  for (const boxes of flat.layers.values()) {
    const named = [...technology.layers, ...technology.vias].find(
      (one) => one.stream.layer === boxes.layer && one.stream.datatype === boxes.datatype,
    );
    const name = named?.name ?? `${boxes.layer}/${boxes.datatype}`;
    const reported = new Set<number>();
    for (let i = 0; i < boxes.x0.length; i++) {
      const [x0, y0, x1, y1] = [boxes.x0[i], boxes.y0[i], boxes.x1[i], boxes.y1[i]];
      const within = outline.boxes.x0.length === 0 || coveredArea(outline, x0, y0, x1, y1) === (x1 - x0) * (y1 - y0);
      if ((named && within) || reported.has(boxes.shape[i])) continue;
      reported.add(boxes.shape[i]);
      const at_um = placeUm((x0 + x1) / 2, (y0 + y1) / 2);
      if (!named) findings.push({ rule: 'unknown-layer', layer: name, at_um, text: 'not a layer of the technology' });
      if (!within) findings.push({ rule: 'boundary', layer: name, at_um, text: "beyond the block's outline" });
    }
  }
  return findings;
}

/** The top plates: their layer, or the combs where these share a metal with their frames and with wires. */
function topPlates(drawing: Drawing, { box }: Conductors, units: readonly Unit[]): Region {
  const { roles } = drawing.technology;
  if (roles.topPlate !== roles.bottomPlate) return drawing.sheet(roles.topPlate);
  const list = new BoxList();
  for (const node of units.flatMap(({ top }) => top)) list.push(box.x0[node], box.y0[node], box.x1[node], box.y1[node]);
  const slabs = unitedSlabs(list.finish());
  return { slabs, slabIndex: new BoxIndex(slabs) };
}

/** What a drawing is worth by itself. */
export interface Verdict {
  /** In a fixed order; none for a sound drawing. */
  readonly findings: readonly Finding[];
  readonly neighbourhood: Neighbourhood;
}

/**
 * Checks a drawing from its polygons alone, against its own technology, capacitors and cells, and tells how alike the surroundings of its
 * units are. Never looks at `net` or `part`: shapes that touch are one piece, and pin labels name pieces.
 *
 * @throws InputError if the structures cannot be flattened (`flatten`).
 */
export function judgePolygons(p: Polygons): Verdict {
  const drawing = new Drawing(p);
  const { technology } = p;
  const c = conductorsOf(drawing);
  const { labels, findings } = pinLabels(drawing, c);
  const names = pieceNames(labels, c);
  const found = unitsOf(drawing, c);
  const bits = new Set(p.capacitors.filter(({ role }) => role === 'bit').map(({ name }) => name));
  const isOn = (node: number, net: string) => names.get(c.piece[node])?.includes(net) ?? false;
  const ofBits = found.units.flatMap((unit): BitUnit[] => {
    const capacitor = names.get(c.piece[unit.bottom[0]])?.find((net) => bits.has(net));
    return capacitor !== undefined && isOn(unit.top[0], commonPlate) ? [{ ...unit, capacitor }] : [];
  });
  const tops = topPlates(drawing, c, found.units);
  return {
    findings: inOrder([
      ...findings,
      ...checkVertices(drawing),
      ...technology.layers.flatMap((layer) => checkShapes(drawing.sheet(layer.name).slabs, layer)),
      ...technology.vias.flatMap((via) => checkVia(drawing, via, tops)),
      ...checkLayers(drawing),
      ...checkConnectivity(drawing, { c, labels, names, units: found.units }),
      ...checkUnits(drawing, found, p.capacitors, { c, labels, names }),
      ...checkLattice(drawing, [{ all: found.units, ofBits }]),
    ]),
    neighbourhood: neighbourhoodOf(drawing, c, [ofBits], (node) => isOn(node, commonPlate)),
  };
}

/** The findings alone. @throws as `judgePolygons` */
export const checkPolygons = (p: Polygons): readonly Finding[] => judgePolygons(p).findings;
