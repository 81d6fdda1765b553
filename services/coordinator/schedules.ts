import { Queue, type Job as QueueEntry, Worker } from 'bullmq';
import type { Logger } from 'pino';
import { BasinloomError } from '../../shared/contract/errors.ts';
import { connectionOptions, type RedisAddress } from '../../shared/engine/bullmq/address.ts';
import { PREFIX } from '../../shared/engine/bullmq/naming.ts';
import { findJson } from '../../shared/store/artefact-reader.ts';
import type { Store } from '../../shared/store/store.ts';
import type { RunState } from './run-record.ts';
import type { Runs } from './runs.ts';
import { type Schedule, scheduledPeriod, scheduleSchema } from './schedule.ts';

const QUEUE = 'schedules';
/** A store may be busy with another run when a schedule fires: it is tried again for some hours. */
const RETRY = { attempts: 30, backoff: { type: 'fixed', delay: 10 * 60_000 } } as const;
/** A run in one of these states counts as the run of its period. */
const STANDS: ReadonlySet<RunState> = new Set<RunState>(['running', 'complete', 'complete-with-gaps']);

export interface ListedSchedule extends Schedule {
  /** When it fires next, ISO 8601 UTC; absent while Redis does not know it. */
  readonly next?: string;
}

interface Firing {
  readonly schedule: string;
}

/** Regular runs. The home of the coordinator is the record; Redis is only the clock. */
export class Schedules {
  readonly #home: Store;
  readonly #queue: Queue<Firing>;
  #worker: Worker<Firing> | undefined;

  constructor(home: Store, address: RedisAddress, onError: (error: Error) => void = () => {}) {
    this.#home = home;
    this.#queue = new Queue(QUEUE, { connection: connectionOptions(address), prefix: PREFIX });
    this.#queue.on('error', onError);
  }

  /** Adds a schedule or changes the one of that name. @throws BasinloomError SCHEDULE_INVALID */
  async put(schedule: Schedule): Promise<void> {
    const parsed = scheduleSchema.safeParse(schedule);
    if (!parsed.success) {
      const [{ path, message }] = parsed.error.issues;
      throw new BasinloomError('SCHEDULE_INVALID', { name: schedule.name, detail: `${path.join('.')}: ${message}` });
    }
    await this.#tick(parsed.data);
    await this.#home.put(key(schedule.name), Buffer.from(`${JSON.stringify(parsed.data, null, 2)}\n`));
  }

  /** @throws BasinloomError SCHEDULE_INVALID when there is none of that name */
  async remove(name: string): Promise<void> {
    const known = (await this.#all()).some((schedule) => schedule.name === name);
    if (!known) throw new BasinloomError('SCHEDULE_INVALID', { name, detail: 'there is no such schedule' });
    await this.#home.delete(key(name));
    await this.#queue.removeJobScheduler(name);
  }

  async list(): Promise<ListedSchedule[]> {
    const next = new Map((await this.#queue.getJobSchedulers()).map(({ key: name, next: at }) => [name, at]));
    return (await this.#all()).map((schedule) => {
      const at = next.get(schedule.name);
      return { ...schedule, ...(at && { next: new Date(at).toISOString() }) };
    });
  }

  /** Makes Redis tick for what the home says, and starts runs when it does. */
  async serve(runs: Runs, log: Logger, address: RedisAddress): Promise<void> {
    const all = await this.#all();
    for (const schedule of all) await this.#tick(schedule);
    for (const { key: name } of await this.#queue.getJobSchedulers()) {
      if (!all.some((schedule) => schedule.name === name)) await this.#queue.removeJobScheduler(name);
    }
    this.#worker = new Worker<Firing>(QUEUE, (entry) => this.#fire(entry, runs, log), {
      connection: connectionOptions(address),
      prefix: PREFIX,
      removeOnComplete: { count: 100 },
      removeOnFail: { count: 100 },
    });
    this.#worker.on('error', (error) => log.warn({ error: error.message }, 'queue'));
    this.#worker.on('failed', (entry, error) => log.error({ schedule: entry?.data.schedule }, error.message));
    await this.#worker.waitUntilReady();
  }

  async close(): Promise<void> {
    await this.#worker?.close();
    await this.#queue.close();
  }

  /** Starts the run of a period, unless it was: a firing may come twice, or late. */
  async #fire(entry: QueueEntry<Firing>, runs: Runs, log: Logger): Promise<void> {
    const name = entry.data.schedule;
    const schedule = (await this.#all()).find((candidate) => candidate.name === name);
    if (!schedule) return;
    const moment = new Date(entry.opts.prevMillis ?? entry.timestamp).toISOString();
    const period = scheduledPeriod(schedule.period, moment.slice(0, 10));
    const mark = `fired/${name}/${period.id}.json`;
    const earlier = await findJson<{ readonly run: string }>(this.#home, mark);
    if (earlier) {
      const { run } = earlier;
      const { record } = await runs.get(run);
      if (STANDS.has(record.state)) {
        log.info({ schedule: name, period: period.id, run }, 'the period has its run');
        return;
      }
    }
    const { basinFile, set, out } = schedule;
    const { record } = await runs.start({
      basinFile,
      set: { ...set, ...period.set },
      ...(out !== undefined && { out }),
    });
    await this.#home.put(mark, Buffer.from(JSON.stringify({ run: record.id, fired: moment })));
    log.info({ schedule: name, period: period.id, run: record.id }, 'schedule fired');
  }

  async #tick({ name, cron }: Schedule): Promise<void> {
    try {
      const data: Firing = { schedule: name };
      await this.#queue.upsertJobScheduler(name, { pattern: cron, tz: 'UTC' }, { name: 'fire', data, opts: RETRY });
    } catch (error) {
      const detail = `cron "${cron}": ${(error as Error).message}`;
      throw new BasinloomError('SCHEDULE_INVALID', { name, detail }, { cause: error });
    }
  }

  async #all(): Promise<Schedule[]> {
    const all = await Promise.all((await this.#home.list('schedules/')).map((file) => findJson(this.#home, file)));
    return all.flatMap((found) => (found ? [scheduleSchema.parse(found)] : []));
  }
}

const key = (name: string) => `schedules/${name}.json`;
