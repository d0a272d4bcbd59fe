import type { BoxIndex } from '../core/boxes.js';
import { boxesOverlap, componentsOf } from '../core/components.js';
import { nm } from '../core/units.js';
import type { Capacitor } from '../spec/floorplan.js';
import type { Conductors } from './conductors.js';
import type { Drawing } from './drawing.js';
import { coveredArea, liesBelow } from './drawing.js';
import type { Finding } from './finding.js';
import { placeUm } from './finding.js';
import type { PinLabel } from './nets.js';
import { commonPlate, ground } from './nets.js';
import { overlapArea } from './overlap-area.js';

/** A top plate over a bottom plate: nodes of either, and the cell (or -1) that the top plate was drawn by. */
export interface Unit {
  readonly top: readonly number[];
  readonly bottom: readonly number[];
  readonly cell: number;
  readonly x: number;
  readonly y: number;
}

/** The nets that a cell's plates are meant to be on. */
export function meantNets(cell: string): { readonly bottom: string; readonly top: string } {
  if (cell === '-') return { bottom: ground, top: ground };
  return { bottom: cell === '=' ? ground : cell, top: commonPlate };
}

/** All units of a drawing, found from the plates alone. */
export function unitsOf(drawing: Drawing, c: Conductors): Unit[] {
  const { roles } = drawing.technology;
  const base = (name: string) => c.base[c.layers.findIndex((layer) => layer.name === name)];
  const tops = drawing.sheet(roles.topPlate);
  const bottoms = drawing.sheet(roles.bottomPlate);
  const plates = componentsOf(tops.boxes, tops.index);
  const parts: number[][] = Array.from({ length: plates.count }, () => []);
  for (let i = 0; i < plates.of.length; i++) parts[plates.of[i]].push(i);
  const units: Unit[] = [];
  for (const part of parts) {
    const below = new Set<number>();
    for (const i of part)
      for (const j of bottoms.index.search(tops.boxes.x0[i], tops.boxes.y0[i], tops.boxes.x1[i], tops.boxes.y1[i]))
        if (boxesOverlap(tops.boxes, i, bottoms.boxes, j)) below.add(j);
    if (below.size === 0) continue;
    const first = part[0];
    units.push({
      top: part.map((i) => base(roles.topPlate) + i),
      bottom: [...below].sort((a, b) => a - b).map((j) => base(roles.bottomPlate) + j),
      cell: tops.boxes.cell[first],
      x: (tops.boxes.x0[first] + tops.boxes.x1[first]) / 2,
      y: (tops.boxes.y0[first] + tops.boxes.y1[first]) / 2,
    });
  }
  return units;
}

interface Nets {
  readonly c: Conductors;
  /** Names by piece. */
  readonly names: ReadonlyMap<number, readonly string[]>;
  readonly labels: readonly PinLabel[];
}

/** Each cell has its plates, and each plate is on the net that the cell says. Plates on no named net at all are opens, reported there. */
function cellFindings(drawing: Drawing, units: readonly Unit[], { c, names }: Nets): Finding[] {
  const { roles } = drawing.technology;
  const findings: Finding[] = [];
  const ofCell = new Map<number, Unit>();
  for (const unit of units) if (unit.cell >= 0) ofCell.set(unit.cell, unit);
  drawing.flat.cells.forEach((cell, number) => {
    const unit = ofCell.get(number);
    const called = cell.name === undefined ? 'a unit' : `the unit of ${cell.name}`;
    const ownBottom = unit?.bottom.some((node) => c.cell[node] === number) ?? false;
    if (!unit || !ownBottom) {
      const text = `${called} has no ${unit ? 'bottom plate' : 'top plate over a bottom plate'}`;
      findings.push({
        rule: 'unit-missing',
        layer: unit ? roles.bottomPlate : roles.topPlate,
        at_um: placeUm(cell.at[0], cell.at[1]),
        ...(cell.name === undefined ? {} : { nets: [cell.name] }),
        text,
      });
      return;
    }
    if (cell.name === undefined) {
      const text = 'the reference does not say which capacitor this unit is';
      findings.push({ rule: 'unit-missing', layer: roles.bottomPlate, at_um: placeUm(unit.x, unit.y), text });
      return;
    }
    const meant = meantNets(cell.name);
    for (const [plate, layer, nodes] of [
      ['bottom', roles.bottomPlate, unit.bottom],
      ['top', roles.topPlate, unit.top],
    ] as const) {
      const found = [...new Set(nodes.flatMap((node) => names.get(c.piece[node]) ?? []))].sort();
      if (found.length === 0 || found.includes(meant[plate])) continue;
      findings.push({
        rule: 'unit-net',
        layer,
        at_um: placeUm(unit.x, unit.y),
        nets: [found[0], meant[plate]],
        text: `${called} has its ${plate} plate on ${found.join(' and ')}, meant is ${meant[plate]}`,
      });
    }
  });
  return findings;
}

/** Units that no cell speaks for: a capacitor's between its net and the common plate, or a dummy. */
function strayFindings(
  drawing: Drawing,
  units: readonly Unit[],
  capacitors: readonly Capacitor[],
  { c, names }: Nets,
): Finding[] {
  const known = new Set(capacitors.map((capacitor) => capacitor.name));
  const findings: Finding[] = [];
  for (const unit of units) {
    if (unit.cell >= 0) continue;
    const bottom = names.get(c.piece[unit.bottom[0]]) ?? [];
    const top = names.get(c.piece[unit.top[0]]) ?? [];
    if (bottom.length !== 1 || top.length !== 1) continue; // open or short, reported there
    const fits =
      (known.has(bottom[0]) && top[0] === commonPlate) ||
      (bottom[0] === ground && (top[0] === commonPlate || top[0] === ground));
    if (fits) continue;
    findings.push({
      rule: 'unit-net',
      layer: drawing.technology.roles.bottomPlate,
      at_um: placeUm(unit.x, unit.y),
      nets: [bottom[0], top[0]],
      text: `unit between ${bottom[0]} and ${top[0]}: neither a capacitor's nor a dummy`,
    });
  }
  return findings;
}

