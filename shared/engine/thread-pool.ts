import { Piscina } from 'piscina';
import { BasinloomError, type ErrorRecord } from '../contract/errors.ts';
import type { JobEnvelope, Stage } from '../contract/jobs.ts';
import type { ThreadAnswer } from './thread-answer.ts';

/** Does jobs, one call a job. */
export interface JobRunner {
  /** @returns what went wrong, or null; never throws */
  run(envelope: JobEnvelope): Promise<ErrorRecord | null>;
  close(): Promise<void>;
}

/** Jobs on threads of this process, so that its event loop stays free. */
export class ThreadPool implements JobRunner {
  readonly #pool: Piscina;
  readonly #threadFile: (stage: Stage) => string;

  /** @param threadFile file whose default export does a job: `(envelope) => Promise<ThreadAnswer>` */
  constructor(threads: number, threadFile: (stage: Stage) => string) {
    this.#threadFile = threadFile;
    this.#pool = new Piscina({
      minThreads: threads,
      maxThreads: threads,
      idleTimeout: Number.POSITIVE_INFINITY,
      // A library of geotiff's takes a thread without workerData for one that it started itself.
      workerData: {},
    });
  }

  async run(envelope: JobEnvelope): Promise<ErrorRecord | null> {
    const { job } = envelope;
    try {
      const answer: ThreadAnswer = await this.#pool.run(envelope, { filename: this.#threadFile(job.stage) });
      return answer.ok ? null : answer.error;
    } catch (error) {
      // The thread itself ended (out of memory, a crash): the job may be innocent, so it may be tried again.
      return new BasinloomError('WORKER_LOST', { job: job.id, detail: (error as Error).message }).toRecord();
    }
  }

  async close(): Promise<void> {
    await this.#pool.destroy();
  }
}
