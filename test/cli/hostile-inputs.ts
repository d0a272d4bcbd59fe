import { template } from '../spec/kiln4.js';

/** Random numbers of a generator that has nothing to do with the program's own (mulberry32, from memory). */
export class Dice {
  #state: number;

  constructor(seed: number, run: number) {
    this.#state = (Math.imul(seed, 0x9e3779b1) ^ Math.imul(run + 1, 0x85ebca6b)) >>> 0;
  }

  next(): number {
    this.#state = (this.#state + 0x6d2b79f5) >>> 0;
    let t = this.#state;
    t = Math.imul(t ^ (t >>> 15), t | 1);
    t ^= t + Math.imul(t ^ (t >>> 7), t | 61);
    return ((t ^ (t >>> 14)) >>> 0) / 2 ** 32;
  }

  /** 0 to count - 1. */
  below(count: number): number {
    return Math.floor(this.next() * count);
  }

  of<T>(list: readonly T[]): T {
    return list[this.below(list.length)];
  }
}

/** What a stranger may write where a name, a text or a path is wanted. */
const wicked = [
  '',
  ' ',
  '..',
  '../../etc/passwd',
  '/etc/passwd',
  'C:\\x',
  'a/b',
  'a\\b',
  '.',
  '-',
  '=',
  '--out',
  'null',
  'NaN',
  '__proto__',
  'constructor',
  'toString',
  'hasOwnProperty',
  '"quoted"',
  "'; drop",
  '<script>alert(1)</script>',
  ']]>&amp;<!--',
  '${x}`y`$(z)',
  'a\nb',
  'x\n.include /etc/passwd\n+',
  'x\r\nEND LIBRARY',
  '\u001b[2J\u001b]0;title\u0007',
  '\u009b31m',
  '\u202eevil\u2066',
  'zero\u200bwidth\ufeff',
  '\u2028\u2029',
  '\u0000',
  '\ud800',
  'B0',
  'b0',
  'TOP',
  'VSS',
  'TERM',
  'B٣',
  'Å𝒳é',
  '%s%n%x',
  '#',
  '*',
  '$',
  'x'.repeat(10_000),
  'ab'.repeat(300),
  '\u0301'.repeat(2_000),
];

const extremes = [
  0,
  -0,
  1,
  -1,
  2,
  0.5,
  1e-9,
  1e-300,
  5e-324,
  0.1234567,
  255,
  256,
  32767,
  32768,
  65536,
  2 ** 25,
  2 ** 31,
  2 ** 32,
  2 ** 53,
  1e12,
  1e21,
  1e308,
  -1e308,
  -(2 ** 31),
];

const deep = (levels: number): unknown => {
  let value: unknown = 0;
  for (let level = 0; level < levels; level++) value = level % 2 === 0 ? [value] : { a: value };
  return value;
};

const others = (dice: Dice): unknown =>
  dice.of<() => unknown>([
    () => null,
    () => true,
    () => false,
    () => [],
    () => ({}),
    () => [[]],
    () => [null],
    () => dice.of(wicked),
    () => dice.of(extremes),
    () => deep(dice.of([3, 30, 63, 64, 65, 400])),
    () => Array.from({ length: dice.of([3, 40, 2000]) }, () => dice.of(extremes)),
    () => Array.from({ length: dice.of([3, 40]) }, () => dice.of(wicked)),
    () => ({ [dice.of(wicked)]: dice.of(wicked) }),
  ])();

type Tree = Record<string | number, unknown>;
interface Place {
  readonly parent: Tree;
  readonly key: string | number;
}

function placesIn(value: unknown, into: Place[] = []): Place[] {
  if (typeof value !== 'object' || value === null) return into;
  const keys = Array.isArray(value) ? value.map((_, i) => i) : Object.keys(value);
  for (const key of keys) {
    into.push({ parent: value as Tree, key });
    placesIn((value as Tree)[key], into);
  }
  return into;
}

function turned(value: number, dice: Dice): number {
  const factor = dice.of([-1, 2, 0.5, 10, 0.1, 1000, 0.001, 1.01, 1e6]);
  return dice.next() < 0.3 ? value + dice.of([1, -1, 0.001, -0.001, 0.0001]) : Number((value * factor).toPrecision(6));
}

/** One change to the structure of a file. */
function bend(root: unknown, dice: Dice): void {
  const places = placesIn(root);
  if (places.length === 0) return;
  const { parent, key } = dice.of(places);
  const value = parent[key];
  const list = Array.isArray(parent) ? parent : undefined;
  dice.of<() => void>([
    () => {
      parent[key] = others(dice);
    },
    // Kinds that change as little as possible reach furthest.
    () => {
      if (typeof value === 'number') parent[key] = turned(value, dice);
      else if (typeof value === 'string') parent[key] = dice.of([value + value, value.slice(1), value.toUpperCase()]);
      else if (typeof value === 'boolean') parent[key] = !value;
    },
    () => {
      // A value of the same type from elsewhere in the file: swapped names, other layers, other numbers.
      const alike = places.filter((p) => typeof p.parent[p.key] === typeof value);
      const other = dice.of(alike);
      const there = other.parent[other.key];
      if (dice.next() < 0.5 && typeof value !== 'object') other.parent[other.key] = value;
      parent[key] = typeof there === 'object' ? structuredClone(there) : there;
    },
    () => {
      if (list !== undefined) list.splice(Number(key), 1);
      else delete parent[key];
    },
    () => {
      if (list !== undefined) list.splice(Number(key), 0, structuredClone(value));
      else parent[dice.of(wicked)] = value;
    },
    () => {
      if (list !== undefined) list.reverse();
      else {
        delete parent[key];
        parent[`${key}${dice.of(['s', '_', ' ', '\u200b'])}`] = value;
      }
    },
  ])();
}

