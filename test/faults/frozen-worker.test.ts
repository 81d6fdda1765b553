import { afterAll, afterEach, beforeAll, describe, expect, it } from 'vitest';
import { countJobs } from '../support/job-counts.ts';
import { QueueBasin } from '../support/queue-basin.ts';
import { startRedis, type TestRedis } from '../support/redis.ts';
import { type LogLine, Topology } from '../support/topology.ts';

let basin: QueueBasin;
let redis: TestRedis;
let topology: Topology;

beforeAll(async () => {
  redis = await startRedis();
  basin = await QueueBasin.make('tiny');
  topology = new Topology(redis.url);
});
afterEach(() => topology.stop());
afterAll(async () => {
  await redis?.stop();
  await basin?.remove();
});

describe('a worker that is frozen past its lock and then goes on', () => {
  it('leaves no double and no torn artefact', async () => {
    const frozen = topology.start('worker');
    topology.start('mosaicker');
    await topology.ready();
    const { ended } = basin.start('frozen', redis.url);
    // In the middle of a job: started, and not yet done.
    const job = await frozen.line(({ msg, stage }) => msg === 'started' && stage === 'flux');
    frozen.signal('SIGSTOP');
    const other = topology.start('worker');
    const same = (line: LogLine) => line.stage === job.stage && line.job === job.job;
    await other.line((line) => same(line) && (line.msg === 'done' || line.msg === 'found done'));
    frozen.signal('SIGCONT');
    const { exitCode, stderr } = await ended;
    expect(exitCode, stderr).toBe(0);
    const counts = countJobs(topology.lines(({ service }) => service === 'worker'));
    console.log(`frozen in ${job.stage}/${job.job}: ${JSON.stringify(counts)}`);
    await basin.expectSame('frozen');
    expect(counts.repeated + counts.found).toBeGreaterThanOrEqual(1);
  });
});
