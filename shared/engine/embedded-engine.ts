import { Piscina } from 'piscina';
import { BasinloomError, type ErrorRecord } from '../contract/errors.ts';
import type { Job, Settled, Stage } from '../contract/jobs.ts';
import type { Engine } from './engine.ts';
import type { ThreadAnswer } from './thread-answer.ts';

export interface EmbeddedEngineOptions {
  readonly threads: number;
  /** File whose default export runs a job: `(job) => Promise<ThreadAnswer>`. */
  readonly threadFile: (stage: Stage) => string;
  /** Given to every thread as piscina's workerData. */
  readonly workerData: unknown;
  /** Attempts for an error that can pass, the first included. @defaultValue 3 */
  readonly attempts?: number;
  /** First pause before a retry; doubled each time, with jitter. @defaultValue 200 */
  readonly backoffMs?: number;
}

/** Jobs on worker threads of this process. */
export class EmbeddedEngine implements Engine {
  readonly width: number;
  readonly #options: EmbeddedEngineOptions;
  readonly #pool: Piscina;

  constructor(options: EmbeddedEngineOptions) {
    this.#options = options;
    this.width = options.threads;
    this.#pool = new Piscina({
      minThreads: options.threads,
      maxThreads: options.threads,
      idleTimeout: Number.POSITIVE_INFINITY,
      workerData: options.workerData,
    });
  }

  async *run<J extends Job>(
    jobs: Iterable<J> | AsyncIterable<J>,
    { signal }: { signal: AbortSignal },
  ): AsyncIterable<Settled<J>> {
    // Two jobs a thread: one running, one waiting, so that no thread idles while the consumer works.
    const window = this.width * 2;
    const outstanding = new Map<J, Promise<Settled<J>>>();
    const source = toAsync(jobs);
    let exhausted = false;
    while (true) {
      while (!exhausted && !signal.aborted && outstanding.size < window) {
        const next = await source.next();
        if (next.done) exhausted = true;
        else outstanding.set(next.value, this.#settle(next.value, signal));
      }
      if (outstanding.size === 0) break;
      const settled = await Promise.race(outstanding.values());
      outstanding.delete(settled.job);
      yield settled;
    }
    if (!exhausted) await source.return?.(undefined);
    if (signal.aborted) throw new BasinloomError('CANCELLED');
  }

  async close(): Promise<void> {
    await this.#pool.destroy();
  }

  async #settle<J extends Job>(job: J, signal: AbortSignal): Promise<Settled<J>> {
    const attempts = this.#options.attempts ?? 3;
    const started = performance.now();
    for (let attempt = 1; ; attempt++) {
      const error = await this.#attempt(job);
      if (!error) return { status: 'done', job, seconds: (performance.now() - started) / 1000, attempts: attempt };
      if (!error.retryable || attempt >= attempts || signal.aborted) {
        return { status: 'set-aside', job, error, attempts: attempt };
      }
      const pause = (this.#options.backoffMs ?? 200) * 2 ** (attempt - 1);
      await new Promise((done) => setTimeout(done, pause * (0.5 + Math.random())));
    }
  }

  async #attempt(job: Job): Promise<ErrorRecord | null> {
    try {
      const answer: ThreadAnswer = await this.#pool.run(job, { filename: this.#options.threadFile(job.stage) });
      return answer.ok ? null : answer.error;
    } catch (error) {
      // The thread itself ended (out of memory, a crash): the job may be innocent, so it is tried again.
      return new BasinloomError('WORKER_LOST', { job: job.id, detail: (error as Error).message }).toRecord();
    }
  }
}

async function* toAsync<T>(items: Iterable<T> | AsyncIterable<T>): AsyncGenerator<T> {
  yield* items;
}