/** One change that may well be legal: what reaches the rooms behind the parsers. */
function nudge(root: unknown, dice: Dice): void {
  const places = placesIn(root).filter(({ parent, key }) => typeof parent[key] !== 'object');
  if (places.length === 0) return;
  const { parent, key } = dice.of(places);
  const value = parent[key];
  if (typeof value === 'boolean') parent[key] = !value;
  else if (typeof value === 'number') {
    const changed = [
      value * 2,
      value / 2,
      value + 1,
      value - 1,
      10 * value,
      value / 10,
      value + 0.005,
      value + 0.1,
      0,
      -value,
    ];
    parent[key] = Number(dice.of(changed).toFixed(3));
  } else {
    // The name of another thing of the same sort.
    const alike = places.filter((p) => p.key === key && typeof p.parent[p.key] === 'string');
    const other = dice.of(Array.isArray(parent) ? places.filter((p) => p.parent === parent) : alike);
    parent[key] = other.parent[other.key];
    if (dice.next() < 0.7) other.parent[other.key] = value;
  }
}

/** Rules and sizes of a technology stretched, on its grid: what reaches the drawing. */
function stretch(root: unknown, dice: Dice): void {
  const technology = ((root as Tree).technology ?? root) as Tree;
  const { layers, vias, unit, grid_nm } = technology;
  const step = (2 * Number(grid_nm)) / 1000 || 0.01;
  const lengths = placesIn({ layers, vias, unit }).filter(
    ({ parent, key }) => typeof parent[key] === 'number' && !['layer', 'datatype'].includes(String(key)),
  );
  if (lengths.length === 0) return;
  const { parent, key } = dice.of(lengths);
  if (dice.next() < 0.1) delete parent[key];
  else {
    const length = Number(parent[key]) * dice.of([0.25, 0.5, 0.8, 1.2, 2, 4, 10, 100]);
    parent[key] = Number((Math.round(length / step) * step).toFixed(4));
  }
}

const encoder = new TextEncoder();

/** Changes to a file's bytes, whatever they mean. */
function scratch(bytes: Uint8Array, dice: Dice): Uint8Array {
  const at = dice.below(bytes.length + 1);
  const rest = (from: number, ...between: Uint8Array[]) => {
    const pieces = [bytes.subarray(0, at), ...between, bytes.subarray(from)];
    const all = new Uint8Array(pieces.reduce((sum, { length }) => sum + length, 0));
    let end = 0;
    for (const piece of pieces) {
      all.set(piece, end);
      end += piece.length;
    }
    return all;
  };
  return dice.of<() => Uint8Array>([
    () => {
      const copy = bytes.slice();
      for (let flips = 1 + dice.below(4); flips > 0; flips--) copy[dice.below(copy.length)] ^= 1 << dice.below(8);
      return copy;
    },
    () => bytes.subarray(0, at),
    () => rest(Math.min(bytes.length, at + 1 + dice.below(40))),
    () => rest(at, encoder.encode(dice.of(wicked))),
    () =>
      rest(
        at,
        encoder.encode(dice.of(['"', '{', '}', '[', ']', ',', ':', '\\', '\\u', '1e999', '-', '/**/', '\ufeff'])),
      ),
    () => rest(at, bytes.subarray(Math.max(0, at - dice.below(200)), at)),
    () => rest(at, Uint8Array.from([dice.below(256), dice.below(256)])),
  ])();
}

/** A file that is sound, changed in one to four ways. */
export function damaged(text: string, dice: Dice): Uint8Array {
  let bytes: Uint8Array;
  let root: unknown;
  try {
    root = JSON.parse(text);
  } catch {
    root = undefined;
  }
  if (root === undefined || dice.next() < 0.2) bytes = encoder.encode(text);
  else {
    const change = dice.of([bend, bend, nudge, nudge, stretch, stretch]);
    for (let changes = 1 + dice.below(3); changes > 0; changes--) change(root, dice);
    bytes = encoder.encode(JSON.stringify(root, null, dice.next() < 0.5 ? 1 : undefined) ?? '');
    if (dice.next() < 0.9) return bytes;
  }
  return scratch(bytes, dice);
}

