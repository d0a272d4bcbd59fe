import { Random } from '../../src/core/random.js';
import { type Placed, planHookup } from '../../src/hookup/plan.js';
import { publishedRules } from '../../src/placement/published-rules.js';
import { costOf, lengths } from '../hookup/every-hookup.js';
import { bestByProgramme, loadSolver } from '../hookup/integer-programme.js';
import { placed, smallPlacement } from '../hookup/small-placements.js';

/** The router against an integer programme on small random placements, and its time on large ones. */
export async function measureRouter({ runs, seed }: { runs: number; seed: number }) {
  const highs = await loadSolver();
  const against = { placements: runs, proved: 0, differ: 0 };
  for (let n = 0; n < runs; n++) {
    const placement = smallPlacement(seed + n, { rows: 6, columns: 6, nets: 5, units: n % 4 === 0 ? 30 : 16 });
    const plan = planHookup(placement, lengths);
    const { tracks, ...cost } = costOf(placement, plan);
    const best = bestByProgramme(highs, placement, tracks);
    const fewer = tracks > 1 ? bestByProgramme(highs, placement, tracks - 1) : null;
    if (plan.proved) against.proved++;
    if (fewer !== null || JSON.stringify(best) !== JSON.stringify(cost)) {
      against.differ++;
      console.log(`placement ${seed + n}: ${JSON.stringify(cost)}, the programme ${JSON.stringify(best)}`);
    }
  }
  const rows: object[] = [];
  for (const bits of [8, 10, 12, 14]) {
    for (const { name, place } of publishedRules) rows.push(timed(`${name}, ${bits} bits`, placed(place(bits))));
    rows.push(timed(`random, ${bits} bits`, scattered(bits, seed)));
  }
  return { against, rows };
}

function timed(what: string, placement: Placed) {
  const start = performance.now();
  const { channels, proved, bound } = planHookup(placement, lengths);
  const ms = Math.round(performance.now() - start);
  const trunks = channels.flat().filter((net) => net !== 'VSS').length;
  return { what, tracks: channels[0].length, trunks, proved, crossoversAtLeast: bound.crossovers, ms };
}

/** All units of a binary array anywhere on the core that they fill. */
function scattered(bits: number, seed: number): Placed {
  const side = 1 << (bits / 2);
  const cells = Array.from({ length: bits }, (_, bit) => new Array<string>(1 << bit).fill(`B${bit}`)).flat();
  const random = new Random(seed, bits);
  for (let i = cells.length - 1; i > 0; i--) {
    const j = random.below(i + 1);
    [cells[i], cells[j]] = [cells[j], cells[i]];
  }
  return placed(Array.from({ length: side - 1 }, (_, row) => cells.slice(row * (side + 1), (row + 1) * (side + 1))));
}
