import { Infeasible } from '../core/problem.js';
import type { Capacitor } from '../spec/floorplan.js';
import type { PinsWanted } from '../spec/pins.js';
import type { Placed } from './plan.js';
import type { UnderPlateRules } from './under-plate-rules.js';

/** The nets with a trunk below each column, from left to right; "VSS" one for fill dummies. */
export interface UnderPlatePlan {
  readonly columns: readonly (readonly string[])[];
}

/** The topmost row in which each net hooks to a trunk below a column; fill dummies hook to "VSS", units in the ring as any others. */
export function topRows({ cells, ringUnits }: Placed, column: number): Map<string, number> {
  const tops = new Map<string, number>();
  const add = (net: string, row: number) => tops.set(net, Math.min(row, tops.get(net) ?? Infinity));
  cells.forEach((names, row) => add(names[column] === '-' ? 'VSS' : names[column], row));
  for (const unit of ringUnits) if (unit.column === column) add(unit.capacitor, unit.row);
  return tops;
}

/** Which places a number of trunks take, from left to right: those in the middle of the room on either side of the strap come first. */
export function placesFor({ places, trackWidth, strapX }: UnderPlateRules, count: number): number[] {
  const middles = places.map((left) => left + trackWidth / 2 - strapX);
  const room = (side: number) => middles.filter((x) => Math.sign(x) === side);
  const fromMiddle = (x: number) => {
    const own = room(Math.sign(x));
    return Math.abs(x - (own[0] + own[own.length - 1]) / 2);
  };
  const order = [...places.keys()].sort((a, b) => fromMiddle(middles[a]) - fromMiddle(middles[b]) || a - b);
  return order.slice(0, count).sort((a, b) => a - b);
}

/** How many trunks may lie below a column. */
export const mostTrunks = ({ places }: UnderPlateRules, asked?: number): number =>
  Math.min(places.length, asked ?? Infinity);

const remedy = (asked?: number): string =>
  `${asked === undefined ? 'Take a larger unit' : 'Raise tracksPerChannel'}, place with fewer nets in a column ("emphasis": "wiring"), or take a technology with the hookup "channel".`;

const howMany = (most: number, asked?: number): string =>
  `${most} ${asked === undefined ? (most === 1 ? 'fits' : 'fit') : most === 1 ? 'is asked for' : 'are asked for'}`;

/**
 * A net needs as many trunks as the columns that its units fill, at the least.
 * @throws Infeasible where that is more than all columns have, on each of these cores.
 */
export function checkTrunks(
  rules: UnderPlateRules,
  grids: readonly { readonly rows: number; readonly columns: number }[],
  nets: readonly Capacitor[],
  asked?: number,
): void {
  const most = mostTrunks(rules, asked);
  const needed = ({ rows }: { readonly rows: number }) =>
    nets.reduce((sum, { units }) => sum + Math.ceil(units / rows), 0);
  if (grids.some((grid) => needed(grid) <= most * grid.columns)) return;
  const [{ rows, columns }] = grids;
  throw new Infeasible(
    `The nets of ${rows} rows and ${columns} columns need ${needed({ rows })} trunks at least; ${howMany(most, asked)} below a column, ${most * columns} in all.`,
    remedy(asked),
  );
}

/**
 * Plans trunks below the columns: one for each net that has a unit there, in the order of the pins, and one for fill dummies.
 * @param asked the most trunks below one column, where that is limited.
 * @throws Infeasible where a column has more nets than trunks fit, or a unit stands in the ring where no trunk comes.
 */
export function planColumns(
  rules: UnderPlateRules,
  placed: Placed,
  wanted: PinsWanted,
  asked?: number,
): UnderPlatePlan {
  const { cells, ringUnits } = placed;
  const columns = cells[0].length;
  const order = [...wanted.order, 'VSS'];
  if (asked !== undefined && asked > rules.places.length)
    throw new Infeasible(
      `${asked} trunks below one column are asked for; ${rules.places.length} fit below this unit.`,
      'Lower tracksPerChannel or leave it out, or take a larger unit.',
    );
  const lost = ringUnits.find(({ row, column }) => row !== cells.length || column < 0 || column >= columns);
  if (lost !== undefined)
    throw new Infeasible(
      `${lost.capacitor} stands in row ${lost.row}, column ${lost.column} of the ring, where no trunk comes.`,
      'Place it in the ring row next to the core below a column of it.',
    );
  const lists = Array.from({ length: columns }, (_, column) => {
    const tops = topRows(placed, column);
    return order.filter((net) => tops.has(net));
  });
  const most = mostTrunks(rules, asked);
  const worst = lists.reduce((a, b) => (b.length > a.length ? b : a));
  if (worst.length > most) {
    const over = lists.filter((list) => list.length > most).length;
    const where = `column ${lists.indexOf(worst)}${over > 1 ? ` and ${over - 1} other${over > 2 ? 's' : ''}` : ''}`;
    throw new Infeasible(
      `${worst.length} nets (${worst.join(', ')}) need a trunk each below ${where}; ${howMany(most, asked)}.`,
      remedy(asked),
    );
  }
  return { columns: lists };
}

/** Why a plan from a file does not wire these cells, in a few words; undefined where it does. */
export function underPlateMisfit(
  rules: UnderPlateRules,
  placed: Placed,
  { columns, buses }: UnderPlatePlan & { readonly buses: readonly string[] },
): string | undefined {
  const { cells, capacitors } = placed;
  if (columns.length !== cells[0].length) return 'its columns are for another core';
  const known = new Set(capacitors.map(({ name }) => name));
  for (const [column, list] of columns.entries()) {
    if (new Set(list).size !== list.length) return `column ${column} lists a net twice`;
    const tops = topRows(placed, column);
    for (const net of tops.keys()) if (!list.includes(net)) return `column ${column} has no trunk for ${net}`;
    const idle = list.find((net) => !tops.has(net));
    if (idle !== undefined) return `column ${column} has a trunk for ${idle}, which no unit uses`;
    if (list.length > rules.places.length)
      return `column ${column} has ${list.length} trunks, and ${rules.places.length} fit`;
  }
  if (new Set(buses).size !== buses.length) return 'a bus is listed twice';
  const stray = buses.find((net) => net !== 'VSS' && !known.has(net));
  if (stray !== undefined) return `bus ${stray} is of no capacitor`;
  for (const { name } of capacitors) {
    const trunks = columns.filter((list) => list.includes(name)).length;
    if (trunks > 1 && !buses.includes(name)) return `${name} has ${trunks} trunks and no bus`;
  }
  return undefined;
}
