import { flatten } from '../core/flatten.js';
import { nm } from '../core/units.js';
import type { Floorplan } from '../spec/floorplan.js';
import type { Polygons } from '../spec/polygons.js';
import type { Finding } from './finding.js';
import { inOrder, placeUm } from './finding.js';

/** The place of a cell from the core's centre; rows run from the top, so y falls as they rise. */
function cellPlace(f: Floorplan, row: number, column: number): [number, number] {
  const { rows, columns, pitch_um } = f.core;
  const x2 = (2 * column - (columns - 1)) * nm(pitch_um[0]);
  const y2 = (rows - 1 - 2 * row) * nm(pitch_um[1]);
  return placeUm(x2 / 2, y2 / 2);
}

/** As many cells as the core has, names that are known, and as many cells of each capacitor as it has units. */
function counts(f: Floorplan): Finding[] {
  const { rows, columns } = f.core;
  const findings: Finding[] = [];
  const report = (at_um: [number, number], text: string, nets?: string[]) =>
    findings.push({ rule: 'cell-count', layer: '', at_um, ...(nets ? { nets } : {}), text });
  if (f.cells.length !== rows) report([0, 0], `${f.cells.length} rows of cells, the core has ${rows}`);
  const found = new Map(f.capacitors.map((capacitor) => [capacitor.name, 0]));
  const count = (name: string, row: number, column: number) => {
    const before = found.get(name);
    if (before !== undefined) found.set(name, before + 1);
    else report(cellPlace(f, row, column), `${name} is none of the capacitors`, [name]);
  };
  f.cells.forEach((cells, row) => {
    if (cells.length !== columns)
      report(cellPlace(f, row, 0), `${cells.length} cells in row ${row}, the core has ${columns} columns`);
    cells.forEach((name, column) => name !== '-' && count(name, row, column));
  });
  for (const unit of f.ringUnits ?? []) count(unit.capacitor, unit.row, unit.column);
  for (const capacitor of f.capacitors) {
    const cells = found.get(capacitor.name);
    if (cells !== capacitor.units)
      report([0, 0], `${cells} cells of ${capacitor.name}, which has ${capacitor.units} units`, [capacitor.name]);
  }
  return findings;
}

/** What a placement claims of its symmetry: the first moment of each bit is exactly 0, and each cell equals its reflection. */
function symmetry(f: Floorplan): Finding[] {
  const { placement } = f;
  if (!placement) return [];
  const reflected = placement.proof?.class === 'point-reflected' || placement.method.includes('point-reflected');
  if (!reflected && placement.proof?.class !== 'zero-first-order') return [];
  const { rows, columns } = f.core;
  const findings: Finding[] = [];
  for (const { name, role } of f.capacitors) {
    if (role !== 'bit') continue;
    let x2 = 0;
    let y2 = 0;
    let first: [number, number] | undefined;
    const add = (row: number, column: number) => {
      x2 += 2 * column - (columns - 1);
      y2 += rows - 1 - 2 * row;
      first ??= [row, column];
    };
    f.cells.forEach((cells, row) => cells.forEach((cell, column) => cell === name && add(row, column)));
    for (const unit of f.ringUnits ?? []) if (unit.capacitor === name) add(unit.row, unit.column);
    if ((x2 === 0 && y2 === 0) || !first) continue;
    const text = `first moment of ${name} is ${x2}, ${y2} half-pitches, the placement claims 0, 0`;
    findings.push({ rule: 'symmetry', layer: '', at_um: cellPlace(f, ...first), nets: [name], text });
  }
  return findings;
}

