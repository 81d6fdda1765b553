import { afterAll, afterEach, beforeAll, describe, expect, it } from 'vitest';
import { QueueBasin } from '../support/queue-basin.ts';
import { startRedis, type TestRedis } from '../support/redis.ts';
import { Topology } from '../support/topology.ts';

let basin: QueueBasin;
let redis: TestRedis;
let topology: Topology;

beforeAll(async () => {
  redis = await startRedis();
  basin = await QueueBasin.make('tiny');
});
afterEach(() => topology?.stop());
afterAll(async () => {
  await redis?.stop();
  await basin?.remove();
});

describe('a run on the queue', () => {
  it.each([1, 2, 4])('gives the same bytes on %i worker processes as the embedded engine', async (workers) => {
    topology = new Topology(redis.url);
    for (let k = 0; k < workers; k++) topology.start('worker');
    topology.start('mosaicker');
    await topology.ready();
    const { exitCode, stderr } = await basin.run(`queue-${workers}`, redis.url);
    expect(exitCode, stderr).toBe(0);
    await basin.expectSame(`queue-${workers}`);
    const done = topology.lines(({ msg, service }) => msg === 'done' && service === 'worker');
    const each = new Set(done.map(({ pid }) => pid)).size;
    console.log(`${workers} workers: ${done.length} tile jobs on ${each} processes, Redis from ${redis.from}`);
    expect(done.length).toBeGreaterThan(20);
    expect(each).toBe(workers);
  });
});
