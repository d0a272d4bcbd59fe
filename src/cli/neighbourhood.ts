import { brief } from '../index.js';
import type { Likeness, Neighbourhood } from '../index.js';

const count = (alike: number, units: number): string => (alike === units ? 'all' : String(alike));

/** How many units see the same, layer by layer, in one line. */
export function neighbourhoodInWords({ reach_um, units, layers }: Neighbourhood): string {
  const said = ({ alike }: Likeness, layer: string) => `${layer} ${count(alike, units)}`;
  const shapes = layers.map((layer) => said(layer.shapes, layer.layer));
  const onTop = layers.flatMap((layer) => (layer.onTop.alike === units ? [] : [said(layer.onTop, layer.layer)]));
  const rest = onTop.length === 0 ? 'all' : `${onTop.join(', ')}, else all`;
  return `of ${units} units alike within ${reach_um} um: ${shapes.join(', ')}; on TOP ${rest}`;
}

/** The same as a table, with the places where most is otherwise. What is on `TOP` is left out where all see the same of it. */
export function neighbourhoodTable({ reach_um, units, layers }: Neighbourhood): readonly string[] {
  if (units === 0) return [];
  const most = (other: Likeness['inside']): string =>
    other === undefined ? '-' : `${brief(other.area_um2)} um2, ${other.capacitor} at ${other.at_um.join(', ')}`;
  const row = (name: string, { alike, kinds, inside, edge }: Likeness): string[] => [
    name,
    count(alike, units),
    String(kinds),
    most(inside),
    most(edge),
  ];
  const rows = [
    ['', 'alike', 'kinds', 'most otherwise inside', "most otherwise on the core's edge"],
    ...layers.flatMap(({ layer, shapes, onTop }) => [
      row(layer, shapes),
      ...(onTop.alike === units ? [] : [row(`${layer} on TOP`, onTop)]),
    ]),
  ];
  const widths = rows[0].map((_, column) => Math.max(...rows.map((cells) => cells[column].length)));
  return [
    `within ${reach_um} um of ${units} units of bits:`,
    ...rows.map((cells) =>
      cells
        .map((cell, column) => cell.padEnd(widths[column]))
        .join('  ')
        .trimEnd(),
    ),
  ];
}
