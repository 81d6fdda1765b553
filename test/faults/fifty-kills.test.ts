import { describe, expect, it } from 'vitest';
import { apiOf, coordinatorEnvironment, type JobStatus, post, untilEnded } from '../support/api-client.ts';
import { countJobs } from '../support/job-counts.ts';
import { QueueFixture } from '../support/queue-fixture.ts';
import type { Role } from '../support/topology.ts';

const KILLS = 50;
const ROLES: readonly Role[] = ['worker', 'worker', 'mosaicker', 'coordinator'];

const queue = QueueFixture.of('small');

describe('fifty kills of workers, mosaicker and coordinator in one run', () => {
  it('change nothing: the run ends by itself with the same bytes, and no job is lost', async () => {
    const { basin } = queue;
    const topology = queue.topology(coordinatorEnvironment(basin));
    const services = ROLES.map((role) => topology.start(role));
    await topology.ready();
    const inputs = { basinFile: basin.basinFile, out: basin.out('killed'), set: { 'grid.tile': '128' } };
    const { jobID } = await post<JobStatus>(`${await apiOf(services[3])}/processes/basin-run/execution`, { inputs });
    const killed: Record<string, number> = {};
    // Random moments, spread over the work; a moment is told by what is in the store, not by a clock.
    for (let kill = 0; kill < KILLS; kill++) {
      await basin.reached('killed', ((kill + Math.random()) / KILLS) * 0.97);
      const victim = Math.floor(Math.random() * services.length);
      const role = ROLES[victim];
      killed[role] = (killed[role] ?? 0) + 1;
      await services[victim].kill();
      services[victim] = topology.start(role);
    }
    const status = await untilEnded(`${await apiOf(services[3])}/jobs/${jobID}`);
    const counts = countJobs(topology.lines(({ service }) => service === 'worker'));
    console.log(`${KILLS} kills ${JSON.stringify(killed)}: ${JSON.stringify(counts)}`);
    expect(status.status).toBe('successful');
    await basin.expectSame('killed');
    expect(counts.repeated).toBeLessThanOrEqual(killed.worker ?? 0);
  }, 600_000);
});
