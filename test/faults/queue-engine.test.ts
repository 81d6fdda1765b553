import { describe, expect, it } from 'vitest';
import { QueueFixture } from '../support/queue-fixture.ts';

const queue = QueueFixture.of('tiny');

describe('a run on the queue', () => {
  it.each([1, 2, 4])('gives the same bytes on %i worker processes as the embedded engine', async (workers) => {
    const { basin, redis } = queue;
    const topology = await queue.services(workers);
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
