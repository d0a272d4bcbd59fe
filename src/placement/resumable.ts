import type { StartResult } from './search.js';

/** A piece of work that goes on as long as somebody calls `step`. What comes out does not depend on who did how much of it, and when. */
export interface Resumable<Job> {
  /** Runs some `work` trial swaps. Returns whether there is more to do, here or elsewhere. */
  step(work: number): boolean;
  /** Whether there is nothing more to do. */
  readonly over: boolean;
  /** Whether what is left to do now is all in other hands. */
  readonly waiting: boolean;
  /** Leaves a start to somebody else. Undefined where there is none to leave at the moment. */
  take(): Job | undefined;
  /** What a job has come to: at its end, or (`done` false) so far. @returns false where that does not matter any more. */
  offer(job: Job, result: StartResult, done: boolean): boolean;
  /** 0 to 1. */
  readonly progress: number;
  /** Trial swaps so far. */
  readonly work: number;
}
