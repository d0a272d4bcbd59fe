import { spawn } from 'node:child_process';
import { existsSync, mkdtempSync, readFileSync, readdirSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { Dice } from '../cli/hostile-inputs.js';

const tool = 'dist/cli/main.js';
const pause = (ms: number) => new Promise((resolve) => setTimeout(resolve, ms));

interface Ended {
  readonly code: number | null;
  readonly err: string;
  /** From the signal to the end, in milliseconds. */
  readonly ms: number;
}

async function run(args: readonly string[], signal?: NodeJS.Signals, after = 0): Promise<Ended> {
  const child = spawn(process.execPath, [tool, ...args], { stdio: ['ignore', 'ignore', 'pipe'] });
  let err = '';
  child.stderr.setEncoding('utf8').on('data', (text: string) => (err += text));
  const ended = new Promise<number | null>((resolve) => child.on('close', resolve));
  if (signal !== undefined) {
    await Promise.race([pause(after), ended]);
    child.kill(signal);
  }
  const start = performance.now();
  const code = await ended;
  return { code, err, ms: performance.now() - start };
}

async function interrupted(after: number, workers: number) {
  const folder = mkdtempSync(join(tmpdir(), 'steelyard-bench-'));
  try {
    const { code, ms } = await run(
      ['place', '--bits', '14', '--effort', 'quick', '--workers', String(workers), '--out', folder],
      'SIGINT',
      after,
    );
    const floorplan = join(folder, 'cdac14.floorplan.json');
    const saved = existsSync(floorplan);
    const accepted = saved ? (await run(['check', floorplan])).code === 0 : undefined;
    return { after_s: after / 1000, workers, exit: code, ms: Math.round(ms), saved, accepted: accepted ?? '-' };
  } finally {
    rmSync(folder, { recursive: true, force: true });
  }
}

/** Whether each file is one that a whole run has written. */
async function killed(dice: Dice, count: number) {
  const folder = mkdtempSync(join(tmpdir(), 'steelyard-bench-'));
  const args = (seed: number, out: string) => [
    'place',
    '--bits',
    '5',
    '--effort',
    'quick',
    '--seed',
    String(seed),
    '--out',
    join(folder, out),
  ];
  const contents = (out: string) =>
    new Map(readdirSync(join(folder, out)).map((name) => [name, readFileSync(join(folder, out, name), 'latin1')]));
  try {
    await run(args(1, 'one'));
    const start = performance.now();
    await run(args(2, 'two'));
    const whole_ms = performance.now() - start;
    await run(args(1, 'o'));
    const [one, two] = [contents('one'), contents('two')];
    let damaged = 0;
    let mixed = 0;
    let changed = 0;
    for (let kill = 0; kill < count; kill++) {
      // The writing is at the end: half of the kills come there.
      const share = kill % 2 === 0 ? dice.next() : 0.8 + 0.25 * dice.next();
      await run(args(2 - (kill % 2), 'o'), 'SIGKILL', share * whole_ms);
      const now = contents('o');
      const of = (set: ReadonlyMap<string, string>) => [...set].filter(([name, text]) => now.get(name) === text).length;
      const [ones, twos] = [of(one), of(two)];
      const neither = [...one.keys()].filter(
        (name) => now.get(name) !== one.get(name) && now.get(name) !== two.get(name),
      );
      damaged += neither.length;
      if (ones < one.size && twos < two.size) mixed++;
      if (kill % 2 === 0 ? twos === two.size : ones === one.size) changed++;
    }
    const left = [...contents('o').keys()].filter((name) => name.startsWith('.')).length;
    return { kills: count, damaged, mixed, finished: changed, temporaryFiles: left };
  } finally {
    rmSync(folder, { recursive: true, force: true });
  }
}

/** Signals at random moments, of the built tool as processes. */
export async function measureInterrupts(seed: number, runs = 30) {
  const dice = new Dice(seed, 0);
  const interrupts = [];
  for (let i = 0; i < runs; i++) interrupts.push(await interrupted(300 + dice.next() * 40_000, 1 + (i % 2)));
  const kills = [await killed(dice, Math.max(1, Math.round((runs * 10) / 3)))];
  return { interrupts, kills };
}
