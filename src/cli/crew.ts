import type { Resumable, StartJob } from '../index.js';
import type { Io, Thread } from './io.js';

interface Hand<Job> {
  readonly thread: Thread;
  /** What it runs; undefined where it has nothing to do. */
  job?: { readonly number: number; readonly job: Job; progress: number };
}

/**
 * Threads that run starts of a search besides the one that holds the run. Each is started when there is a start for it to run.
 * What comes out does not depend on them: see `Resumable`.
 */
export class Crew<Job extends StartJob> {
  readonly #io: Pick<Io, 'startThread'>;
  readonly #most: number;
  readonly #run: Resumable<Job>;
  readonly #hands: Hand<Job>[] = [];
  #given = 0;
  #failure: Error | undefined;
  #heard: () => void = () => undefined;

  /** @param most threads at a time, this one not counted */
  constructor(io: Pick<Io, 'startThread'>, run: Resumable<Job>, most: number) {
    this.#io = io;
    this.#run = run;
    this.#most = most;
  }

  /** The share of the run that is being done elsewhere and is not yet counted in its own progress. */
  get progress(): number {
    return this.#hands.reduce((sum, { job }) => sum + (job ? job.progress * job.job.share : 0), 0);
  }

  /** Gives work to whoever has none. @throws Error where a thread has died. */
  handOut(): void {
    if (this.#failure) throw this.#failure;
    for (;;) {
      const idle = this.#hands.find(({ job }) => job === undefined);
      if (idle === undefined && this.#hands.length === this.#most) return;
      const job = this.#run.take();
      if (job === undefined) return;
      const hand = idle ?? this.#hire();
      hand.job = { number: ++this.#given, job, progress: 0 };
      hand.thread.give({ number: this.#given, job });
    }
  }

  /** Until one of the threads has something to say. */
  news(): Promise<void> {
    return new Promise((resolve) => {
      this.#heard = resolve;
    });
  }

  dismiss(): void {
    for (const { thread } of this.#hands) thread.end();
  }

  #hire(): Hand<Job> {
    const hand: Hand<Job> = {
      thread: this.#io.startThread({
        heard: ({ number, result, done, progress }) => {
          const current = hand.job;
          // Of a job that it was told to leave.
          if (current?.number !== number) return;
          current.progress = progress;
          const wanted = this.#run.offer(current.job, result, done);
          if (done || !wanted) delete hand.job;
          if (!wanted && !done) hand.thread.give({ number: ++this.#given });
          this.#heard();
        },
        died: (reason) => {
          this.#failure = new Error(
            `a thread of the search ended before its work (${reason}); with --workers 1 there is none`,
          );
          this.#heard();
        },
      }),
    };
    this.#hands.push(hand);
    return hand;
  }
}
