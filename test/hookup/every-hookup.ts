import type { Placed, Plan, Side } from '../../src/hookup/plan.js';

/** Plain enumeration of all hookups of a small placement, drawn in coordinates of its own. Shares nothing with the router. */

export interface Cost {
  tracks: number;
  trunks: number;
  crossovers: number;
  length: number;
}

const difference = (a: Cost, b: Cost): number =>
  a.tracks - b.tracks || a.trunks - b.trunks || a.crossovers - b.crossovers || a.length - b.length;

/** Row pitch, tab level from the row's middle, track pitch, column's middle to the nearest track. */
export const lengths = { row: 57, level: 9, track: 7, reach: 32 };

interface Stub {
  readonly net: string;
  readonly channel: number;
  readonly fromLeft: boolean;
  /** Upwards from the row below the core. */
  readonly y: number;
}

/** All units and fill dummies with a place, the ones in the ring row below among them. */
function unitsOf({ cells, ringUnits, rings }: Placed) {
  const units = cells.flatMap((row, r) => row.map((net, c) => ({ net, r, c })));
  if (rings > 1) for (const unit of ringUnits) units.push({ net: unit.capacitor, r: unit.row, c: unit.column });
  return units;
}

const stubsOf = (placed: Placed, sideOf: (r: number, c: number) => Side): Stub[] =>
  unitsOf(placed)
    .filter(({ net }) => net !== '-')
    .map(({ net, r, c }) => {
      const right = sideOf(r, c) === 'R';
      const y = (placed.cells.length - r) * lengths.row + (right ? -lengths.level : lengths.level);
      return { net, channel: right ? c + 1 : c, fromLeft: right, y };
    });

const isBit = (placed: Placed, net: string): boolean =>
  placed.capacitors.some(({ name, role }) => name === net && role === 'bit');

function crossoversIn(placed: Placed, stubs: readonly Stub[], order: readonly string[]): number {
  let count = 0;
  for (const stub of stubs) {
    if (!isBit(placed, stub.net)) continue;
    const own = order.indexOf(stub.net);
    order.forEach((net, track) => {
      if (net === stub.net || net === '' || !isBit(placed, net)) return;
      const top = Math.max(...stubs.filter((other) => other.net === net).map(({ y }) => y));
      if ((stub.fromLeft ? track < own : track > own) && top > stub.y) count++;
    });
  }
  return count;
}

/** What a whole hookup comes to; channels of one length, a free track is "". */
function priceOf(placed: Placed, stubs: readonly Stub[], channels: readonly (readonly string[])[]): Cost {
  const tracks = channels[0].length;
  const pitch = 2 * lengths.reach + (tracks - 1) * lengths.track;
  const x = (channel: number, net: string) =>
    channel * pitch - pitch + lengths.reach + channels[channel].indexOf(net) * lengths.track;
  const used = channels.flatMap((list, channel) => list.filter((net) => net !== '').map((net) => ({ net, channel })));
  let length = 0;
  let crossovers = 0;
  for (const stub of stubs) {
    if (!isBit(placed, stub.net)) continue;
    const column = stub.fromLeft ? stub.channel - 1 : stub.channel;
    length += Math.abs(x(stub.channel, stub.net) - column * pitch);
  }
  channels.forEach(
    (order, channel) =>
      (crossovers += crossoversIn(
        placed,
        stubs.filter((stub) => stub.channel === channel),
        order,
      )),
  );
  for (const { net, channel } of used)
    if (isBit(placed, net))
      length += Math.max(...stubs.filter((stub) => stub.net === net && stub.channel === channel).map(({ y }) => y));
  for (const net of new Set(used.map((each) => each.net))) {
    if (!isBit(placed, net)) continue;
    const at = used.filter((each) => each.net === net).map(({ channel }) => x(channel, net));
    length += Math.max(...at) - Math.min(...at);
  }
  return { tracks, trunks: used.length, crossovers, length };
}

/** A plan's own cost, read from its picture. */
export const costOf = (placed: Placed, { sides, channels }: Plan): Cost =>
  priceOf(
    placed,
    stubsOf(placed, (r, c) =>
      r < sides.length ? sides[r][c] : channels[c].includes(placed.ringUnits[0].capacitor) ? 'L' : 'R',
    ),
    channels.map((list) => list.map((net) => (net === 'VSS' ? '' : net))),
  );

