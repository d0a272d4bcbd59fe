/** The working thread: runs one command; whatever must survive its sudden end (signals, terminal, writing) is the main thread's. */
import { parentPort, receiveMessageOnPort, workerData } from 'node:worker_threads';
import type { MessagePort } from 'node:worker_threads';
import { FileError } from './fault.js';
import type { Io } from './io.js';
import { onDisk } from './machine.js';
import type { Answer, FileFault, FromWork, Surroundings, Written } from './messages.js';
import { run } from './run.js';

const { argv, surroundings, answers } = workerData as {
  readonly argv: readonly string[];
  readonly surroundings: Surroundings;
  readonly answers: MessagePort;
};
const main = parentPort as MessagePort;
const tell = (message: FromWork): void => {
  main.postMessage(message);
};
const errorOf = ({ path, deed, reason }: FileFault): FileError => new FileError(path, deed, new Error(reason));

const waiting = new Map<number, (answer: Answer) => void>();
main.on('message', (answer: Answer) => {
  waiting.get(answer.id)?.(answer);
  waiting.delete(answer.id);
});
let last = 0;
const asked = (message: (id: number) => FromWork): Promise<void> =>
  new Promise((resolve, reject) => {
    const id = ++last;
    waiting.set(id, ({ fault }) => {
      if (fault === undefined) resolve();
      else reject(errorOf(fault));
    });
    tell(message(id));
  });

const io: Io = {
  ...onDisk,
  ...surroundings,
  stdout: (text) => asked((id) => ({ kind: 'text', id, to: 'stdout', text })),
  stderr: (text) => asked((id) => ({ kind: 'text', id, to: 'stderr', text })),
  writeFiles: (files, stale = []) => {
    const gate = new Int32Array(new SharedArrayBuffer(4));
    tell({ kind: 'write', files, stale, gate });
    Atomics.wait(gate, 0, 0);
    const { removed, fault } = receiveMessageOnPort(answers)?.message as Written;
    if (fault !== undefined) throw errorOf(fault);
    return removed;
  },
  keep: (rescue) => {
    tell({ kind: 'keep', rescue });
  },
  progressBar: async (label) => {
    await asked((id) => ({ kind: 'bar', id, label }));
    return {
      update: (share) => {
        tell({ kind: 'share', share });
      },
      stop: () => {
        tell({ kind: 'bar-stop' });
      },
    };
  },
};

tell({ kind: 'end', code: await run(argv, io) });
