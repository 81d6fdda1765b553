import { fileURLToPath } from 'node:url';
import { afterAll, describe, expect, it } from 'vitest';
import type { Job, Settled } from '../../../shared/contract/jobs.ts';
import { EmbeddedEngine } from '../../../shared/engine/embedded-engine.ts';

const engines: EmbeddedEngine[] = [];
function engine(threads = 1): EmbeddedEngine {
  const made = new EmbeddedEngine({
    threads,
    threadFile: () => fileURLToPath(new URL('./fixture-thread.ts', import.meta.url)),
    run: 'r',
    store: 's',
    backoffMs: 1,
  });
  engines.push(made);
  return made;
}
afterAll(() => Promise.all(engines.map((made) => made.close())));

const job = (id: string) => ({ stage: 'terrain', id, planKey: 'p', outputKey: id, tile: 0 }) as Job;
async function collect(jobs: AsyncIterable<Settled>): Promise<Settled[]> {
  const all: Settled[] = [];
  for await (const settled of jobs) all.push(settled);
  return all;
}
const options = { signal: new AbortController().signal, isDone: () => Promise.resolve(false) };

describe('embedded engine', () => {
  it('settles every job once, whatever becomes of the others', async () => {
    const jobs = ['ok-1', 'bad-1', 'ok-2', 'bad-2', 'ok-3'].map(job);
    const settled = await collect(engine(2).run(jobs, options));
    expect(settled.map(({ job: { id } }) => id).sort()).toEqual(['bad-1', 'bad-2', 'ok-1', 'ok-2', 'ok-3']);
    const aside = settled.filter(({ status }) => status === 'set-aside');
    expect(aside).toHaveLength(2);
    expect(aside[0]).toMatchObject({ attempts: 1, error: { code: 'RASTER_TRUNCATED', retryable: false } });
  });

  it('tries an error that can pass again', async () => {
    const [settled] = await collect(engine().run([job('flaky-1')], options));
    expect(settled).toMatchObject({ status: 'done', attempts: 3 });
  });

  it('sets aside a job whose thread keeps dying, and finishes the rest', async () => {
    const settled = await collect(engine().run(['crash-1', 'ok-1', 'ok-2'].map(job), options));
    const byId = new Map(settled.map((entry) => [entry.job.id, entry]));
    expect(byId.get('crash-1')).toMatchObject({ status: 'set-aside', attempts: 3, error: { code: 'WORKER_LOST' } });
    expect(byId.get('ok-1')?.status).toBe('done');
    expect(byId.get('ok-2')?.status).toBe('done');
  });

  it('never holds more jobs than its window', async () => {
    let taken = 0;
    let settledCount = 0;
    let most = 0;
    function* jobs() {
      for (let k = 0; k < 40; k++) {
        taken++;
        most = Math.max(most, taken - settledCount);
        yield job(`ok-${k}`);
      }
    }
    for await (const _ of engine(2).run(jobs(), options)) settledCount++;
    expect(settledCount).toBe(40);
    expect(most).toBeLessThanOrEqual(5);
  });

  it('stops taking jobs when asked to, finishes those in hand, and says so', async () => {
    const controller = new AbortController();
    const all = Array.from({ length: 50 }, (_, k) => job(`ok-${k}`));
    const settled: Settled[] = [];
    await expect(async () => {
      for await (const entry of engine().run(all, { ...options, signal: controller.signal })) {
        settled.push(entry);
        if (settled.length === 3) controller.abort();
      }
    }).rejects.toMatchObject({ code: 'CANCELLED' });
    expect(settled.length).toBeLessThan(10);
    expect(settled.every(({ status }) => status === 'done')).toBe(true);
  });
});