/** Ways to put nets on tracks. */
function* ordersOf(nets: readonly string[], tracks: number): Generator<string[]> {
  if (tracks === 0) {
    if (nets.length === 0) yield [];
    return;
  }
  for (const [i, net] of nets.entries())
    for (const rest of ordersOf(nets.toSpliced(i, 1), tracks - 1)) yield [net, ...rest];
  if (nets.length < tracks) for (const rest of ordersOf(nets, tracks - 1)) yield ['', ...rest];
}

/** Whether every fill dummy finds a track beside it that is free at its stub: it carries nothing, or begins lower. */
function fillServed(
  placed: Placed,
  stubs: readonly Stub[],
  nets: readonly ReadonlySet<string>[],
  tracks: number,
): boolean {
  const top = (channel: number, net: string) =>
    Math.max(...stubs.filter((stub) => stub.channel === channel && stub.net === net).map(({ y }) => y));
  return unitsOf(placed)
    .filter(({ net }) => net === '-')
    .every(({ r, c }) =>
      [c, c + 1].some((channel) => {
        const y = (placed.cells.length - r) * lengths.row + (channel === c ? lengths.level : -lengths.level);
        return nets[channel].size < tracks || [...nets[channel]].some((net) => top(channel, net) < y);
      }),
    );
}

/** The best of all hookups: on the fewest tracks, or on as many as given (null where there is none). */
export function bestOfAll(placed: Placed, given?: number): Cost | null {
  const columns = placed.cells[0].length;
  const units = unitsOf(placed).filter(({ net }) => net !== '-');
  const key = ({ r, c }: { r: number; c: number }) => r * columns + c;
  const choices = Array.from({ length: 1 << units.length }, (_, code) => {
    const sideOf = new Map(units.map((unit, i) => [key(unit), (code >> i) & 1 ? ('R' as const) : ('L' as const)]));
    const stubs = stubsOf(placed, (r, c) => sideOf.get(key({ r, c }))!);
    const nets = Array.from(
      { length: columns + 1 },
      (_, j) => new Set(stubs.filter(({ channel }) => channel === j).map(({ net }) => net)),
    );
    return {
      stubs,
      nets,
      tracks: Math.max(1, ...nets.map(({ size }) => size)),
      trunks: nets.reduce((sum, { size }) => sum + size, 0),
    };
  });
  const mostTracks = given ?? Math.max(...choices.map(({ tracks }) => tracks)) + 1;
  for (let tracks = given ?? 1; tracks <= mostTracks; tracks++) {
    const fit = choices.filter((each) => each.tracks <= tracks).sort((a, b) => a.trunks - b.trunks);
    const first = fit.find(({ stubs, nets }) => fillServed(placed, stubs, nets, tracks));
    if (first === undefined) continue;
    let best: Cost = { tracks, trunks: first.trunks, crossovers: Infinity, length: Infinity };
    for (const { stubs, nets, trunks } of fit) {
      if (trunks !== first.trunks || !fillServed(placed, stubs, nets, tracks)) continue;
      // Crossovers of one channel do not depend on another's order; lengths do, by the buses.
      const leastCrossed = nets.map((set, channel) => {
        const here = stubs.filter((stub) => stub.channel === channel);
        const priced = [...ordersOf([...set], tracks)].map((order) => ({
          order,
          count: crossoversIn(placed, here, order),
        }));
        const least = Math.min(...priced.map(({ count }) => count));
        return { least, orders: priced.filter(({ count }) => count === least).map(({ order }) => order) };
      });
      if (leastCrossed.reduce((sum, { least }) => sum + least, 0) > best.crossovers) continue;
      const together = (chosen: string[][]): void => {
        if (chosen.length < nets.length)
          for (const order of leastCrossed[chosen.length].orders) together([...chosen, order]);
        else {
          const cost = priceOf(placed, stubs, chosen);
          if (difference(cost, best) < 0) best = cost;
        }
      };
      together([]);
    }
    return best;
  }
  return null;
}
