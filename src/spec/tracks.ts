import { nm } from '../core/units.js';
import type { Technology } from './technology.js';

/** Width (nm) of a track: wide enough for all of its metals, for the via between them with its enclosure, and for a unit's tab. */
export function trackWidthOf({ layers, vias, roles, unit, grid_nm }: Technology): number {
  const width = (name: string) => nm(layers.find((layer) => layer.name === name)?.minWidth_um ?? 0);
  const via = vias.find(({ lower, upper }) => lower === roles.trunk && upper === roles.stub);
  const landing = via === undefined ? 0 : nm(via.size_um) + 2 * nm(via.enclosure_um);
  const tab = unit.kind === 'named-cell' ? 0 : nm(unit.tab_um?.[1] ?? 0);
  const least = Math.max(width(roles.trunk), width(roles.bottomPlate), width(roles.bus), landing, tab);
  return Math.ceil(least / (2 * grid_nm)) * 2 * grid_nm;
}

/** How far (nm) two levels of tabs must stand apart: a stub, its spacing on either side, and a shield between them. */
export function tabLevelsApart(technology: Technology): number {
  const metal = technology.layers.find((layer) => layer.name === technology.roles.bottomPlate);
  return trackWidthOf(technology) + 2 * nm(metal?.minSpacing_um ?? 0) + nm(metal?.minWidth_um ?? 0);
}
