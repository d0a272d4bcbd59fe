import { Random } from '../../src/core/random.js';
import type { Placed } from '../../src/hookup/plan.js';
import type { Capacitor } from '../../src/spec/floorplan.js';

const named = (cells: readonly (readonly string[])[]): Capacitor[] =>
  [...new Set(cells.flat())]
    .filter((name) => name !== '-')
    .sort()
    .map((name) => {
      const units = cells.flat().filter((cell) => cell === name).length;
      return { name, role: name === 'TERM' ? 'termination' : 'bit', weight: units, units };
    });

export const placed = (cells: readonly (readonly string[])[]): Placed => ({
  cells,
  capacitors: named(cells),
  ringUnits: [],
  rings: 1,
});

interface Sizes {
  readonly rows: number;
  readonly columns: number;
  readonly nets: number;
  readonly units: number;
}

/** A random placement within the sizes, with a fill dummy here and there; at times with a termination, in the core or in the inner ring of two. */
export function smallPlacement(seed: number, most: Sizes): Placed {
  const random = new Random(seed, 0);
  const upTo = (count: number) => 1 + random.below(count);
  for (;;) {
    const [rows, columns, nets] = [upTo(most.rows), upTo(most.columns), upTo(most.nets)];
    const termination = random.below(6);
    if (rows * columns + (termination === 0 ? 1 : 0) > most.units) continue;
    const cells = Array.from({ length: rows }, () =>
      Array.from({ length: columns }, () => (random.below(9) === 0 ? '-' : `B${random.below(nets)}`)),
    );
    if (termination === 1) cells[random.below(rows)][random.below(columns)] = 'TERM';
    const bare = placed(cells);
    if (!bare.capacitors.some(({ role }) => role === 'bit')) continue;
    if (termination !== 0) return bare;
    const term: Capacitor = { name: 'TERM', role: 'termination', weight: 1, units: 1 };
    const ringUnits = [{ capacitor: 'TERM', row: rows, column: random.below(columns) }];
    return { ...bare, capacitors: [...bare.capacitors, term], ringUnits, rings: 2 };
  }
}
