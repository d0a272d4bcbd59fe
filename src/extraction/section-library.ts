import type { Level } from './conductors.js';
import { type Conductor, type Dielectric, SectionGrid } from './field.js';

/** One stretch of a level that a conductor fills in a section; places are counted along the library's lines. */
export interface Stretch {
  readonly level: number;
  readonly first: number;
  /** One past the last place. */
  readonly end: number;
}

/** A section as solved. Part 0 and electrode 0 are the substrate, part i + 1 is stretch i; stretches that touch are one electrode. */
export interface Solved {
  readonly electrodes: number;
  readonly electrodeOf: readonly number[];
  /** aF/um from each part to each electrode: [part * electrodes + electrode]. */
  readonly capacitance: Float64Array;
}

export interface Stack {
  readonly levels: readonly Level[];
  readonly permittivity: number;
  /** What lies below every stretch of a level, down to the next level. */
  readonly below?: { readonly level: number; readonly permittivity: number };
  /** Above it the field does not go, nm. */
  readonly height: number;
  readonly least: number;
  readonly split: number;
}

/** Sections of windows of one width that are drawn, each solved once: equal geometry is the same section, whatever its nets. */
export class SectionLibrary {
  readonly #stack: Stack;
  readonly #lines: readonly number[];
  readonly #grid: SectionGrid;
  readonly #solved = new Map<string, Solved>();

  /** @param lines where stretches may begin and end, nm from the window's left side: from 0 to its width. */
  constructor(stack: Stack, lines: readonly number[]) {
    const { levels, height, least, split } = stack;
    const z = levels.flatMap(({ z0, z1 }) => [z0, z1]);
    this.#stack = stack;
    this.#lines = lines;
    this.#grid = new SectionGrid({
      width: lines[lines.length - 1],
      height,
      sides: 'reflecting',
      x: lines,
      z,
      least,
      split,
    });
  }

  /** Number of sections solved so far. */
  get size(): number {
    return this.#solved.size;
  }

  /** @param stretches from the lowest level up, on each from left to right. */
  section(stretches: readonly Stretch[]): Solved {
    const key = stretches.map(({ level, first, end }) => `${level} ${first} ${end}`).join(',');
    let solved = this.#solved.get(key);
    if (solved === undefined) {
      solved = this.#solve(stretches);
      this.#solved.set(key, solved);
    }
    return solved;
  }

  #solve(stretches: readonly Stretch[]): Solved {
    const { levels, permittivity, below } = this.#stack;
    const conductors: Conductor[] = [];
    const inserts: Dielectric[] = [];
    const electrodeOf = [0];
    let electrodes = 1;
    stretches.forEach(({ level, first, end }, i) => {
      const before = stretches[i - 1] as Stretch | undefined;
      const joined = before?.level === level && before.end === first;
      const electrode = joined ? electrodeOf[i] : electrodes++;
      electrodeOf.push(electrode);
      const { z0, z1 } = levels[level];
      const [x0, x1] = [this.#lines[first], this.#lines[end]];
      conductors.push({ x0, x1, z0, z1, electrode, part: i + 1 });
      if (level === below?.level) {
        const floor = levels[level - 1].z1;
        inserts.push({ x0, x1, z0: floor, z1: z0, permittivity: below.permittivity });
      }
    });
    const parts = electrodeOf.length;
    const capacitance = this.#grid.capacitance({ permittivity, inserts, conductors, electrodes, parts });
    return { electrodes, capacitance, electrodeOf };
  }
}
