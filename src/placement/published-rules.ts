import { Infeasible, InputError } from '../core/problem.js';
import type { Floorplan } from '../spec/floorplan.js';
import { mostCells } from '../spec/options.js';
import { meant, quoted } from '../spec/words.js';
import { blockChessboard } from './rules/block-chessboard.js';
import { chessboard } from './rules/chessboard.js';
import { interleaved } from './rules/interleaved.js';
import { partitionCentred } from './rules/partition-centred.js';
import { rowByRow } from './rules/row-by-row.js';
import { spiral } from './rules/spiral.js';
import { TERMINATION } from './rules/square.js';

export interface PublishedRule {
  readonly name: string;
  /** One line: what it does, and author and year. */
  readonly help: string;
  /**
   * Rows of capacitor names (`B0` up, `TERM`) from the top, a square of 2^bits cells.
   * @throws Infeasible unless the number of bits is even and at least 4.
   */
  readonly place: (bits: number) => string[][];
}

const rule = (name: string, help: string, place: (bits: number) => number[][]): PublishedRule => ({
  name,
  help,
  place: (bits) => {
    if (bits < 4)
      throw new Infeasible(`The rule ${name} begins with 4 bits; ${bits} were asked for.`, 'Ask for 4 bits or more.');
    if (bits % 2 !== 0)
      throw new Infeasible(
        `The rule ${name} fills a square, which an even number of bits makes; ${bits} were asked for.`,
        `Ask for ${bits - 1} or ${bits + 1} bits.`,
      );
    if (1 << (bits / 2) > Math.sqrt(mostCells))
      throw new Infeasible(
        `The rule ${name} fills a core of 2^${bits} cells; there are ${mostCells} at most.`,
        'Ask for 14 bits or fewer.',
      );
    return place(bits).map((row) => row.map((bit) => (bit === TERMINATION ? 'TERM' : `B${bit}`)));
  },
});

/** Placement rules that the literature knows, to measure other placements against. */
export const publishedRules: readonly PublishedRule[] = [
  rule('row-by-row', 'bit after bit, row by row: what one draws without a rule', rowByRow),
  rule('chessboard', 'every other cell to the largest bit, and so on (after Burcea, Habal, Graeb 2016)', chessboard),
  rule('spiral', 'bit after bit around the centre, in reflected pairs (after Karmokar et al. 2022)', spiral),
  rule('interleaved', 'reflected pairs from the centre out, shared in proportion (several papers)', interleaved),
  rule(
    'partition-centred',
    'a unit in the middle of each of as many rectangles (after Huang et al. 2015)',
    partitionCentred,
  ),
  rule(
    'block-chessboard',
    'small bits interleaved, the two largest in blocks around them (after Karmokar et al. 2023)',
    blockChessboard,
  ),
];

/**
 * A published rule's floorplan: the bare core, the termination in it.
 * @throws InputError at /rule if there is none of that name, Infeasible where the rule cannot place so many bits.
 */
export function placeByRule(name: string, bits: number, pitch_um: readonly [x: number, y: number]): Floorplan {
  const found = publishedRules.find((each) => each.name === name);
  if (found === undefined) {
    const names = publishedRules.map((each) => each.name);
    throw new InputError([{ pointer: '/rule', found: quoted(name), wanted: meant(name, names, 'rule') }]);
  }
  const cells = found.place(bits);
  const units = Array.from({ length: bits }, (_, bit) => 1 << bit);
  return {
    format: 'steelyard/floorplan',
    version: 1,
    name: `${name.replaceAll('-', '_')}_${bits}`,
    core: { rows: cells.length, columns: cells.length, pitch_um },
    capacitors: [
      ...units.map((count, bit) => ({ name: `B${bit}`, role: 'bit' as const, weight: count, units: count })),
      { name: 'TERM', role: 'termination', weight: 1, units: 1 },
    ],
    cells,
    placement: { method: name },
  };
}
