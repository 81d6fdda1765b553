import { setTimeout as sleep } from 'node:timers/promises';
import { Redis } from 'ioredis';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { parseInfo } from '../../shared/engine/bullmq/check-redis.ts';
import { runNoop } from '../support/noop/run-noop.ts';
import { startRedis, type TestRedis } from '../support/redis.ts';

const JOBS = 100_000;
const MEGABYTE = 1 << 20;
const SLOW_US = 50_000;

let redis: TestRedis;
let client: Redis;
beforeAll(async () => {
  redis = await startRedis(['latency-tracking-info-percentiles 99.99', `slowlog-log-slower-than ${SLOW_US}`]);
  client = new Redis(redis.url);
});
afterAll(async () => {
  client?.disconnect();
  await redis?.stop();
});

describe('a hundred thousand jobs that do nothing', () => {
  it('leave Redis and the coordinator small, and never hold Redis up', async () => {
    await client.slowlog('RESET');
    let over = false;
    let slowestPing = 0;
    const pings = (async () => {
      while (!over) {
        const sent = performance.now();
        await client.ping();
        slowestPing = Math.max(slowestPing, performance.now() - sent);
        await sleep(10);
      }
    })();
    const { settled, different, residentBytes, seconds } = await runNoop(redis.url, JOBS, 16);
    over = true;
    await pings;
    const memory = parseInfo(await client.info('memory'));
    const redisPeak = Number(memory.get('used_memory_peak'));
    const slow = (await client.slowlog('LEN')) as number;
    const latencies = commandLatencies(await client.info('latencystats'));
    const megabytes = (bytes: number) => (bytes / MEGABYTE).toFixed(1);
    console.log(
      `${settled} jobs: Redis at most ${megabytes(redisPeak)} MB, coordinator ${megabytes(residentBytes)} MB, ` +
        `${(settled / seconds).toFixed(0)} jobs/s, slowest ping ${slowestPing.toFixed(0)} ms, ` +
        `commands over 50 ms: ${slow}, slowest kinds (p99.99, ms): ${worst(latencies)}; 1,000,000 would take ${((seconds / JOBS) * 1e6).toFixed(0)} s here`,
    );
    expect(settled).toBe(JOBS);
    expect(different).toBe(JOBS);
    expect(redisPeak).toBeLessThan(64 * MEGABYTE);
    expect(residentBytes).toBeLessThan(300 * MEGABYTE);
    // Redis times its commands by the clock on the wall: on a busy machine some wait for a processor.
    expect(latencies.size).toBeGreaterThan(5);
    for (const [command, microseconds] of latencies) expect(microseconds, command).toBeLessThan(SLOW_US);
  });
});

/** How long Redis was busy with one command, by kind: all but the slowest in ten thousand, us. */
function commandLatencies(info: string): Map<string, number> {
  const lines = [...parseInfo(info)].filter(([name]) => name.startsWith('latency_percentiles_usec_'));
  return new Map(
    lines.map(([name, value]) => [name.replace('latency_percentiles_usec_', ''), Number(value.split('=')[1])]),
  );
}

function worst(latencies: ReadonlyMap<string, number>): string {
  const slowest = [...latencies].sort(([, a], [, b]) => b - a).slice(0, 3);
  return slowest.map(([command, microseconds]) => `${command} ${(microseconds / 1000).toFixed(1)}`).join(', ');
}
