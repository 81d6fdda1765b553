import { describe, expect, it } from 'vitest';
import { countJobs } from '../support/job-counts.ts';
import { QueueFixture } from '../support/queue-fixture.ts';
import type { ServiceProcess } from '../support/topology.ts';

const queue = QueueFixture.of('tiny');

const health = async (service: ServiceProcess, path: string) => {
  const { healthPort } = await service.line(({ msg }) => msg === 'ready');
  const response = await fetch(`http://127.0.0.1:${healthPort}${path}`);
  return { status: response.status, text: await response.text() };
};

describe('a worker that is asked to stop', () => {
  it('finishes the job in hand, takes no other, and leaves nobody waiting', async () => {
    const { basin, redis } = queue;
    const topology = queue.topology();
    const worker = topology.start('worker');
    topology.start('mosaicker');
    await topology.ready();
    const { ended } = basin.start('stopped', redis.url);
    const { job, stage } = await worker.line(({ msg }) => msg === 'started');
    expect(await worker.stop()).toBe(0);
    expect(worker.lines.at(-1)?.msg).toBe('stopped');
    expect(worker.lines.filter((line) => line.msg === 'done' && line.job === job && line.stage === stage)).toHaveLength(
      1,
    );
    topology.start('worker');
    const { exitCode, stderr } = await ended;
    expect(exitCode, stderr).toBe(0);
    expect(countJobs(topology.lines(({ service }) => service === 'worker')).repeated).toBe(0);
    await basin.expectSame('stopped');
  });

  it('gives back at its deadline what it cannot finish', async () => {
    const { basin, redis } = queue;
    const topology = queue.topology({ BASINLOOM_LOCK_SECONDS: '600' });
    const hasty = topology.start('worker', { BASINLOOM_STOP_SECONDS: '0' });
    topology.start('mosaicker');
    await topology.ready();
    const { ended } = basin.start('hasty', redis.url);
    await hasty.line(({ msg, stage }) => msg === 'started' && stage === 'prepare');
    expect(await hasty.stop()).toBe(0);
    topology.start('worker');
    const { exitCode, stderr } = await ended;
    expect(exitCode, stderr).toBe(0);
    // The lock would have held for ten minutes: the job was given back, not lost and found.
    const counts = countJobs(topology.lines(({ service }) => service === 'worker'));
    console.log(`given back at the deadline: ${JSON.stringify(counts)}`);
    await basin.expectSame('hasty');
  });
});

describe('the health of a service', () => {
  it('is told to whoever watches it', async () => {
    const { basin, redis } = queue;
    const topology = queue.topology();
    const worker = topology.start('worker');
    topology.start('mosaicker');
    await topology.ready();
    expect(await health(worker, '/livez')).toMatchObject({ status: 200 });
    expect(await health(worker, '/readyz')).toMatchObject({ status: 200 });
    expect((await health(worker, '/elsewhere')).status).toBe(404);
    const { exitCode, stderr } = await basin.run('watched', redis.url);
    expect(exitCode, stderr).toBe(0);
    const { text } = await health(worker, '/metrics');
    // Prometheus: counters end in _total, times are in seconds (its naming practices).
    const [, count] = /^basinloom_jobs_total\{stage="flux",outcome="done",service="worker"\} (\d+)$/m.exec(text) ?? [];
    const done = worker.lines.filter(({ msg, stage }) => msg === 'done' && stage === 'flux').length;
    expect(done).toBeGreaterThan(5);
    expect(Number(count)).toBe(done);
    expect(text).toMatch(/^basinloom_job_duration_seconds_count\{service="worker",stage="flux"\} \d+$/m);
    expect(text).toMatch(/^basinloom_jobs_in_hand\{service="worker"\} 0$/m);
  });
});
