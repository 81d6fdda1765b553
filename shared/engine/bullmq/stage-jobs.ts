import { setTimeout as sleep } from 'node:timers/promises';
import { BasinloomError, type ErrorRecord } from '../../contract/errors.ts';
import { type Job, type Settled, serviceOf } from '../../contract/jobs.ts';
import type { EngineRunOptions } from '../engine.ts';
import { toAsync } from '../to-async.ts';
import type { BullmqEngineOptions } from './bullmq-engine.ts';
import { decodeFailure } from './job-data.ts';
import type { JobNews, JobQueue } from './job-queues.ts';
import { queueId } from './naming.ts';

/** Most jobs in one bulk: Redis answers nobody else while it takes one in. */
const BULK = 250;
/** Jobs looked up at a time while nothing is missing. */
const LOOK = 200;

interface Outstanding<J extends Job> {
  readonly job: J;
  readonly id: string;
  /** How often the job was lost from Redis and added again. */
  readonly round: number;
  readonly lastTry: boolean;
  /** When the job was added or last looked up, ms. */
  seen: number;
}

/** The jobs of one stage on their way through the queue. */
export class StageJobs<J extends Job> {
  readonly #source: AsyncGenerator<J>;
  readonly #engine: Required<Omit<BullmqEngineOptions, 'onClose'>>;
  readonly #options: EngineRunOptions<J>;
  readonly #outstanding = new Map<string, Outstanding<J>>();
  /** Jobs that ended and were not yielded yet. */
  #ended: { readonly entry: Outstanding<J>; readonly news: JobNews }[] = [];
  /** Jobs that cost two workers: their last try comes when the others are through. */
  readonly #suspects: Outstanding<J>[] = [];
  #exhausted = false;
  #toldAlone = false;
  #wake: () => void = () => {};

  constructor(
    jobs: Iterable<J> | AsyncIterable<J>,
    engine: Required<Omit<BullmqEngineOptions, 'onClose'>>,
    options: EngineRunOptions<J>,
  ) {
    this.#source = toAsync(jobs);
    this.#engine = engine;
    this.#options = options;
  }

