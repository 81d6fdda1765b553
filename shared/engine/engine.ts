import type { ErrorRecord } from '../contract/errors.ts';
import type { Job, Settled } from '../contract/jobs.ts';

export interface EngineRunOptions<J extends Job> {
  /** Aborted: no further job is started, and the iteration ends with CANCELLED. */
  readonly signal: AbortSignal;
  /** True when the job's result is in the store already: asked when the engine has lost sight of a job. */
  readonly isDone: (job: J) => Promise<boolean>;
  /** Told when a job waits for a cause outside to pass (a full disk), which costs it no attempt. */
  readonly onWaiting?: (job: J, error: ErrorRecord) => void;
}

/**
 * The Engine port: runs the jobs of one stage, keeping a bounded number of them outstanding, and yields each as
 * it settles, in any order. A job that fails in a way that can pass is tried again; after that, or when its
 * input is bad, it is set aside with its error. The engine never throws for a job.
 *
 * Jobs are idempotent: at-least-once delivery is enough.
 */
export interface Engine {
  run<J extends Job>(jobs: Iterable<J> | AsyncIterable<J>, options: EngineRunOptions<J>): AsyncIterable<Settled<J>>;
  close(): Promise<void>;
}