/** Sound files to begin with, by the name that the command lines use. */
export const sound: Readonly<Record<string, string>> = {
  'a.json': '{"format": "steelyard/array", "version": 1, "bits": 3, "effort": "quick"}',
  'b.json': JSON.stringify({
    $schema: 'x',
    format: 'steelyard/array',
    version: 1,
    name: 'odd',
    weights: [1, 2, 3, 1],
    technology: 't.json',
    hookup: 'channel',
    core: { rows: 3, columns: 3 },
    tracksPerChannel: 3,
    rings: 1,
    termination: 'core',
    fillTop: 'VSS',
    emphasis: 'wiring',
    effort: 'quick',
    seed: 7,
    balance: 'off',
    gradient: { linear_ppm_per_um: 10, quadratic_ppm_per_um2: { xx: 1, xy: 0, yy: -1 }, direction_deg: 30 },
    mismatch: { localSigma_percent: 0.4, correlatedSigma_percent: 0.1, correlationLength_um: 90 },
    pair: 'none',
  }),
  't.json': template('parallel-plate'),
  'f.json': template('framed-fingers'),
  'n.json': template('named-cell'),
  'layers.json': JSON.stringify({
    format: 'steelyard/layers',
    version: 1,
    layers: [{ name: 'lower-metal', stream: { layer: 30, datatype: 1 } }],
  }),
  'pins.json': JSON.stringify({
    format: 'steelyard/pins',
    version: 1,
    pins: [
      { pin: 'B0', name: 'cap<0>' },
      { pin: 'TOP', name: 'vx' },
    ],
  }),
  'map.csv': 'x_um,y_um,ppm\n-20,-20,0\n20,-20,5\n-20,20,3\n20,20,9\n0,0,1\n-20,0,2\n20,0,3\n0,20,1\n0,-20,2\n',
};

/** Command lines that are sound, as words; `*` files are the ones to damage. Files drawn beforehand: d (floorplan), p (its polygons), h (by hand). */
export const commandLines: readonly (readonly string[])[] = [
  ['place', '*a.json', '--out', 'o'],
  ['place', '*b.json', '--out', 'o'],
  ['place', 'b.json', '--floorplan-only', '--out', 'o'],
  ['place', '*a.json', '--technology', 'f.json', '--floorplan-only', '--pitch', '3,4', '--out', 'o'],
  ['place', '--bits', '3', '--effort', 'quick', '--technology', '*t.json', '--out', 'o'],
  ['place', '--bits', '2', '--effort', 'quick', '--technology', '*f.json', '--out', 'o'],
  ['place', '--bits', '2', '--effort', 'quick', '--technology', '*n.json', '--out', 'o'],
  ['place', '*d.json', '--out', 'o', '--json'],
  ['place', '*h.json', '--technology', '*t.json', '--floorplan-only', '--out', 'o'],
  [
    'place',
    '--bits',
    '2',
    '--core',
    '3x2',
    '--seed',
    '5',
    '--rings',
    '1',
    '--emphasis',
    'gradient',
    '--effort',
    'quick',
  ],
  ['check', '*d.json'],
  ['check', '*d.json', '*p.json', '--json'],
  ['check', '*p.json'],
  ['check', 'p.json'],
  ['export', '*d.json', '--to', 'gds,polygons,svg,spice,lef', '--out', 'o'],
  [
    'export',
    'd.json',
    '--to',
    'gds,polygons',
    '--layers',
    '*layers.json',
    '--flat',
    '--date',
    '2024-02-29',
    '--out',
    'o',
  ],
  ['export', 'd.json', '--to', 'spice,lef,svg', '--pins', '*pins.json', '--devices', 'merged', '--out', 'o'],
  ['export', '*h.json', '--to', 'svg,spice', '--dummies', 'omit', '--out', 'o'],
  ['compare', '*d.json', '*h.json'],
  ['compare', 'd.json', 'h.json', '--gradient', '*map.csv', '--correlation-length', '50', '--csv'],
  ['compare', '*d.json', '--pitch', 'own', '--json'],
  ['pattern', 'chessboard', '--bits', '4', '--pitch', '2,3', '--out', 'o/x.json'],
  ['schema', 'array'],
  ['technology', 'parallel-plate'],
  ['technology', '--help'],
  ['--version'],
];

/** A command line with one to three words changed. */
export function garbled(words: readonly string[], dice: Dice): string[] {
  const line = [...words];
  for (let changes = 1 + dice.below(3); changes > 0; changes--) {
    const at = dice.below(line.length + 1);
    dice.of<() => void>([
      () => line.splice(at, 1),
      () => line.splice(at, 0, line[at] ?? ''),
      () => line.splice(at, 0, dice.of(wicked)),
      () => line.splice(at, 1, dice.of(wicked)),
      () => line.splice(at, 1, String(dice.of(extremes))),
      () =>
        line.splice(
          at,
          0,
          dice.of([
            '--',
            '-',
            '--json',
            '--debug',
            '--help',
            '--flat',
            '--no-such',
            '-x',
            '--out=',
            '--bits=3',
            '--core=9x9',
            '--seed=1e9',
          ]),
        ),
      () => line.splice(at, 0, ...line.splice(dice.below(line.length), 1)),
    ])();
  }
  return line;
}