  async *settled(): AsyncGenerator<Settled<J>> {
    const { signal } = this.#options;
    const wake = () => this.#wake();
    signal.addEventListener('abort', wake);
    let looked = performance.now();
    try {
      while (!signal.aborted) {
        await this.#fill();
        yield* this.#settle();
        if (this.#outstanding.size === 0 && this.#ended.length === 0) {
          const suspect = this.#suspects.shift();
          if (!suspect && this.#exhausted) return;
          if (suspect) await this.#add([{ job: suspect.job, round: suspect.round + 1, lastTry: true }]);
          continue;
        }
        await this.#news();
        if (performance.now() - looked >= this.#engine.lookMs) {
          await this.#look();
          looked = performance.now();
        }
      }
      throw new BasinloomError('CANCELLED');
    } finally {
      signal.removeEventListener('abort', wake);
      await this.#withdraw();
      if (!this.#exhausted) await this.#source.return(undefined);
    }
  }

  /** Adds jobs until the window is full; not for a few free places at a time. */
  async #fill(): Promise<void> {
    const { window } = this.#engine;
    while (!this.#exhausted && window - this.#outstanding.size >= Math.min(window / 4, BULK)) {
      const batch: { job: J; round: number; lastTry: boolean }[] = [];
      const room = Math.min(BULK, window - this.#outstanding.size);
      while (batch.length < room && !this.#options.signal.aborted) {
        const next = await this.#source.next();
        if (next.done) {
          this.#exhausted = true;
          break;
        }
        batch.push({ job: next.value, round: 0, lastTry: false });
      }
      if (batch.length > 0) await this.#add(batch);
      if (this.#ended.length > 0 || this.#options.signal.aborted) return;
    }
  }

  async #add(batch: readonly { job: J; round: number; lastTry: boolean }[]): Promise<void> {
    const { run, store } = this.#engine;
    const entries = batch.map((one) => ({ ...one, id: queueId(run, one.round, one.job), seen: performance.now() }));
    for (const [service, mine] of Map.groupBy(entries, ({ job }) => serviceOf(job.stage))) {
      const queue = this.#engine.queues.of(service);
      for (const entry of mine) {
        this.#outstanding.set(entry.id, entry);
        queue.listen(entry.id, (news) => this.#hear(entry, news));
      }
      const given = await untilDone(() =>
        queue.add(mine.map(({ id, job, lastTry }) => ({ id, data: { run, store, job, lastTry } }))),
      );
      const wrong = mine.findIndex(({ id }, index) => given[index] !== id);
      if (wrong >= 0) {
        const detail = `the queue refused job ${mine[wrong].id} (it answered ${given[wrong]})`;
        throw new BasinloomError('INTERNAL', { detail });
      }
    }
  }

  #hear(entry: Outstanding<J>, news: JobNews): void {
    if (news.kind === 'waiting') {
      this.#options.onWaiting?.(entry.job, news.error);
      return;
    }
    if (!this.#outstanding.delete(entry.id)) return;
    this.#queueOf(entry).ignore(entry.id);
    this.#ended.push({ entry, news });
    this.#wake();
  }

  *#settle(): Generator<Settled<J>> {
    const ended = this.#ended;
    this.#ended = [];
    for (const { entry, news } of ended) {
      const { job } = entry;
      if (news.kind === 'done') yield { status: 'done', job, ...news.result };
      else if (news.kind === 'failed') {
        const error: ErrorRecord = decodeFailure(news.reason, job.id);
        if (error.code === 'WORKER_LOST' && !entry.lastTry) this.#suspects.push(entry);
        else yield { status: 'set-aside', job, error, attempts: entry.round + 1 };
      }
    }
  }

  /** Waits for news of some job, a stop, or the time to look. */
  async #news(): Promise<void> {
    if (this.#ended.length > 0 || this.#options.signal.aborted) return;
    await new Promise<void>((resolve) => {
      const timer = setTimeout(resolve, this.#engine.lookMs);
      this.#wake = () => {
        clearTimeout(timer);
        resolve();
      };
    });
  }

  /**
   * Looks up jobs that were long without news: an event may have been lost, or Redis its memory. What Redis does
   * not know is done if the store has its result, and is added again if not.
   */
  async #look(): Promise<void> {
    const now = performance.now();
    const silent = [...this.#outstanding.values()].filter(({ seen }) => now - seen >= this.#engine.lookMs);
    silent.sort((a, b) => a.seen - b.seen);
    for (let at = 0; at < silent.length; at += LOOK) {
      const slice = silent.slice(at, at + LOOK);
      const found = await Promise.all(
        slice.map(async (entry) => ({ entry, state: await this.#queueOf(entry).look(entry.id) })),
      );
      for (const { entry, state } of found) {
        entry.seen = now;
        if (typeof state === 'object') this.#hear(entry, state);
      }
      const lost = found.filter(({ state }) => state === 'unknown').map(({ entry }) => entry);
      await this.#restore(lost);
      if (lost.length === 0) break;
    }
    if (silent.length > 0 && silent.length === this.#outstanding.size) await this.#tellAlone(silent[0]);
  }

  /** Says once that nobody is there to do the jobs. */
  async #tellAlone(entry: Outstanding<J>): Promise<void> {
    const queue = this.#queueOf(entry);
    if (this.#toldAlone || (await queue.counts()).workers > 0) return;
    this.#toldAlone = true;
    const error = new BasinloomError('QUEUE_NO_WORKER', { queue: queue.name, service: serviceOf(entry.job.stage) });
    this.#options.onWaiting?.(entry.job, error.toRecord());
  }

  async #restore(lost: readonly Outstanding<J>[]): Promise<void> {
    const again: { job: J; round: number; lastTry: boolean }[] = [];
    for (const entry of lost) {
      if (await this.#options.isDone(entry.job)) {
        this.#hear(entry, { kind: 'done', result: { seconds: 0, attempts: 1 } });
      } else if (this.#outstanding.delete(entry.id)) {
        this.#queueOf(entry).ignore(entry.id);
        again.push({ job: entry.job, round: entry.round + 1, lastTry: entry.lastTry });
      }
    }
    for (let at = 0; at < again.length; at += BULK) await this.#add(again.slice(at, at + BULK));
  }

  /** Takes what no worker has in hand out of the queue. */
  async #withdraw(): Promise<void> {
    const left = [...this.#outstanding.values()];
    this.#outstanding.clear();
    for (const entry of left) this.#queueOf(entry).ignore(entry.id);
    await Promise.all(left.map((entry) => this.#queueOf(entry).withdraw(entry.id)));
  }

  #queueOf({ job }: Outstanding<J>): JobQueue {
    return this.#engine.queues.of(serviceOf(job.stage));
  }
}

/** Adding twice changes nothing, so a connection that broke in between only costs a repetition. */
async function untilDone<T>(work: () => Promise<T>): Promise<T> {
  for (let attempt = 1; ; attempt++) {
    try {
      return await work();
    } catch (error) {
      if (attempt >= 10) throw BasinloomError.from(error);
      await sleep(Math.min(100 * 2 ** attempt, 5000));
    }
  }
}
