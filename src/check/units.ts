import type { BoxIndex } from '../core/boxes.js';
import { placed } from '../core/flatten.js';
import { nm } from '../core/units.js';
import type { Capacitor } from '../spec/floorplan.js';
import type { Conductors } from './conductors.js';
import type { Drawing } from './drawing.js';
import { coveredArea, liesBelow } from './drawing.js';
import type { Finding } from './finding.js';
import { placeUm } from './finding.js';
import type { PinLabel } from './nets.js';
import { commonPlate, ground } from './nets.js';
import type { Recognition, Unit } from './unit-recognition.js';

/** The nets that a cell's plates are meant to be on. */
export function meantNets(cell: string): { readonly bottom: string; readonly top: string } {
  if (cell === '-') return { bottom: ground, top: ground };
  return { bottom: cell === '=' ? ground : cell, top: commonPlate };
}

interface Nets {
  readonly c: Conductors;
  /** Names by piece. */
  readonly names: ReadonlyMap<number, readonly string[]>;
  readonly labels: readonly PinLabel[];
}

/** What a cell without a unit lacks. */
const wholeUnit = {
  'parallel-plate': 'top plate over a bottom plate',
  'framed-fingers': 'comb within a closed frame',
  'named-cell': 'instance with a landing over each terminal',
} as const;

/** Each cell has its plates, and each plate is on the net that the cell says. Plates on no named net at all are opens, reported there. */
function cellFindings(drawing: Drawing, units: readonly Unit[], { c, names }: Nets): Finding[] {
  const { roles, unit: template } = drawing.technology;
  const findings: Finding[] = [];
  const ofCell = new Map<number, Unit>();
  for (const unit of units) if (unit.cell >= 0) ofCell.set(unit.cell, unit);
  drawing.flat.cells.forEach((cell, number) => {
    const unit = ofCell.get(number);
    const called = cell.name === undefined ? 'a unit' : `the unit of ${cell.name}`;
    const ownBottom = unit?.bottom.some((node) => c.cell[node] === number) ?? false;
    if (!unit || !ownBottom) {
      const text = `${called} has no ${unit ? 'bottom plate of its own' : wholeUnit[template.kind]}`;
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

function areaFindings(drawing: Drawing, { units, misfit }: Recognition): Finding[] {
  const layer = drawing.technology.roles.topPlate;
  return units.flatMap((unit, number) => {
    const text = misfit(unit, number);
    return text === undefined ? [] : [{ rule: 'unit-area', layer, at_um: placeUm(unit.x, unit.y), text }];
  });
}

/** Instances of a named cell that no cell speaks for and that lack a landing. */
function lostInstances(drawing: Drawing, units: readonly Unit[]): Finding[] {
  const { unit: template, roles } = drawing.technology;
  if (template.kind !== 'named-cell') return [];
  const found = new Set(units.map(({ x, y }) => `${x} ${y}`));
  const [low, high] = template.outline_um.map(([x, y]) => [nm(x), nm(y)] as const);
  const middle = [(low[0] + high[0]) / 2, (low[1] + high[1]) / 2] as const;
  return drawing.flat.instances.flatMap(({ place, cell }) => {
    const [x, y] = placed(place, ...middle);
    if (cell >= 0 || found.has(`${x} ${y}`)) return [];
    const text = `an instance of ${template.cell} without a landing over each terminal`;
    return [{ rule: 'unit-missing', layer: roles.bottomPlate, at_um: placeUm(x, y), text }];
  });
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

/** Wires below a unit, its tabs aside: of plates where the bottom plate is drawn, of frames and named cells all that they cover. */
function wireFindings(drawing: Drawing, units: readonly Unit[], { c, names }: Nets): Finding[] {
  const { technology } = drawing;
  if (technology.wiresUnderPlate) return [];
  const plate = drawing.layer(technology.roles.bottomPlate);
  const plates = drawing.sheet(plate.name);
  const isPlate = technology.unit.kind === 'parallel-plate';
  const findings: Finding[] = [];
  c.layers.forEach((layer, l) => {
    if ((layer.kind !== 'metal' && layer.kind !== 'plate') || !liesBelow(layer, plate, technology)) return;
    const wires: BoxIndex = drawing.sheet(layer.name).index;
    const reported = new Set<number>();
    for (const unit of units)
      for (const { x0, y0, x1, y1 } of unit.body) {
        for (const i of wires.search(x0, y0, x1, y1)) {
          const node = c.base[l] + i;
          const own = names.get(c.piece[node]) ?? [];
          if (reported.has(node) || (own.length === 1 && own[0] === ground)) continue;
          const [wx0, wy0] = [Math.max(x0, c.box.x0[node]), Math.max(y0, c.box.y0[node])];
          const [wx1, wy1] = [Math.min(x1, c.box.x1[node]), Math.min(y1, c.box.y1[node])];
          if (wx0 >= wx1 || wy0 >= wy1 || (isPlate && coveredArea(plates, wx0, wy0, wx1, wy1) === 0)) continue;
          reported.add(node);
          findings.push({
            rule: 'wires-under-plate',
            layer: layer.name,
            at_um: placeUm((wx0 + wx1) / 2, (wy0 + wy1) / 2),
            ...(own.length > 0 ? { nets: own } : {}),
            text: `wire of ${own.join(' and ') || 'no net'} under a unit, where only ${ground} may be`,
          });
        }
      }
  });
  return findings;
}

/** Rules about units: there, on their nets, of one size, as many as wanted, and no wire under them. */
export function checkUnits(
  drawing: Drawing,
  found: Recognition,
  capacitors: readonly Capacitor[],
  nets: Nets,
): Finding[] {
  const { units } = found;
  return [
    ...cellFindings(drawing, units, nets),
    ...strayFindings(drawing, units, capacitors, nets),
    ...lostInstances(drawing, units),
    ...areaFindings(drawing, found),
    ...countFindings(drawing, units, capacitors, nets),
    ...wireFindings(drawing, units, nets),
  ];
}
