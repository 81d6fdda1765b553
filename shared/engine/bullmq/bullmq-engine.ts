import type { Job, Settled } from '../../contract/jobs.ts';
import type { Engine, EngineRunOptions } from '../engine.ts';
import type { JobQueues } from './job-queues.ts';
import { StageJobs } from './stage-jobs.ts';

export interface BullmqEngineOptions {
  readonly queues: JobQueues;
  /** Id of the run: stands in every job's id, so a coordinator that takes a run up again finds its jobs. */
  readonly run: string;
  /** Location of the store, as the workers reach it. */
  readonly store: string;
  /** Most jobs outstanding at a time: what bounds the memory of Redis. @defaultValue 2000 */
  readonly window?: number;
  /** Called at the end, by whoever opened the queues for this engine alone. */
  readonly onClose?: () => Promise<void>;
  /** How often jobs without news are looked up, ms. @defaultValue 5000 */
  readonly lookMs?: number;
}

/** Jobs on the workers of a queue in Redis. The store is the record; the queue is only the trigger. */
export class BullmqEngine implements Engine {
  readonly #options: BullmqEngineOptions & Required<Pick<BullmqEngineOptions, 'window' | 'lookMs'>>;

  constructor(options: BullmqEngineOptions) {
    this.#options = { window: 2000, lookMs: 5000, ...options };
  }

  run<J extends Job>(jobs: Iterable<J> | AsyncIterable<J>, options: EngineRunOptions<J>): AsyncIterable<Settled<J>> {
    return new StageJobs(jobs, this.#options, options).settled();
  }

  async close(): Promise<void> {
    await this.#options.onClose?.();
  }
}
