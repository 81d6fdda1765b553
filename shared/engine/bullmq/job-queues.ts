import { Queue, Job as QueueEntry, QueueEvents } from 'bullmq';
import type { ErrorRecord } from '../../contract/errors.ts';
import { connectionOptions, type RedisAddress } from './address.ts';
import { checkRedis } from './check-redis.ts';
import { JOB_OPTIONS, type JobResult, type QueuedJob } from './job-data.ts';
import { PREFIX, queueName, type ServiceName } from './naming.ts';

/** News of one job. Events may be lost: they wake the engine, they never count. */
export type JobNews =
  | { readonly kind: 'done'; readonly result: JobResult }
  | { readonly kind: 'failed'; readonly reason: string }
  | { readonly kind: 'waiting'; readonly error: ErrorRecord };

/** Most events that Redis keeps of a queue. */
const KEEP_EVENTS = 2000;

/** The producing side of one queue: adds jobs, and tells whoever asked what becomes of one. */
export class JobQueue {
  readonly name: string;
  readonly #queue: Queue<QueuedJob, JobResult>;
  readonly #events: QueueEvents;
  readonly #listeners = new Map<string, (news: JobNews) => void>();

  constructor(name: string, address: RedisAddress, onError: (error: Error) => void) {
    this.name = name;
    const connection = connectionOptions(address);
    this.#queue = new Queue(name, {
      connection,
      prefix: PREFIX,
      defaultJobOptions: JOB_OPTIONS,
      streams: { events: { maxLen: KEEP_EVENTS } },
    });
    this.#events = new QueueEvents(name, { connection, prefix: PREFIX });
    this.#queue.on('error', onError);
    this.#events.on('error', onError);
    this.#events.on('completed', ({ jobId, returnvalue }) =>
      this.#tell(jobId, { kind: 'done', result: returnvalue as unknown as JobResult }),
    );
    this.#events.on('failed', ({ jobId, failedReason }) => this.#tell(jobId, { kind: 'failed', reason: failedReason }));
    this.#events.on('progress', ({ jobId, data }) =>
      this.#tell(jobId, { kind: 'waiting', error: data as unknown as ErrorRecord }),
    );
  }

  async ready(): Promise<void> {
    await Promise.all([this.#queue.waitUntilReady(), this.#events.waitUntilReady()]);
  }

  listen(id: string, listener: (news: JobNews) => void): void {
    this.#listeners.set(id, listener);
  }

  ignore(id: string): void {
    this.#listeners.delete(id);
  }

  /**
   * Adds jobs; those whose id is in the queue already stay as they are.
   *
   * @returns the ids that the queue gave them
   */
  async add(jobs: readonly { readonly id: string; readonly data: QueuedJob }[]): Promise<(string | undefined)[]> {
    const entries = jobs.map(({ id, data }) => ({ name: data.job.stage, data, opts: { jobId: id } }));
    const added = await this.#queue.addBulk(entries);
    return added.map((entry) => entry.id);
  }

  /** How a job stands: its end, "pending", or "unknown" when Redis has no such job. */
  async look(id: string): Promise<JobNews | 'pending' | 'unknown'> {
    const entry = await QueueEntry.fromId<QueuedJob, JobResult>(this.#queue, id);
    if (!entry) return 'unknown';
    if (!entry.finishedOn) return 'pending';
    if (entry.returnvalue) return { kind: 'done', result: entry.returnvalue };
    return { kind: 'failed', reason: entry.failedReason ?? 'no reason given' };
  }

  /** Takes a job out of the queue, unless a worker has it in hand. */
  async withdraw(id: string): Promise<void> {
    await this.#queue.remove(id).catch(() => {});
  }

  /** Jobs that wait for a worker, or are with one. */
  async counts(): Promise<{ readonly waiting: number; readonly active: number; readonly workers: number }> {
    const { waiting, delayed, active } = await this.#queue.getJobCounts('waiting', 'delayed', 'active');
    return { waiting: waiting + delayed, active, workers: await this.#queue.getWorkersCount() };
  }

  async close(): Promise<void> {
    await Promise.allSettled([this.#events.close(), this.#queue.close()]);
  }

  #tell(id: string, news: JobNews): void {
    this.#listeners.get(id)?.(news);
  }
}

/** The queues of all services, on one Redis. */
export class JobQueues {
  readonly #queues: ReadonlyMap<ServiceName, JobQueue>;

  private constructor(queues: ReadonlyMap<ServiceName, JobQueue>) {
    this.#queues = queues;
  }

  /**
   * @param version of the software: jobs go to workers of the same version
   * @throws BasinloomError QUEUE_UNREACHABLE, QUEUE_UNSAFE
   */
  static async open(
    address: RedisAddress,
    version: string,
    onError: (error: Error) => void = () => {},
  ): Promise<JobQueues> {
    await checkRedis(address);
    const make = (service: ServiceName) =>
      [service, new JobQueue(queueName(service, version), address, onError)] as const;
    const queues = new Map([make('worker'), make('mosaicker')]);
    await Promise.all([...queues.values()].map((queue) => queue.ready()));
    return new JobQueues(queues);
  }

  of(service: ServiceName): JobQueue {
    return this.#queues.get(service) as JobQueue;
  }

  async close(): Promise<void> {
    await Promise.all([...this.#queues.values()].map((queue) => queue.close()));
  }
}
