import type { Job, Settled } from '../contract/jobs.ts';

/**
 * The Engine port: runs the jobs of one stage, keeping a bounded number of them outstanding, and yields each as
 * it settles, in any order. A job that fails in a way that can pass is tried again; after that, or when its
 * input is bad, it is set aside with its error. The engine never throws for a job.
 *
 * Jobs are idempotent: at-least-once delivery is enough.
 */
export interface Engine {
  run<J extends Job>(jobs: Iterable<J> | AsyncIterable<J>, options: { signal: AbortSignal }): AsyncIterable<Settled<J>>;
  /** Number of jobs that can run at the same time. */
  readonly width: number;
  close(): Promise<void>;
}