/** Units outside the core stand in the rings around it, each alone and in no corner. */
function ring(f: Floorplan): Finding[] {
  const { rows, columns } = f.core;
  const rings = f.array?.rings;
  const findings: Finding[] = [];
  const taken = new Set<string>();
  for (const { capacitor, row, column } of f.ringUnits ?? []) {
    const report = (text: string) =>
      findings.push({ rule: 'ring', layer: '', at_um: cellPlace(f, row, column), nets: [capacitor], text });
    const above = Math.max(-row, row - (rows - 1), 0);
    const beside = Math.max(-column, column - (columns - 1), 0);
    const depth = Math.max(above, beside);
    if (depth === 0) report(`${capacitor} is listed in the ring and stands in the core`);
    if (rings !== undefined && depth > rings) report(`${capacitor} stands beyond the ${rings} rings`);
    if (above > 0 && beside > 0) report(`${capacitor} stands in a corner of the ring`);
    if (taken.has(`${row} ${column}`)) report(`${capacitor} stands where another ring unit does`);
    taken.add(`${row} ${column}`);
  }
  if (f.array?.termination !== undefined) {
    const terminations = f.capacitors.filter((capacitor) => capacitor.role === 'termination');
    const wanted = f.array.termination === 'none' ? 0 : 1;
    if (terminations.length !== wanted)
      findings.push({
        rule: 'ring',
        layer: '',
        at_um: [0, 0],
        text: `${terminations.length} terminations, the array asks for ${f.array.termination}`,
      });
    for (const { name } of terminations) {
      const inRing = (f.ringUnits ?? []).some((unit) => unit.capacitor === name);
      if (inRing === (f.array.termination === 'ring')) continue;
      const text = `${name} stands in the ${inRing ? 'ring' : 'core'}, the array asks for ${f.array.termination}`;
      findings.push({ rule: 'ring', layer: '', at_um: [0, 0], nets: [name], text });
    }
  }
  return findings;
}

/**
 * Checks a floorplan by itself: counts, the symmetry that its placement claims, units in the ring.
 *
 * @returns the findings in a fixed order, their places from the core's centre; none for a sound floorplan.
 */
export const checkFloorplan = (f: Floorplan): Finding[] => inOrder([...counts(f), ...symmetry(f), ...ring(f)]);

/** The names of a drawing's cells as a grid, the top row first, with one place for all of an array's rings. */
function drawnGrid(p: Polygons): {
  readonly names: readonly string[][];
  readonly at: readonly (readonly [number, number])[][];
} {
  const { cells } = flatten(p.structures, p.topStructure);
  const rows = new Map<number, { x: number; y: number; name: string }[]>();
  for (const cell of cells) {
    const [x, y] = cell.at;
    rows.set(y, [...(rows.get(y) ?? []), { x, y, name: cell.name ?? '' }]);
  }
  const sorted = [...rows].sort((a, b) => b[0] - a[0]).map(([, row]) => row.sort((a, b) => a.x - b.x));
  return {
    names: sorted.map((row) => row.map((cell) => cell.name)),
    at: sorted.map((row) => row.map((cell) => [cell.x, cell.y] as const)),
  };
}

/**
 * Says whether a drawing is one of this floorplan: its name, its capacitors and, where the drawing says which capacitor each unit is
 * meant to be, its cells and ring units.
 */
export function comparePolygons(p: Polygons, f: Floorplan): Finding[] {
  const findings: Finding[] = [];
  const report = (at_um: [number, number], text: string, nets?: string[]) =>
    findings.push({ rule: 'other-floorplan', layer: '', at_um, ...(nets ? { nets } : {}), text });
  if (f.name !== undefined && f.name !== p.topStructure)
    report([0, 0], `the drawing is of ${p.topStructure}, the floorplan of ${f.name}`);
  const described = (capacitors: Floorplan['capacitors']) =>
    capacitors.map((c) => `${c.name} (${c.role}, weight ${c.weight}, ${c.units} units)`);
  const drawn = described(p.capacitors);
  const planned = described(f.capacitors);
  for (const one of drawn) if (!planned.includes(one)) report([0, 0], `${one} is drawn and not in the floorplan`);
  for (const one of planned) if (!drawn.includes(one)) report([0, 0], `${one} is in the floorplan and not drawn`);

  const grid = drawnGrid(p);
  if (grid.names.length === 0) return inOrder(findings);
  const { rows, columns } = f.core;
  const rings = (grid.names.length - rows) / 2;
  const fits = Number.isInteger(rings) && rings >= 0 && grid.names.every((row) => row.length === columns + 2 * rings);
  if (!fits) {
    report([0, 0], `the drawing has ${grid.names.length} rows of cells, the floorplan's core ${rows} by ${columns}`);
    return inOrder(findings);
  }
  const inRing = new Map((f.ringUnits ?? []).map((unit) => [`${unit.row} ${unit.column}`, unit.capacitor]));
  grid.names.forEach((names, i) =>
    names.forEach((name, j) => {
      const [row, column] = [i - rings, j - rings];
      const wanted = f.cells[row]?.[column] ?? inRing.get(`${row} ${column}`) ?? '-';
      if (wanted === name || (wanted === '-' && name === '=')) return;
      const text = `unit is drawn as ${name}, the floorplan has ${wanted}`;
      report(placeUm(grid.at[i][j][0], grid.at[i][j][1]), text, [name, wanted]);
    }),
  );
  return inOrder(findings);
}
