import { describe, expect, it } from 'vitest';
import { Random } from '../../src/core/random.js';
import { beginStart, startCandidates, startPlacement } from '../../src/pipeline.js';
import type { Kept, StartJob } from '../../src/pipeline.js';
import type { Resumable } from '../../src/placement/resumable.js';
import type { SearchStart } from '../../src/placement/search.js';
import { formatFloorplan } from '../../src/spec/format.js';
import { resolveArray } from '../../src/spec/resolve.js';
import type { Given } from './drawn.js';
import { parallelPlate } from './drawn.js';

function arrayOf(given: Given) {
  const array = resolveArray({ format: 'steelyard/array', version: 1, ...given }, parallelPlate);
  if (!array.ok) throw new Error(JSON.stringify(array.issues));
  return array.value;
}

interface Hand<Job> {
  readonly job: Job;
  readonly start: SearchStart;
}

/**
 * Brings a run to its end with `hands` others, who and how much at a time by chance: all of it in this thread, but with plain data alone
 * between them and the run, copied as threads copy it.
 */
function shared<Job extends StartJob>(run: Resumable<Job>, hands: number, seed: number): void {
  const random = new Random(seed);
  const busy: Hand<Job>[] = [];
  while (!run.over) {
    if (busy.length < hands && random.below(2) === 0) {
      const job = run.take();
      if (job !== undefined) busy.push({ job, start: beginStart(structuredClone(job)) });
    }
    if (random.below(hands + 1) === 0) run.step(1 + random.below(40_000));
    else if (busy.length > 0) {
      const i = random.below(busy.length);
      const { job, start } = busy[i];
      if (!start.done) start.step(1 + random.below(80_000));
      const wanted = run.offer(job, structuredClone(start.result()), start.done);
      if (start.done || !wanted) busy.splice(i, 1);
    } else if (run.waiting) throw new Error('waits for nobody');
  }
  expect([run.step(1), run.take(), run.waiting, run.progress]).toEqual([false, undefined, false, 1]);
}

describe('a run whose starts others run', () => {
  for (const given of [
    { bits: 5, effort: 'quick' },
    { bits: 7, effort: 'quick' },
    { bits: 7, effort: 'quick', emphasis: 'wiring' },
    // A start that meets the bound ends those of higher numbers.
    { bits: 4, emphasis: 'gradient', core: { rows: 3, columns: 5 } },
    { weights: [2, 3, 5, 7, 11], effort: 'quick' },
  ] satisfies Given[])
    it(`is the same run, its work too: ${JSON.stringify(given)}`, () => {
      const array = arrayOf(given);
      const alone = startPlacement({ array });
      while (alone.step(1e6));
      const wanted = alone.best(false);
      expect(wanted.floorplan.placement?.work).toBeGreaterThan(0);
      for (const hands of [1, 2, 5])
        for (const seed of [1, 2]) {
          const run = startPlacement({ array });
          shared(run, hands, seed);
          expect(run.best(false)).toEqual(wanted);
        }
    });

  it('has a best at any moment, with what was heard of the others in it', () => {
    const array = arrayOf({ bits: 7 });
    const run = startPlacement({ array });
    expect(run.started).toBe(false);
    const job = run.take()!;
    const start = beginStart(job);
    start.step(30_000);
    expect(run.offer(job, start.result(), false)).toBe(true);
    expect(run.started).toBe(true);
    const { floorplan } = run.best(true);
    expect(floorplan.placement).toMatchObject({ status: 'interrupted', work: 30_000 });
    expect(floorplan.cells.flat().filter((cell) => cell === 'B6').length).toBe(64);
  });

  it('does not ask for what has become of a start that no longer matters', () => {
    const array = arrayOf({ bits: 6, effort: 'quick' });
    const run = startPlacement({ array });
    const job = run.take()!;
    const start = beginStart(job);
    while (!start.done) start.step(1e6);
    expect(run.offer(job, start.result(), true)).toBe(true);
    while (run.step(1e6));
    expect(run.offer(job, start.result(), true)).toBe(false);
  });
});

describe('a search of candidates', () => {
  const texts = (kept: readonly Kept[]) => kept.map(({ floorplan }) => formatFloorplan(floorplan));

  it('is the same for any number of hands and any steps', () => {
    const array = arrayOf({ bits: 5, effort: 'quick' });
    const alone = startCandidates({ array }, 5);
    while (alone.step(1e6));
    const wanted = texts(alone.best());
    expect(new Set(wanted).size).toBe(wanted.length);
    for (const hands of [1, 4]) {
      const run = startCandidates({ array }, 5);
      shared(run, hands, hands);
      expect(texts(run.best())).toEqual(wanted);
      expect(run.work).toBe(alone.work);
    }
  });

  it('has something to show from its first step on', () => {
    const run = startCandidates({ array: arrayOf({ bits: 6, effort: 'quick' }) }, 2);
    let most = 0;
    for (let progress = 0; run.step(30_000); progress = run.progress) {
      expect(run.progress).toBeGreaterThanOrEqual(progress);
      const { length } = run.best();
      expect(length).toBeGreaterThan(0);
      most = Math.max(most, length);
    }
    expect(run.best().length).toBe(2);
    expect(most).toBe(2);
  });
});
