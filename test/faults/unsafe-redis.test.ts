import { afterEach, describe, expect, it } from 'vitest';
import { checkRedis } from '../../shared/engine/bullmq/check-redis.ts';
import { startRedis, type TestRedis } from '../support/redis.ts';
import { runCli } from '../support/run-cli.ts';
import { ServiceProcess } from '../support/topology.ts';

let redis: TestRedis | undefined;
afterEach(() => redis?.stop());

describe('a Redis that is started wrong', () => {
  it.each([
    ['maxmemory-policy allkeys-lru', /noeviction/],
    ['appendonly no', /appendonly yes/],
  ])('is refused with the remedy: %s', async (line, remedy) => {
    redis = await startRedis([line]);
    await expect(checkRedis({ url: redis.url })).rejects.toMatchObject({ code: 'QUEUE_UNSAFE' });
    const worker = new ServiceProcess('worker', { environment: { BASINLOOM_REDIS_URL: redis.url } });
    const fatal = await worker.line(({ level }) => level === 60);
    expect(fatal).toMatchObject({ error: { code: 'QUEUE_UNSAFE', remedy: expect.stringMatching(remedy) } });
    expect(await worker.ended).toBe(78);
  });

  it('that does not answer is told to whoever runs a basin', async () => {
    const nobody = 'redis://127.0.0.1:1';
    await expect(checkRedis({ url: nobody })).rejects.toMatchObject({ code: 'QUEUE_UNREACHABLE' });
    const { exitCode, stderr } = await runCli('schedule', 'list', '--redis', nobody);
    expect(exitCode).toBe(75);
    expect(stderr).toMatch(/redis:\/\/127\.0\.0\.1:1: Redis does not answer: .*ECONNREFUSED/);
  });

  it('and a variable that is wrong are named', async () => {
    const worker = new ServiceProcess('worker', { environment: { BASINLOOM_THREADS: 'many' } });
    const fatal = await worker.line(({ level }) => level === 60);
    expect(fatal).toMatchObject({ error: { code: 'ENVIRONMENT', parameters: { name: expect.any(String) } } });
    expect(await worker.ended).toBe(78);
  });
});
