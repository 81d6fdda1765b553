import { DelayedError, type Job as QueueEntry, UnrecoverableError, WaitingError, Worker } from 'bullmq';
import type { Logger } from 'pino';
import { BasinloomError, type ErrorRecord } from '../../contract/errors.ts';
import type { JobEnvelope, Stage } from '../../contract/jobs.ts';
import { openStore } from '../../store/open-store.ts';
import { mustWait, WAIT_MS } from '../retry.ts';
import type { JobRunner } from '../thread-pool.ts';
import { within } from '../within.ts';
import { connectionOptions, type RedisAddress } from './address.ts';
import { checkRedis } from './check-redis.ts';
import { encodeFailure, type JobResult, KEEP_DONE, KEEP_FAILED, MAX_STALLED, type QueuedJob } from './job-data.ts';
import { PREFIX, queueName, type ServiceName } from './naming.ts';

export type JobOutcome = 'done' | 'found' | 'failed' | 'waiting';

export interface JobConsumerOptions {
  readonly address: RedisAddress;
  readonly service: ServiceName;
  readonly version: string;
  /** Does the jobs; closed with the consumer. */
  readonly runner: JobRunner;
  /** Jobs at a time. */
  readonly concurrency: number;
  /** A worker silent for longer than this is taken for dead, and its jobs are given to others, ms. */
  readonly lockMs: number;
  readonly log: Logger;
  readonly onJob?: (stage: Stage, outcome: JobOutcome, seconds: number) => void;
  /** @defaultValue WAIT_MS */
  readonly waitMs?: number;
}

/**
 * Takes jobs of one service from the queue and has them done elsewhere (on threads): the queue is served by a
 * thread that computes nothing, so the lock of a job is renewed however long the job takes.
 */
export class JobConsumer {
  readonly #options: JobConsumerOptions;
  readonly #worker: Worker<QueuedJob, JobResult>;
  #busy = 0;
  #closing = false;
  #leaving = false;
  #connected = false;

  private constructor(options: JobConsumerOptions) {
    const { address, service, version, concurrency, lockMs, log } = options;
    this.#options = options;
    this.#worker = new Worker(queueName(service, version), (entry, token) => this.#take(entry, token), {
      connection: connectionOptions(address),
      prefix: PREFIX,
      concurrency,
      lockDuration: lockMs,
      stalledInterval: Math.ceil(lockMs / 2),
      maxStalledCount: MAX_STALLED,
      removeOnComplete: KEEP_DONE,
      removeOnFail: KEEP_FAILED,
    });
    this.#worker.on('error', (error) => {
      this.#connected = false;
      log.warn({ error: error.message }, 'queue');
    });
    this.#worker.on('ready', () => {
      this.#connected = true;
    });
    this.#worker.on('stalled', (job) => log.warn({ job }, 'the worker of a job died; the job is given out again'));
  }

  /** @throws BasinloomError QUEUE_UNREACHABLE, QUEUE_UNSAFE */
  static async start(options: JobConsumerOptions): Promise<JobConsumer> {
    await checkRedis(options.address);
    const consumer = new JobConsumer(options);
    await consumer.#worker.waitUntilReady();
    consumer.#connected = true;
    return consumer;
  }

  /** True while the service takes jobs: Redis answers and nobody asked it to stop. */
  get isReady(): boolean {
    return this.#connected && !this.#closing;
  }

  /** Jobs in hand. */
  get busy(): number {
    return this.#busy;
  }

  /**
   * Takes no further job, lets those in hand finish for a while, then hands them back.
   *
   * @param deadlineMs how long to wait for the jobs in hand
   */
  async close(deadlineMs: number): Promise<void> {
    this.#closing = true;
    const closed = this.#worker.close();
    if (!(await within(closed, deadlineMs))) {
      this.#leaving = true;
      this.#options.log.warn('jobs in hand are given back');
      await this.#options.runner.close();
    }
    await closed;
    await this.#options.runner.close();
  }

  async #take(entry: QueueEntry<QueuedJob, JobResult>, token: string | undefined): Promise<JobResult> {
    const { run, store, job, lastTry } = entry.data;
    const attempt = entry.attemptsMade + 1;
    // Bound to each line by hand: a logger of its own for every job costs more than the line.
    const bound = { run, stage: job.stage, job: job.id, ...('tile' in job && { tile: job.tile }), attempt };
    const { log } = this.#options;
    const started = performance.now();
    const seconds = () => (performance.now() - started) / 1000;
    const report = (outcome: JobOutcome) => this.#options.onJob?.(job.stage, outcome, seconds());
    if (lastTry && entry.stalledCounter > 0) {
      const lost = new BasinloomError('WORKER_LOST', { job: job.id, detail: 'every worker that took it died' });
      throw new UnrecoverableError(encodeFailure(lost.toRecord()));
    }
    // A worker may have died between its last write and its answer.
    if (
      entry.attemptsStarted > 1 &&
      this.#options.service === 'worker' &&
      (await openStore(store).has(job.outputKey))
    ) {
      log.info(bound, 'found done');
      report('found');
      return { seconds: seconds(), attempts: attempt };
    }
    log.debug(bound, 'started');
    const error = await this.#do({ run, store, job });
    if (!error) {
      log.info({ ...bound, seconds: seconds() }, 'done');
      report('done');
      return { seconds: seconds(), attempts: attempt };
    }
    if (this.#leaving) {
      await entry.moveToWait(token);
      throw new WaitingError();
    }
    if (mustWait(error)) {
      log.error({ ...bound, error }, 'waits');
      report('waiting');
      await entry.updateProgress({ ...error });
      await entry.moveToDelayed(Date.now() + (this.#options.waitMs ?? WAIT_MS), token);
      throw new DelayedError();
    }
    log.warn({ ...bound, error }, error.retryable ? 'failed; may be tried again' : 'failed');
    report('failed');
    throw error.retryable ? new Error(encodeFailure(error)) : new UnrecoverableError(encodeFailure(error));
  }

  async #do(envelope: JobEnvelope): Promise<ErrorRecord | null> {
    this.#busy++;
    try {
      return await this.#options.runner.run(envelope);
    } finally {
      this.#busy--;
    }
  }
}
