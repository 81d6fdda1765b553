import { Redis } from 'ioredis';
import { pino } from 'pino';
import { afterAll, beforeAll, describe, expect, it, vi } from 'vitest';
import type { RunRecord } from '../../services/coordinator/run-record.ts';
import type { RunEntry, RunRequest, Runs } from '../../services/coordinator/runs.ts';
import { Schedules } from '../../services/coordinator/schedules.ts';
import { LocalStore } from '../../shared/store/local-store.ts';
import { startRedis, type TestRedis } from '../support/redis.ts';
import { temporaryFolder } from '../support/run-cli.ts';

let folder: string;
let remove: () => Promise<void>;
let redis: TestRedis;
beforeAll(async () => {
  [folder, remove] = await temporaryFolder();
  redis = await startRedis();
});
afterAll(async () => {
  await redis?.stop();
  await remove();
});

/** Runs that only remember what was started. */
function recorder(): Pick<Runs, 'start' | 'get'> & { readonly requests: RunRequest[]; state: RunRecord['state'] } {
  const requests: RunRequest[] = [];
  const entry = (id: string): Promise<RunEntry> =>
    Promise.resolve({ record: { id, state: runs.state } as RunRecord, request: requests[0], store: '' });
  const runs = {
    requests,
    state: 'complete' as RunRecord['state'],
    start(request: RunRequest) {
      requests.push(request);
      return entry(`run-${requests.length}`);
    },
    get: entry,
  };
  return runs;
}

const everySecond = { name: 'often', cron: '* * * * * *', period: 'last-month', basinFile: '/basin.yaml' } as const;
const firings = async (lines: readonly string[], count: number) =>
  vi.waitFor(
    () => expect(lines.filter((line) => /fired|has its run/.test(line)).length).toBeGreaterThanOrEqual(count),
    {
      timeout: 20_000,
    },
  );

describe('schedules', () => {
  it('start the run of a period once, however often they fire, and again when it failed', async () => {
    const home = new LocalStore(`${folder}/once`);
    const address = { url: redis.url };
    const schedules = new Schedules(home, address);
    await schedules.put(everySecond);
    const lines: string[] = [];
    const runs = recorder();
    const log = pino({ level: 'info' }, { write: (line: string) => void lines.push(line) });
    await schedules.serve(runs as unknown as Runs, log, address);
    await firings(lines, 3);
    expect(runs.requests).toHaveLength(1);
    expect(runs.requests[0]).toMatchObject({
      basinFile: '/basin.yaml',
      set: { 'period.from': expect.stringMatching(/^\d{4}-\d{2}-01$/) },
    });
    runs.state = 'failed';
    await vi.waitFor(() => expect(runs.requests.length).toBeGreaterThan(1), { timeout: 20_000 });
    await schedules.remove('often');
    expect(await schedules.list()).toEqual([]);
    await schedules.close();
  });

  it('come back from the home after Redis has forgotten them', async () => {
    const home = new LocalStore(`${folder}/back`);
    const address = { url: redis.url };
    const first = new Schedules(home, address);
    await first.put({ ...everySecond, name: 'monthly', cron: '0 6 3 * *' });
    await first.close();
    const client = new Redis(redis.url);
    await client.flushall();
    client.disconnect();
    const second = new Schedules(home, address);
    expect((await second.list())[0].next).toBeUndefined();
    await second.serve(recorder() as unknown as Runs, pino({ level: 'silent' }), address);
    expect((await second.list())[0]).toMatchObject({ name: 'monthly', next: expect.stringMatching(/-03T06:00:00/) });
    await second.remove('monthly');
    await second.close();
  });

  it('are refused with the reason when the cron fields are none', async () => {
    const schedules = new Schedules(new LocalStore(`${folder}/bad`), { url: redis.url });
    const refused = schedules.put({ ...everySecond, name: 'bad', cron: 'every day' });
    await expect(refused).rejects.toMatchObject({ code: 'SCHEDULE_INVALID' });
    await expect(schedules.remove('none')).rejects.toMatchObject({ code: 'SCHEDULE_INVALID' });
    expect(await schedules.list()).toEqual([]);
    await schedules.close();
  });
});
