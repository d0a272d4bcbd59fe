/** A thread of its own for starts of a search, one at a time. What it is given last is what it runs. */
import { setImmediate } from 'node:timers/promises';
import { parentPort } from 'node:worker_threads';
import type { MessagePort } from 'node:worker_threads';
import { beginStart } from '../index.js';
import type { StartJob } from '../index.js';
import type { FromSearch, ToSearch } from './io.js';

const TELL_EVERY_ms = 200;

const port = parentPort as MessagePort;
const tell = (message: FromSearch): void => {
  port.postMessage(message);
};

async function run(number: number, job: StartJob, isWanted: () => boolean): Promise<void> {
  const start = beginStart(job);
  let work = 2000;
  let told = performance.now();
  while (!start.done) {
    const before = performance.now();
    start.step(work);
    const now = performance.now();
    if (now - before < 20 && work < 1e8) work *= 2;
    else if (now - before > 50 && work > 1) work = Math.ceil(work / 2);
    if (now - told > TELL_EVERY_ms && !start.done) {
      tell({ number, result: start.result(), done: false, progress: start.progress });
      told = now;
    }
    await setImmediate();
    if (!isWanted()) return;
  }
  tell({ number, result: start.result(), done: true, progress: 1 });
}

let last = 0;
let former = Promise.resolve();
port.on('message', ({ number, job }: ToSearch) => {
  last = number;
  if (job !== undefined) former = former.then(() => run(number, job, () => number === last));
});
