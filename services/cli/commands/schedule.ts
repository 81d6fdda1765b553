import { resolve } from 'node:path';
import { BasinloomError } from '../../../shared/contract/errors.ts';
import { EXIT } from '../../../shared/contract/exit-codes.ts';
import { redisAddress } from '../../../shared/engine/bullmq/address.ts';
import { checkRedis } from '../../../shared/engine/bullmq/check-redis.ts';
import { openStore } from '../../../shared/store/open-store.ts';
import { loadBasin } from '../../coordinator/load-basin.ts';
import type { SchedulePeriod } from '../../coordinator/schedule.ts';
import { Schedules } from '../../coordinator/schedules.ts';

interface ScheduleOptions {
  readonly home?: string;
  readonly redis?: string;
}

/** `basinloom schedule add`. */
export async function addSchedule(
  name: string,
  file: string,
  options: ScheduleOptions & {
    readonly cron: string;
    readonly period: SchedulePeriod;
    readonly set: Readonly<Record<string, string>>;
    readonly out?: string;
  },
): Promise<number> {
  // A basin file that is wrong is told now, not in the night.
  await loadBasin(file, options);
  return withSchedules(options, async (schedules) => {
    await schedules.put({
      name,
      cron: options.cron,
      period: options.period,
      basinFile: resolve(file),
      ...(Object.keys(options.set).length > 0 && { set: options.set }),
      ...(options.out !== undefined && { out: options.out }),
    });
    const added = (await schedules.list()).find((schedule) => schedule.name === name);
    process.stdout.write(`${name}: fires next ${added?.next ?? 'when Redis is back'}\n`);
  });
}

/** `basinloom schedule list`. */
export async function listSchedules(options: ScheduleOptions & { readonly json?: boolean }): Promise<number> {
  return withSchedules(options, async (schedules) => {
    const all = await schedules.list();
    const lines = all.map(
      ({ name, cron, period, basinFile, next }) =>
        `${name}  "${cron}"  ${period}  ${basinFile}  next ${next ?? 'unknown'}`,
    );
    if (options.json) process.stdout.write(`${JSON.stringify(all, null, 2)}\n`);
    else process.stdout.write(lines.length > 0 ? `${lines.join('\n')}\n` : 'no schedule\n');
  });
}

/** `basinloom schedule remove`. */
export async function removeSchedule(name: string, options: ScheduleOptions): Promise<number> {
  return withSchedules(options, async (schedules) => {
    await schedules.remove(name);
    process.stdout.write(`${name}: removed\n`);
  });
}

async function withSchedules(
  { home, redis }: ScheduleOptions,
  work: (schedules: Schedules) => Promise<void>,
): Promise<number> {
  const url = redis ?? process.env.BASINLOOM_REDIS_URL;
  if (!url) throw new BasinloomError('ENVIRONMENT', { name: 'BASINLOOM_REDIS_URL', detail: 'it is not set' });
  const address = redisAddress(url, process.env);
  await checkRedis(address);
  const schedules = new Schedules(openStore(home ?? process.env.BASINLOOM_HOME ?? './coordinator'), address);
  try {
    await work(schedules);
  } finally {
    await schedules.close();
  }
  return EXIT.ok;
}
