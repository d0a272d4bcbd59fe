import type { ChannelPlan } from '../spec/floorplan.js';
import { channelStubs, nearestVss, needsTrack, type Placed, type Plan } from './plan.js';

/**
 * Why a hookup from a file does not wire these cells, in a few words; undefined where it does. Cells edited by hand, or another number of
 * rows, leave the wires behind.
 */
export function misfit(placed: Placed, given: ChannelPlan): string | undefined {
  const { cells, capacitors, ringUnits } = placed;
  const columns = cells[0].length;
  const { sides, channels, buses } = given;
  if (sides.length !== cells.length || sides.some((row) => row.length !== columns))
    return 'its sides are for another core';
  if (sides.some((row) => row.some((side) => side !== 'L' && side !== 'R'))) return 'a side is neither L nor R';
  if (channels.length !== columns + 1) return 'its channels are for another core';
  const tracks = channels[0].length;
  if (tracks === 0 || channels.some((list) => list.length !== tracks))
    return 'its channels have different numbers of tracks';
  const known = new Set(capacitors.map(({ name }) => name));
  for (const [j, list] of channels.entries()) {
    const nets = list.filter((net) => net !== 'VSS');
    if (new Set(nets).size !== nets.length) return `channel ${j} holds a net twice`;
    const stranger = nets.find((net) => !known.has(net));
    if (stranger !== undefined) return `channel ${j} holds ${stranger}, which is no capacitor`;
  }
  const plan = given as Plan;
  for (const unit of ringUnits)
    if (needsTrack(unit, placed) && ![unit.column, unit.column + 1].some((j) => channels[j]?.includes(unit.capacitor)))
      return `no track beside ${unit.capacitor} in the ring carries it`;
  const stubs = channelStubs(placed, plan);
  for (const [j, entries] of stubs.entries()) {
    for (const net of entries.keys()) if (!channels[j].includes(net)) return `channel ${j} has no track for ${net}`;
    const idle = channels[j].find((net) => net !== 'VSS' && !entries.has(net));
    if (idle !== undefined) return `channel ${j} has a track for ${idle}, which no unit uses`;
  }
  for (const [row, names] of cells.entries())
    for (const [column, name] of names.entries())
      if (name === '-' && nearestVss(plan, stubs, row, column, plan.sides[row][column]) === -1)
        return `the fill dummy in row ${row}, column ${column} finds no VSS on its side`;
  if (new Set(buses).size !== buses.length) return 'a bus is listed twice';
  const stray = buses.find((net) => net !== 'VSS' && !known.has(net));
  if (stray !== undefined) return `bus ${stray} is of no capacitor`;
  for (const { name } of capacitors) {
    const trunks = channels.filter((list) => list.includes(name)).length;
    if (trunks > 1 && !buses.includes(name)) return `${name} has ${trunks} trunks and no bus`;
  }
  return undefined;
}
