import { runBare, runNoop } from '../support/noop/run-noop.ts';
import { startRedis } from '../support/redis.ts';
import { type BenchResult, median } from './result.ts';

const JOBS = 20_000;
const CONCURRENCY = 16;
const ROUNDS = 3;

/** Jobs that do nothing through the engine, against the same jobs through a bare queue. */
export async function queueBench(): Promise<BenchResult> {
  const redis = await startRedis().catch(() => null);
  if (!redis) return { ratios: {}, notes: ['queue: no Redis, not measured'] };
  try {
    const ours: number[] = [];
    const bare: number[] = [];
    for (let round = 0; round < ROUNDS; round++) {
      ours.push((await runNoop(redis.url, JOBS, CONCURRENCY)).seconds);
      bare.push((await runBare(redis.url, JOBS, CONCURRENCY)).seconds);
    }
    const rate = (seconds: readonly number[]) => JOBS / median(seconds);
    return {
      ratios: { 'queue.bare': rate(ours) / rate(bare) },
      notes: [
        `queue: ${JOBS} jobs that do nothing, ${CONCURRENCY} at a time, one worker process; median of ${ROUNDS}: ` +
          `${rate(ours).toFixed(0)} jobs/s through the engine, ${rate(bare).toFixed(0)} through a bare queue`,
      ],
    };
  } finally {
    await redis.stop();
  }
}
