import { describe, expect, it } from 'vitest';
import { countJobs } from '../support/job-counts.ts';
import { QueueFixture } from '../support/queue-fixture.ts';
import type { LogLine } from '../support/topology.ts';

const queue = QueueFixture.of('tiny');

describe('a worker that is frozen past its lock and then goes on', () => {
  it('leaves no double and no torn artefact', async () => {
    const { basin, redis } = queue;
    const topology = queue.topology();
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
