import { Redis } from 'ioredis';
import { describe, expect, it } from 'vitest';
import { countJobs } from '../support/job-counts.ts';
import { QueueFixture } from '../support/queue-fixture.ts';

const queue = QueueFixture.of('tiny');

describe('Redis in the middle of a run', () => {
  it('may be killed and started again three times', async ({ skip }) => {
    const { basin, redis } = queue;
    if (!redis.canKill) skip('the Redis of the tests is not ours to kill');
    const topology = await queue.services(2);
    const { ended } = basin.start('restarted', redis.url);
    let over = false;
    void ended.then(() => {
      over = true;
    });
    let kills = 0;
    for (const share of [0.2, 0.45, 0.7]) {
      await basin.reached('restarted', share + Math.random() * 0.15, () => over);
      if (over) break;
      await redis.kill();
      kills++;
      await redis.start();
    }
    const { exitCode, stderr } = await ended;
    const counts = countJobs(topology.lines(({ service }) => service === 'worker'));
    console.log(`Redis killed ${kills} times: ${JSON.stringify(counts)}`);
    expect(exitCode, stderr).toBe(0);
    expect(kills).toBe(3);
    await basin.expectSame('restarted');
  });

  it('may forget everything: the coordinator queues again what the store lacks', async () => {
    const { basin, redis } = queue;
    const topology = await queue.services(2);
    const { ended } = basin.start('emptied', redis.url);
    await basin.reached('emptied', 0.4);
    const client = new Redis(redis.url);
    const before = await client.dbsize();
    await client.flushall();
    client.disconnect();
    const { exitCode, stderr } = await ended;
    const counts = countJobs(topology.lines(({ service }) => service === 'worker'));
    console.log(`Redis emptied of ${before} keys: ${JSON.stringify(counts)}`);
    expect(exitCode, stderr).toBe(0);
    expect(before).toBeGreaterThan(0);
    await basin.expectSame('emptied');
  });
});
