import { setTimeout as sleep } from 'node:timers/promises';
import { BasinloomError } from '../contract/errors.ts';
import type { Job, Settled, Stage } from '../contract/jobs.ts';
import type { Engine, EngineRunOptions } from './engine.ts';
import { ATTEMPTS, BACKOFF_MS, mustWait, WAIT_MS } from './retry.ts';
import { ThreadPool } from './thread-pool.ts';
import { toAsync } from './to-async.ts';

export interface EmbeddedEngineOptions {
  readonly threads: number;
  /** File whose default export runs a job: `(envelope) => Promise<ThreadAnswer>`. */
  readonly threadFile: (stage: Stage) => string;
  /** Id of the run and location of its store, as they go with every job. */
  readonly run: string;
  readonly store: string;
  /** @defaultValue ATTEMPTS */
  readonly attempts?: number;
  /** @defaultValue BACKOFF_MS */
  readonly backoffMs?: number;
  /** @defaultValue WAIT_MS */
  readonly waitMs?: number;
}

/** Jobs on worker threads of this process. */
export class EmbeddedEngine implements Engine {
  readonly #options: EmbeddedEngineOptions;
  readonly #pool: ThreadPool;

  constructor(options: EmbeddedEngineOptions) {
    this.#options = options;
    this.#pool = new ThreadPool(options.threads, options.threadFile);
  }

  async *run<J extends Job>(
    jobs: Iterable<J> | AsyncIterable<J>,
    options: EngineRunOptions<J>,
  ): AsyncIterable<Settled<J>> {
    const { signal } = options;
    // Two jobs a thread: one running, one waiting, so that no thread idles while the consumer works.
    const window = this.#options.threads * 2;
    const outstanding = new Map<J, Promise<Settled<J>>>();
    const source = toAsync(jobs);
    let exhausted = false;
    while (true) {
      while (!exhausted && !signal.aborted && outstanding.size < window) {
        const next = await source.next();
        if (next.done) exhausted = true;
        else outstanding.set(next.value, this.#settle(next.value, options));
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
    await this.#pool.close();
  }

  async #settle<J extends Job>(job: J, { signal, onWaiting }: EngineRunOptions<J>): Promise<Settled<J>> {
    const { run, store, attempts = ATTEMPTS, backoffMs = BACKOFF_MS, waitMs = WAIT_MS } = this.#options;
    const started = performance.now();
    for (let attempt = 1; ; attempt++) {
      const error = await this.#pool.run({ run, store, job });
      if (!error) return { status: 'done', job, seconds: (performance.now() - started) / 1000, attempts: attempt };
      const waits = mustWait(error);
      if (signal.aborted || !error.retryable || (attempt >= attempts && !waits)) {
        return { status: 'set-aside', job, error, attempts: attempt };
      }
      if (waits) {
        onWaiting?.(job, error);
        attempt--;
      }
      const pause = waits ? waitMs : backoffMs * 2 ** (attempt - 1) * (0.5 + Math.random());
      await sleep(pause, undefined, { signal }).catch(() => {});
    }
  }
}
