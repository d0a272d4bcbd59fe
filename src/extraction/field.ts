import { Envelope } from './envelope.js';
import { gradedLines } from './grid.js';

/** Vacuum permittivity, aF/um. */
export const EPSILON0 = 8.8541878128;

/** A rectangle of a cross-section, in nanometres: x along the surface, z above the substrate. */
export interface Bar {
  readonly x0: number;
  readonly x1: number;
  readonly z0: number;
  readonly z1: number;
}

/** Bars of one electrode have one potential. Those of different electrodes do not touch. */
export interface Conductor extends Bar {
  readonly electrode: number;
  /** What the charge on this bar is counted for; parts of one electrode may touch. */
  readonly part: number;
}

export interface Dielectric extends Bar {
  readonly permittivity: number;
}

/** A cross-section of wires that run straight through it, in a window that has the grid's lines through all their edges. */
export interface Section {
  /** Relative permittivity of all that is not a conductor, but for the inserts. */
  readonly permittivity: number;
  readonly inserts: readonly Dielectric[];
  readonly conductors: readonly Conductor[];
  /** Numbers of electrodes and parts; number 0 of either is the substrate. */
  readonly electrodes: number;
  readonly parts: number;
}

export interface Window {
  readonly width: number;
  /** Above it the field does not go. */
  readonly height: number;
  /** What lies beyond x = 0 and x = width: the window's mirror image, or the window again. */
  readonly sides: 'reflecting' | 'periodic';
  /** Where conductors and inserts may have edges. */
  readonly x: readonly number[];
  readonly z: readonly number[];
  /** Width of the cells beside an edge, before they are split, nm. */
  readonly least: number;
  /** Into how many parts each cell is split along x and z. */
  readonly split: number;
}

const FREE = -1;

interface System {
  readonly matrix: Envelope;
  /** Free crossings. */
  readonly count: number;
  /** Threes: a free crossing, the part beside it, and the conductance between. */
  readonly ends: readonly number[];
  /** Threes: two parts of different electrodes side by side, and the conductance between. */
  readonly direct: readonly number[];
}

/**
 * Capacitances of cross-sections on one grid, so that what two sections have in common has the same error in both.
 *
 * Finite volumes about the crossings of a rectangular grid: between two neighbouring crossings lies the conductance of the strip halfway to
 * the lines beside them, so what leaves one volume enters the next and charges add up to 0 but for rounding. The potentials are solved for
 * directly (`Envelope`), crossings numbered upwards and then from left to right: the envelope is as wide as the grid is high.
 */
export class SectionGrid {
  readonly #x: Float64Array;
  readonly #z: Float64Array;
  readonly #columns: number;
  readonly #rows: number;

  constructor({ width, height, sides, x, z, least, split }: Window) {
    this.#x = gradedLines(within(x, width), least, false, split);
    this.#z = gradedLines(within(z, height), least, true, split);
    // The last line of a periodic window is the first one again.
    this.#columns = sides === 'periodic' ? this.#x.length - 1 : this.#x.length;
    this.#rows = this.#z.length;
  }