function areaFindings(drawing: Drawing, units: readonly Unit[], c: Conductors): Finding[] {
  const { unit: template, roles } = drawing.technology;
  const meant = nm(template.topPlate_um[0]) * nm(template.topPlate_um[1]);
  const findings: Finding[] = [];
  for (const unit of units) {
    const area = overlapArea(c.box, unit.top, c.box, unit.bottom);
    if (area === meant) continue;
    findings.push({
      rule: 'unit-area',
      layer: roles.topPlate,
      at_um: placeUm(unit.x, unit.y),
      text: `plates overlap in ${area / 1e6} um2, exactly ${meant / 1e6} um2 wanted`,
    });
  }
  return findings;
}

function countFindings(
  drawing: Drawing,
  units: readonly Unit[],
  capacitors: readonly Capacitor[],
  nets: Nets,
): Finding[] {
  const { c, names, labels } = nets;
  const shorted = new Set([...names.values()].filter((own) => own.length > 1).flat());
  if (shorted.has(commonPlate)) return [];
  const findings: Finding[] = [];
  const netOf = (nodes: readonly number[]) => names.get(c.piece[nodes[0]])?.[0];
  const counted = new Map<string, Unit[]>();
  for (const unit of units) {
    const net = netOf(unit.bottom);
    if (net === undefined || netOf(unit.top) !== commonPlate) continue;
    const own = counted.get(net);
    if (own) own.push(unit);
    else counted.set(net, [unit]);
  }
  for (const capacitor of capacitors) {
    if (shorted.has(capacitor.name)) continue;
    const own = counted.get(capacitor.name) ?? [];
    if (own.length === capacitor.units) continue;
    // At a unit that is there and not meant, or meant and not there; without cells at the capacitor's pin.
    const { cells } = drawing.flat;
    const extra = own.find((unit) => unit.cell >= 0 && cells[unit.cell].name !== capacitor.name);
    const has = new Set(own.map((unit) => unit.cell));
    const lost = cells.find((cell, number) => cell.name === capacitor.name && !has.has(number));
    const pin = labels.find((label) => label.name === capacitor.name);
    const at_um = extra
      ? placeUm(extra.x, extra.y)
      : lost
        ? placeUm(lost.at[0], lost.at[1])
        : pin
          ? placeUm(pin.x, pin.y)
          : placeUm(0, 0);
    findings.push({
      rule: 'unit-count',
      layer: drawing.technology.roles.bottomPlate,
      at_um,
      nets: [capacitor.name],
      text: `${own.length} units between ${capacitor.name} and ${commonPlate}, ${capacitor.units} wanted`,
    });
  }
  return findings;
}

/** Wires below a plate, its tabs aside: the plate is what surrounds the top plate by the template's enclosure. */
function wireFindings(drawing: Drawing, units: readonly Unit[], { c, names }: Nets): Finding[] {
  const { technology } = drawing;
  if (technology.wiresUnderPlate) return [];
  const plate = drawing.layer(technology.roles.bottomPlate);
  const plates = drawing.sheet(plate.name);
  const enclosure = nm(technology.unit.plateEnclosure_um);
  const findings: Finding[] = [];
  c.layers.forEach((layer, l) => {
    if ((layer.kind !== 'metal' && layer.kind !== 'plate') || !liesBelow(layer, plate, technology)) return;
    const wires: BoxIndex = drawing.sheet(layer.name).index;
    const reported = new Set<number>();
    for (const unit of units)
      for (const part of unit.top) {
        const [x0, y0] = [c.box.x0[part] - enclosure, c.box.y0[part] - enclosure];
        const [x1, y1] = [c.box.x1[part] + enclosure, c.box.y1[part] + enclosure];
        for (const i of wires.search(x0, y0, x1, y1)) {
          const node = c.base[l] + i;
          const own = names.get(c.piece[node]) ?? [];
          if (reported.has(node) || (own.length === 1 && own[0] === ground)) continue;
          const [wx0, wy0] = [Math.max(x0, c.box.x0[node]), Math.max(y0, c.box.y0[node])];
          const [wx1, wy1] = [Math.min(x1, c.box.x1[node]), Math.min(y1, c.box.y1[node])];
          if (wx0 >= wx1 || wy0 >= wy1 || coveredArea(plates, wx0, wy0, wx1, wy1) === 0) continue;
          reported.add(node);
          findings.push({
            rule: 'wires-under-plate',
            layer: layer.name,
            at_um: placeUm((wx0 + wx1) / 2, (wy0 + wy1) / 2),
            ...(own.length > 0 ? { nets: own } : {}),
            text: `wire of ${own.join(' and ') || 'no net'} under a bottom plate, where only ${ground} may be`,
          });
        }
      }
  });
  return findings;
}

/** Rules about units: there, on their nets, of one area, as many as wanted, and no wire under them. */
export const checkUnits = (
  drawing: Drawing,
  units: readonly Unit[],
  capacitors: readonly Capacitor[],
  nets: Nets,
): Finding[] => [
  ...cellFindings(drawing, units, nets),
  ...strayFindings(drawing, units, capacitors, nets),
  ...areaFindings(drawing, units, nets.c),
  ...countFindings(drawing, units, capacitors, nets),
  ...wireFindings(drawing, units, nets),
];
