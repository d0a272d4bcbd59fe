import { getHeapStatistics } from 'node:v8';
import { MessageChannel, Worker } from 'node:worker_threads';
import { FileError, exit, outOfMemory, shown } from './fault.js';
import { interrupted } from './interrupted.js';
import type { Bar, Io, Rescue } from './io.js';
import { machine, onInterrupt } from './machine.js';
import type { Answer, FileFault, FromWork, Surroundings, Written } from './messages.js';
import { reporting, run } from './run.js';

const faultOf = (error: unknown): FileFault => {
  if (error instanceof FileError) return { path: error.path, deed: error.deed, reason: error.reason };
  throw error;
};

/** What went wrong with the working thread itself: it ran out of memory, or it broke. */
function broken(error: unknown): { code: number; lines: readonly string[] } {
  if (error instanceof Error && 'code' in error && error.code === 'ERR_WORKER_OUT_OF_MEMORY') {
    return { code: exit.infeasible, lines: outOfMemory };
  }
  const words = error instanceof Error ? `${error.name}: ${error.message}` : String(error);
  return { code: exit.defect, lines: [`steelyard: a defect of this program, not of your input: ${shown(words)}`] };
}

/** After this long a search is worth being ready to save it at once. */
const READY_AFTER_ms = 300;
const prepare = (rescue: Rescue): void => {
  // Should loading fail, saving itself will say so.
  void import('./rescue.js').then(({ prepareRescue }) => prepareRescue(rescue)).catch(() => undefined);
};

/**
 * Runs the command in a thread of its own, so that this one is always free to hear Ctrl-C: the work is then dropped where it stands, and
 * what it last put by is saved. Files are written here, without a pause in which a signal could be answered.
 * @returns the exit code
 */
export async function supervised(argv: readonly string[]): Promise<number> {
  const io = machine();
  // Ahead of everything that takes time to start.
  if (argv.length === 1 && argv[0] === '--version') return run(argv, io);
  const interrupt = new Promise<void>((resolve) => {
    onInterrupt(() => {
      resolve();
    });
  });
  const work = startWork(argv, io);
  const code = await Promise.race([work.end, interrupt]);
  if (code !== undefined) return code;
  // What is written is whole, and the little that is left to say does not wait for anybody.
  if (work.state.written) return work.end;
  work.state.over = true;
  void work.worker.terminate();
  work.state.bar?.stop();
  return reporting(io, argv.includes('--debug'), () => interrupted(io, work.state.rescue));
}

interface State {
  rescue?: Rescue;
  bar?: Bar;
  /** The files of the command are in place. */
  written: boolean;
  /** Nothing is expected of the thread any more. */
  over: boolean;
}

function startWork(argv: readonly string[], io: Io) {
  const state: State = { written: false, over: false };
  const { stdoutIsTerminal, stderrIsTerminal, columns, colour } = io;
  const surroundings: Surroundings = { stdoutIsTerminal, stderrIsTerminal, columns, colour };
  const { port1: answers, port2 } = new MessageChannel();
  const worker = new Worker(new URL('./command-thread.js', import.meta.url), {
    workerData: { argv, surroundings, answers: port2 },
    transferList: [port2],
    // With a limit that is stated, running out of memory is an error of the thread instead of the end of the process.
    resourceLimits: { maxOldGenerationSizeMb: Math.floor(getHeapStatistics().heap_size_limit / 2 ** 20) },
  });
  answers.unref();

  const answer = (id: number, done: Promise<unknown>): void => {
    done
      .then(
        (): Answer => ({ id }),
        (error: unknown): Answer => ({ id, fault: faultOf(error) }),
      )
      .then((message) => {
        worker.postMessage(message);
      })
      .catch((error: unknown) => worker.emit('error', error));
  };
  const write = ({ files, stale, gate }: FromWork & { kind: 'write' }): void => {
    let written: Written;
    try {
      written = { removed: io.writeFiles(files, stale) };
      state.written = true;
    } catch (error) {
      written = { removed: [], fault: faultOf(error) };
    }
    answers.postMessage(written);
    Atomics.store(gate, 0, 1);
    Atomics.notify(gate, 0);
  };

  const end = new Promise<number>((resolve) => {
    worker.on('message', (message: FromWork) => {
      switch (message.kind) {
        case 'text':
          return answer(message.id, io[message.to](message.text));
        case 'bar':
          return answer(
            message.id,
            io.progressBar(message.label).then((bar) => (state.bar = bar)),
          );
        case 'share':
          return state.bar?.update(message.share);
        case 'bar-stop':
          return state.bar?.stop();
        case 'keep':
          if (state.rescue === undefined) setTimeout(prepare, READY_AFTER_ms, message.rescue).unref();
          state.rescue = message.rescue;
          return;
        case 'write':
          return write(message);
        case 'end':
          state.over = true;
          resolve(message.code);
          void worker.terminate();
      }
    });
    const fail = (error: unknown): void => {
      if (state.over) return;
      state.over = true;
      state.bar?.stop();
      const { code, lines } = broken(error);
      void io
        .stderr(lines.map((line) => `${line}\n`).join(''))
        .catch(() => undefined)
        .then(() => {
          resolve(code);
        });
    };
    worker.on('error', fail);
    worker.on('exit', () => {
      fail(new Error('the working thread ended before its work'));
    });
  });
  return { end, state, worker };
}
