import type { LegacyHighs } from 'highs';
import type { Placed } from '../../src/hookup/plan.js';
import type { Cost } from './every-hookup.js';
import { lengths } from './every-hookup.js';

/** The package's types describe its other build, where the loader is one step deeper. */
export const loadSolver = async (): Promise<LegacyHighs> => {
  const { default: load } = await import('highs');
  return (load as unknown as typeof load.default)();
};

/**
 * The best hookup of a small placement by a general solver. Binary variables: the side of every unit (s = 1: right), the track of every
 * net in every channel (p), whether a net's trunk has begun above a height (b), which of two nets stands left (l), every possible crossover
 * (x), the side on which a column's fill dummies find a free track (f). Knows nothing of the router.
 */
export function bestByProgramme(highs: LegacyHighs, placed: Placed, tracks: number): Omit<Cost, 'tracks'> | null {
  const { cells, capacitors } = placed;
  const rows = cells.length;
  const columns = cells[0].length;
  const nets = capacitors.map(({ name }) => name);
  const counts = (net: number) => capacitors[net].role === 'bit';
  const places = cells.flatMap((row, r) => row.map((name, c) => ({ r, c, net: nets.indexOf(name) })));
  if (placed.rings > 1)
    for (const { capacitor, row, column } of placed.ringUnits)
      places.push({ r: row, c: column, net: nets.indexOf(capacitor) });
  const units = places.filter(({ net }) => net !== -1);
  const lines: string[] = [];
  const binaries = new Set<string>();
  const binary = (name: string) => (binaries.add(name), name);
  const say = (text: string) => lines.push(text);
  const height = (r: number, right: boolean) => 2 * r + (right ? 1 : 0);
  const heights = Array.from({ length: 2 * rows + 2 }, (_, h) => h);
  const onTrack = (j: number, n: number, from: number, to: number) =>
    Array.from({ length: to - from }, (_, i) => binary(`p${j}_${n}_${from + i}`));
  const sum = (names: readonly string[]) => names.join(' + ') || '0 zero';

  for (let j = 0; j <= columns; j++) {
    for (let n = 0; n < nets.length; n++) {
      say(`${sum(onTrack(j, n, 0, tracks))} - ${binary(`z${j}_${n}`)} = 0`);
      for (const h of heights.slice(1)) say(`${binary(`b${j}_${n}_${h}`)} - ${binary(`b${j}_${n}_${h - 1}`)} >= 0`);
      for (let m = 0; m < nets.length; m++)
        for (let k = 1; m !== n && k < tracks; k++)
          say(
            `${binary(`l${j}_${m}_${n}`)} - ${[...onTrack(j, m, 0, k), ...onTrack(j, n, k, tracks)].join(' - ')} >= -1`,
          );
    }
    for (let k = 0; k < tracks; k++) say(`${sum(nets.map((_, n) => binary(`p${j}_${n}_${k}`)))} <= 1`);
  }
  const crossings: string[] = [];
  units.forEach(({ r, c, net }, u) => {
    const side = binary(`s${u}`);
    say(`z${c + 1}_${net} - ${side} >= 0`);
    say(`z${c}_${net} + ${side} >= 1`);
    const [low, high] = [height(r, true), height(r, false)];
    for (const h of heights) {
      if (h > low) say(`b${c + 1}_${net}_${h} - ${side} >= 0`);
      if (h > high) say(`b${c}_${net}_${h} + ${side} >= 1`);
    }
    nets.forEach((_, m) => {
      if (m === net || !counts(m) || !counts(net)) return;
      if (tracks === 1) return;
      const crossing = binary(`x${u}_${m}`);
      crossings.push(crossing);
      say(`${crossing} - ${side} - b${c + 1}_${m}_${low} - l${c + 1}_${m}_${net} >= -2`);
      say(`${crossing} + ${side} - b${c}_${m}_${high} - l${c}_${net}_${m} >= -1`);
    });
  });
  places
    .filter(({ net }) => net === -1)
    .forEach(({ r, c }, i) => {
      const free = binary(`f${i}`);
      const busy = (j: number, h: number) => nets.map((_, n) => `b${j}_${n}_${h}`).join(' + ');
      say(`${busy(c, height(r, false))} + ${nets.length} ${free} <= ${tracks - 1 + nets.length}`);
      say(`${busy(c + 1, height(r, true))} - ${nets.length} ${free} <= ${tracks - 1}`);
    });
  const trunks = Array.from({ length: columns + 1 }, (_, j) => nets.map((_, n) => `z${j}_${n}`)).flat();
  const optimum = (goal: string, more: readonly string[], free: readonly string[] = []): number | null => {
    const text = [
      'Minimize',
      ` goal: ${goal}`,
      'Subject To',
      ...[...lines, ...more].map((line) => ` ${line}`),
      'Bounds',
      ' zero = 0',
    ];
    for (const name of free) text.push(` ${name} free`);
    text.push('Binary', ...[...binaries].map((name) => ` ${name}`), 'End');
    const solution = highs.solve(text.join('\n'), { mip_rel_gap: 0, mip_abs_gap: 0.5 });
    if (solution.Status === 'Infeasible') return null;
    if (solution.Status !== 'Optimal') throw new Error(solution.Status);
    return Math.round(solution.ObjectiveValue);
  };
  const perTrunk = crossings.length + 1;
  const counted = optimum(`${trunks.map((z) => `${perTrunk} ${z}`).join(' + ')} + ${sum(crossings)}`, []);
  if (counted === null) return null;
  const crossovers = counted % perTrunk;
  const count = (counted - crossovers) / perTrunk;

  const far = 10_000;
  const pitch = 2 * lengths.reach + (tracks - 1) * lengths.track;
  const more = [`${sum(trunks)} = ${count}`, `${sum(crossings)} = ${crossovers}`];
  const goal: string[] = [];
  const free: string[] = [];
  const position = (j: number, n: number, sign: '+' | '-', at: (track: number) => number) =>
    onTrack(j, n, 0, tracks)
      .map((p, k) => `${at(k) < 0 === (sign === '-') ? '+' : '-'} ${Math.abs(at(k))} ${p}`)
      .join(' ');
  const trackX = (j: number) => (k: number) => j * pitch - pitch + lengths.reach + k * lengths.track;
  units.forEach(({ r, c, net }, u) => {
    if (!counts(net)) return;
    goal.push(`stub${u}`);
    more.push(
      `stub${u} ${position(c + 1, net, '-', (k) => lengths.reach + k * lengths.track)} - ${far} s${u} >= -${far}`,
    );
    more.push(
      `stub${u} ${position(c, net, '-', (k) => lengths.reach + (tracks - 1 - k) * lengths.track)} + ${far} s${u} >= 0`,
    );
    const y = (right: boolean) => (rows - r) * lengths.row + (right ? -lengths.level : lengths.level);
    more.push(`trunk${c + 1}_${net} - ${y(true)} s${u} >= 0`);
    more.push(`trunk${c}_${net} + ${y(false)} s${u} >= ${y(false)}`);
  });
  nets.forEach((_, n) => {
    if (!counts(n)) return;
    goal.push(...Array.from({ length: columns + 1 }, (_, j) => `trunk${j}_${n}`), `bus${n}`);
    free.push(`low${n}`, `high${n}`);
    more.push(`bus${n} - high${n} + low${n} >= 0`);
    for (let j = 0; j <= columns; j++) {
      more.push(`trunk${j}_${n} >= 0`);
      more.push(`high${n} ${position(j, n, '-', trackX(j))} - ${far} z${j}_${n} >= -${far}`);
      more.push(`low${n} ${position(j, n, '-', trackX(j))} + ${far} z${j}_${n} <= ${far}`);
    }
  });
  return { trunks: count, crossovers, length: optimum(goal.join(' + '), more, free)! };
}
