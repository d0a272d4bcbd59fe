import { Worker } from 'node:worker_threads';
import { hostileRun, outcomeOf, soundFiles } from '../cli/hostile-runs.js';

const LONGEST_ms = 10_000;

/** Says from a thread of its own which run does not come back. */
function watchdog() {
  const beat = new Int32Array(new SharedArrayBuffer(8));
  const code = `
    const { workerData: { beat, longest } } = require('node:worker_threads');
    let last = -1, since = Date.now(), said = false;
    setInterval(() => {
      if (beat[0] !== last) { last = beat[0]; since = Date.now(); said = false; }
      else if (!said && Date.now() - since > longest) {
        said = true;
        require('node:fs').writeSync(2, 'run ' + last + ' takes longer than ' + longest / 1000 + ' s\\n');
      }
    }, 500);`;
  const worker = new Worker(code, { eval: true, workerData: { beat, longest: LONGEST_ms } });
  return { beat, stop: () => worker.terminate() };
}

/** Many damaged inputs and command lines, in this process. Prints whatever should not have happened. */
export async function measureHostile({ runs, seed, from = 0 }: { runs: number; seed: number; from?: number }) {
  const files = await soundFiles();
  const { beat, stop } = watchdog();
  const codes = new Map<number, number>();
  let slowest = { run: -1, ms: 0 };
  let faulty = 0;
  for (let run = from; run < from + runs; run++) {
    Atomics.store(beat, 0, run);
    const hostile = hostileRun(files, seed, run);
    const { code, ms, faults } = await outcomeOf(hostile);
    codes.set(code, (codes.get(code) ?? 0) + 1);
    if (ms > slowest.ms) slowest = { run, ms };
    const all = ms > LONGEST_ms ? [...faults, `${(ms / 1000).toFixed(1)} s`] : faults;
    if (all.length > 0) {
      faulty++;
      console.log(`run ${run}: ${JSON.stringify(hostile.argv).slice(0, 200)}\n  ${all.join('\n  ')}`);
    }
    if ((run + 1) % 1000 === 0) console.error(`${run + 1 - from} of ${runs}`);
  }
  await stop();
  const rows = [...codes].sort(([a], [b]) => a - b).map(([code, count]) => ({ exit: code, runs: count }));
  return { seed, runs, rows, faulty, slowest_ms: Math.round(slowest.ms), slowestRun: slowest.run };
}
