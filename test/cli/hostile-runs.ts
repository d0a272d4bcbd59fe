import { posix } from 'node:path';
import { MachineInMemory } from './machine-in-memory.js';
import { Dice, commandLines, damaged, garbled, sound } from './hostile-inputs.js';

/** Files to begin with, and those that the tool makes of them. */
export async function soundFiles(): Promise<ReadonlyMap<string, string>> {
  const machine = new MachineInMemory();
  for (const [path, text] of Object.entries(sound)) machine.put(path, text);
  const code = await machine.run('place --bits 3 --effort quick --out made');
  if (code !== 0) throw new Error(machine.err);
  const floorplan = machine.text('made/cdac3.floorplan.json');
  const files = new Map(Object.entries(sound));
  files.set('d.json', floorplan);
  files.set('p.json', machine.text('made/cdac3.polygons.json'));
  // As somebody would write it by hand.
  const { format, version, core, capacitors, cells } = JSON.parse(floorplan) as Record<string, unknown>;
  const kept = (capacitors as { name: string }[]).filter(({ name }) => (cells as string[][]).flat().includes(name));
  files.set('h.json', JSON.stringify({ format, version, core, capacitors: kept, cells }));
  return files;
}

export interface HostileRun {
  readonly argv: readonly string[];
  readonly files: ReadonlyMap<string, Uint8Array>;
}

/** The run of this number: sound words and files, or damaged ones. */
export function hostileRun(files: ReadonlyMap<string, string>, seed: number, run: number): HostileRun {
  const dice = new Dice(seed, run);
  const marked = dice.of(commandLines);
  const damageable = marked.filter((word) => word.startsWith('*'));
  const plain = marked.map((word) => word.replace(/^\*/, ''));
  const encoder = new TextEncoder();
  const given = new Map<string, Uint8Array>([...files].map(([path, text]) => [path, encoder.encode(text)]));
  if (damageable.length === 0 || dice.next() < 0.2) return { argv: garbled(plain, dice), files: given };
  const name = dice.of(damageable).slice(1);
  given.set(name, damaged(files.get(name) ?? '', dice));
  return { argv: plain, files: given };
}

const unprintable = /[\u0000-\u0009\u000b-\u001f\u007f-\u009f\u200b-\u200f\u2028-\u202e\u2060-\u206f\ufeff]|\p{Cs}/u;
const codes = [0, 1, 2, 3, 4, 130];
const plainName = /^[A-Za-z][A-Za-z0-9_]{0,23}\.[a-z.-]+$/;

export interface Outcome {
  readonly code: number;
  readonly ms: number;
  readonly err: string;
  /** What should not have happened. */
  readonly faults: readonly string[];
}

/** Runs it on a machine in memory, and looks for what must not happen whatever the input. */
export async function outcomeOf({ argv, files }: HostileRun): Promise<Outcome> {
  const machine = new MachineInMemory();
  for (const [path, bytes] of files) machine.put(path, bytes);
  machine.cores = 1;
  const before = new Map(machine.files);
  const start = performance.now();
  const code = await machine.runWords(argv);
  const ms = performance.now() - start;
  const faults: string[] = [];
  const expect = (holds: boolean, otherwise: string) => {
    if (!holds) faults.push(otherwise);
  };
  expect(codes.includes(code), `exit code ${code}: ${machine.err.slice(0, 400)}`);
  expect(!/^\s+at .*(:\d+|\))$/m.test(machine.err), `a stack trace: ${machine.err.slice(0, 400)}`);
  expect(code === 0 || machine.err + machine.out !== '', `exit code ${code} without a word`);
  expect(code < 2 || machine.written.length === 0, `exit code ${code}, and something was written`);
  expect(!unprintable.test(machine.out), 'unprintable characters on standard output');
  expect(!unprintable.test(machine.err), 'unprintable characters on standard error');
  for (const [path, bytes] of before) expect(machine.files.get(path) === bytes, `the input ${path} was written over`);
  // `pattern` writes the file that it is told to; the others name their files themselves.
  for (const { path, content } of argv.includes('pattern') ? [] : machine.written.flat()) {
    expect(plainName.test(posix.basename(path)), `a file of the name ${JSON.stringify(path)}`);
    if (typeof content !== 'string') continue;
    expect(!unprintable.test(content.replaceAll('\t', '')), `unprintable characters in ${path}`);
    expect(!/<script|<!--|<!\[CDATA|\.include/i.test(content), `somebody's markup in ${path}`);
  }
  return { code, ms, err: machine.err, faults };
}
