import { Random } from '../core/random.js';
import { mirroredTriples } from './mirrored-triples.js';

export interface CoreGrid {
  readonly rows: number;
  readonly columns: number;
}

const MAX_ASPECT = 1.7;

/** What each way of sharing an odd x odd core leaves to be dealt: which of the odd counts sits at the centre, how many triples. */
export interface OddDeal {
  readonly atCentre: number;
  readonly triples: number;
}

/**
 * Whether counts that fill an odd x odd core can all have zero sum: even ones as reflected pairs; one odd one with its odd unit at
 * the centre (it must be the one of a single unit, whose sum is its cell); further odd ones two by two, as a triple of zero sum and its
 * mirror image. The total being odd, the odd ones are an odd number.
 *
 * @param counts cells of each net, the fill among them; they add up to rows * columns.
 * @returns what has to be dealt (`atCentre` an index into `counts`), or undefined if two single units want the centre.
 */
export function oddDeal(counts: readonly number[]): OddDeal | undefined {
  const odd: number[] = [];
  counts.forEach((count, net) => {
    if (count % 2 === 1) odd.push(net);
  });
  const single = odd.filter((net) => counts[net] === 1);
  if (single.length > 1 || odd.length % 2 === 0) return undefined;
  const atCentre = single[0] ?? odd.reduce((least, net) => (counts[net] < counts[least] ? net : least));
  return { atCentre, triples: (odd.length - 1) / 2 };
}

/**
 * The cores to try for an array, the one with fewer columns first.
 *
 * An odd x odd core lets every capacitor have its centroid at the centre exactly: among those whose physical aspect is at most
 * `maxAspect`, the one with the least fill whose counts can be dealt so, in both orientations where both keep the aspect. Three units
 * stand in a line. Where capacitors of a single unit compete for the centre no core does it; then an even count of cells along the
 * shorter pitch lets two of them stand half a pitch from it.
 *
 * @param units units of each capacitor that has weight, inside the core.
 * @param unweighted units inside the core without weight (a termination): where they stand matters no more than where fill does.
 * @param pitch pitch_um, x and y.
 */
export function candidateCores(
  units: readonly number[],
  unweighted: number,
  pitch: readonly [x: number, y: number],
  maxAspect = MAX_ASPECT,
): CoreGrid[] {
  const weighted = units.reduce((sum, count) => sum + count, 0);
  const total = weighted + unweighted;
  const dealtExactly = ({ rows, columns }: CoreGrid): boolean => {
    const deal = oddDeal([...units, rows * columns - weighted]);
    return deal !== undefined && mirroredTriples(rows, columns, deal.triples, new Random(0)) !== undefined;
  };
  if (total === 3 && dealtExactly({ rows: 3, columns: 1 })) {
    return [
      { rows: 3, columns: 1 },
      { rows: 1, columns: 3 },
    ];
  }
  const aspectOf = ({ rows, columns }: CoreGrid): number => {
    const ratio = (columns * pitch[0]) / (rows * pitch[1]);
    return Math.max(ratio, 1 / ratio);
  };
  const exact = leastFill(total, aspectOf, maxAspect, [[1, 1]], dealtExactly);
  const parities: Parity[] = pitch[0] === pitch[1] ? [[1, 0], [0, 1]] : pitch[0] < pitch[1] ? [[1, 0]] : [[0, 1]]; // prettier-ignore
  const core = exact ?? leastFill(total, aspectOf, maxAspect, parities, () => true);
  if (!core) throw new RangeError(`no core for ${total} units`);
  const turned = { rows: core.columns, columns: core.rows };
  const both = core.rows !== core.columns && aspectOf(turned) <= maxAspect && (exact || pitch[0] === pitch[1]);
  return (both ? [core, turned] : [core]).sort((a, b) => a.columns - b.columns);
}

/** Rows and columns modulo 2. */
type Parity = readonly [rows: number, columns: number];

/** Least fill, then least aspect, then fewer columns; only where no core keeps the aspect, the least aspect comes first. */
function leastFill(
  total: number,
  aspectOf: (core: CoreGrid) => number,
  maxAspect: number,
  parities: readonly Parity[],
  fits: (core: CoreGrid) => boolean,
): CoreGrid | undefined {
  interface Candidate extends CoreGrid {
    readonly aspect: number;
    readonly over: boolean;
  }
  const before = (a: Candidate, b: Candidate): boolean => {
    if (a.over !== b.over) return !a.over;
    const fill = a.rows * a.columns - b.rows * b.columns;
    const aspect = a.aspect - b.aspect;
    const first = a.over ? aspect || fill : fill || aspect;
    return (first || a.columns - b.columns) < 0;
  };
  let best: Candidate | undefined;
  for (const [rowParity, columnParity] of parities) {
    for (let rows = rowParity || 2; rows <= total + 2; rows += 2) {
      // A wider core of as many rows has more fill: the first of those columns that fits is the one to compare, unless it is too narrow.
      const narrowest = Math.ceil(total / rows);
      const first = narrowest + ((narrowest + columnParity) % 2);
      // Some wider one fits or none does: six more pairs of columns leave any fill that a triple may need.
      for (let columns = first; columns <= first + 12; columns += 2) {
        const aspect = aspectOf({ rows, columns });
        const candidate = { rows, columns, aspect, over: aspect > maxAspect };
        if (best && !before(candidate, best)) continue;
        if (fits(candidate)) best = candidate;
      }
    }
  }
  return best && { rows: best.rows, columns: best.columns };
}