  /**
   * What each part has to each electrode, aF/um of length: entry [part * electrodes + electrode]; 0 to its own electrode.
   */
  capacitance(section: Section): Float64Array {
    const { electrodes, parts } = section;
    const part = new Int16Array(this.#columns * this.#rows).fill(FREE);
    for (let c = 0; c < this.#columns; c++) part[c * this.#rows] = 0;
    const electrodeOf = new Int16Array(parts);
    for (const bar of section.conductors) {
      electrodeOf[bar.part] = bar.electrode;
      const [c0, c1, r0, r1] = this.#extent(bar);
      for (let c = c0; c <= c1; c++) {
        const bottom = (c % this.#columns) * this.#rows;
        part.fill(bar.part, bottom + r0, bottom + r1 + 1);
      }
    }
    const { matrix, count, ends, direct } = this.#system(section, part, electrodeOf);
    matrix.factor();

    // charge[part * electrodes + e]: with electrode e at 1 V and all others at 0.
    const charge = new Float64Array(parts * electrodes);
    const potential = new Float64Array(count);
    for (let e = 1; e < electrodes; e++) {
      const of = (p: number) => (electrodeOf[p] === e ? 1 : 0);
      potential.fill(0);
      for (let k = 0; k < ends.length; k += 3) potential[ends[k]] += ends[k + 2] * of(ends[k + 1]);
      matrix.solve(potential);
      for (let k = 0; k < ends.length; k += 3) {
        const p = ends[k + 1];
        charge[p * electrodes + e] += ends[k + 2] * (of(p) - potential[ends[k]]);
      }
      for (let k = 0; k < direct.length; k += 3) {
        const [p, q] = [direct[k], direct[k + 1]];
        const flow = direct[k + 2] * (of(p) - of(q));
        charge[p * electrodes + e] += flow;
        charge[q * electrodes + e] -= flow;
      }
    }
    // With all electrodes at 1 V there is no charge anywhere, which gives what each part has to the substrate.
    const result = new Float64Array(parts * electrodes);
    for (let p = 0; p < parts; p++)
      for (let e = 1; e < electrodes; e++) {
        const q = EPSILON0 * charge[p * electrodes + e];
        result[p * electrodes] += p === 0 ? 0 : q;
        if (electrodeOf[p] !== e) result[p * electrodes + e] = -q;
      }
    return result;
  }

  /** The equations of the free crossings, and where field ends on conductors. */
  #system(section: Section, part: Int16Array, electrodeOf: Int16Array): System {
    const { right, up } = this.#conductances(section);
    const [rows, nodes] = [this.#rows, part.length];
    const unknown = new Int32Array(nodes);
    let count = 0;
    for (let node = 0; node < nodes; node++) unknown[node] = part[node] === FREE ? count++ : -1;
    // From each crossing to those before it: left, below, and from the last column of a periodic window to the first.
    const around = nodes - rows;
    const first = new Int32Array(count);
    for (let node = 0; node < nodes; node++) {
      const i = unknown[node];
      if (i < 0) continue;
      first[i] = i;
      if (node % rows > 0 && unknown[node - 1] >= 0) first[i] = unknown[node - 1];
      if (node >= rows && unknown[node - rows] >= 0) first[i] = unknown[node - rows];
      if (node >= around && right[node] > 0 && unknown[node - around] >= 0) first[i] = unknown[node - around];
    }
    const matrix = new Envelope(first);
    const ends: number[] = [];
    const direct: number[] = [];
    const link = (a: number, b: number, conductance: number): void => {
      const [i, j] = [unknown[a], unknown[b]];
      if (i >= 0) matrix.add(i, i, conductance);
      if (j >= 0) matrix.add(j, j, conductance);
      if (i >= 0 && j >= 0) matrix.add(Math.max(i, j), Math.min(i, j), -conductance);
      else if (i >= 0) ends.push(i, part[b], conductance);
      else if (j >= 0) ends.push(j, part[a], conductance);
      else if (electrodeOf[part[a]] !== electrodeOf[part[b]]) direct.push(part[a], part[b], conductance);
    };
    for (let node = 0; node < nodes; node++) {
      if (up[node] > 0) link(node, node + 1, up[node]);
      if (right[node] > 0) link(node, node < around ? node + rows : node - around, right[node]);
    }
    return { matrix, count, ends, direct };
  }

  /** Conductances (relative permittivities) from each crossing to the next one to its right and upwards. */
  #conductances({ permittivity, inserts }: Section): { readonly right: Float64Array; readonly up: Float64Array } {
    const [x, z, columns, rows] = [this.#x, this.#z, this.#columns, this.#rows];
    const right = new Float64Array(columns * rows);
    const up = new Float64Array(columns * rows);
    const column = new Float64Array(rows - 1);
    for (let c = 0; c + 1 < x.length; c++) {
      column.fill(permittivity);
      for (const insert of inserts) {
        const [c0, c1, r0, r1] = this.#extent(insert);
        if (c0 <= c && c < c1) column.fill(insert.permittivity, r0, r1);
      }
      const width = x[c + 1] - x[c];
      const [left, beside] = [c * rows, ((c + 1) % columns) * rows];
      for (let r = 0; r + 1 < rows; r++) {
        const height = z[r + 1] - z[r];
        const across = (column[r] * height) / (2 * width);
        const upwards = (column[r] * width) / (2 * height);
        right[left + r] += across;
        right[left + r + 1] += across;
        up[left + r] += upwards;
        up[beside + r] += upwards;
      }
    }
    return { right, up };
  }

  #extent({ x0, x1, z0, z1 }: Bar): [c0: number, c1: number, r0: number, r1: number] {
    return [lineAt(this.#x, x0), lineAt(this.#x, x1), lineAt(this.#z, z0), lineAt(this.#z, z1)];
  }
}

/** 0, `most` and what lies between them, ascending, each once. */
const within = (edges: readonly number[], most: number): number[] =>
  [...new Set([0, ...edges, most])].filter((edge) => edge >= 0 && edge <= most).sort((a, b) => a - b);

/** The number of the line at `value`. */
function lineAt(lines: Float64Array, value: number): number {
  let low = 0;
  let high = lines.length - 1;
  while (low < high) {
    const middle = (low + high) >> 1;
    if (lines[middle] < value) low = middle + 1;
    else high = middle;
  }
  if (lines[low] !== value) throw new RangeError(`no grid line at ${value} nm`);
  return low;
}
