import { chown, readdir } from 'node:fs/promises';
import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { QueueBasin } from '../support/queue-basin.ts';
import { ComposeServices, type ServiceContainer } from './compose-services.ts';
import { findEngine } from './engine.ts';
import { startRun } from './start-run.ts';

const engine = await findEngine();
const skipped = typeof engine === 'string' ? ` (skipped: ${engine})` : '';

/** Hands a folder and all that is in it to the user of the containers. */
async function giveAway(folder: string): Promise<void> {
  if (process.getuid?.() !== 0) return;
  const below = await readdir(folder, { recursive: true });
  for (const path of ['', ...below]) await chown(join(folder, path), 1000, 1000);
}

describe.skipIf(typeof engine === 'string')(`docker-compose.yml on a Docker engine${skipped}`, () => {
  let basin: QueueBasin;
  let services: ComposeServices;
  const workers = () => services.containers('worker');
  /** Jobs that a container has done, by its log. */
  const done = async (container: ServiceContainer) => (await container.log()).split('"msg":"done"').length - 1;

  beforeAll(async () => {
    basin = await QueueBasin.make('tiny');
    await giveAway(basin.folder);
    if (typeof engine !== 'string') services = await ComposeServices.up(engine, basin.folder);
  });
  afterAll(async () => {
    await services?.down();
    await basin?.remove();
  });

  it('comes up healthy, every service once and two workers, none as root', async () => {
    const all = await services.containers();
    expect(all.map(({ service }) => service).sort()).toEqual(['coordinator', 'mosaicker', 'redis', 'worker', 'worker']);
    for (const container of all) {
      const { State, Config, HostConfig } = await container.inspect();
      expect([container.service, State.Health?.Status]).toEqual([container.service, 'healthy']);
      expect(Config.User).toBe(container.service === 'redis' ? 'redis' : '1000:1000');
      expect(HostConfig.ReadonlyRootfs).toBe(true);
      expect(HostConfig.Memory).toBeGreaterThan(0);
      expect(HostConfig.NanoCpus).toBeGreaterThan(0);
    }
  });

  it('starts no run without the token', async () => {
    const answer = await fetch(new URL('/processes/basin-run/execution', await services.url()), {
      method: 'POST',
      headers: { authorization: 'Bearer of-something-else', 'content-type': 'application/json' },
      body: JSON.stringify({ inputs: { basinFile: '/data/basin.yaml' } }),
    });
    expect(answer.status).toBe(401);
  });

  it('makes the very files that one machine makes', async () => {
    const run = await startRun(services, 'whole');
    await run.ended;
    await basin.expectSame('whole');
    for (const container of [...(await workers()), ...(await services.containers('mosaicker'))]) {
      expect(await done(container), container.service).toBeGreaterThan(0);
    }
  });

  it('ends a run although a worker is killed in the middle of it', async () => {
    const [victim, survivor] = await workers();
    const before = await Promise.all([done(victim), done(survivor)]);
    const run = await startRun(services, 'killed');
    await basin.reached('killed', 0.3, () => run.isOver);
    await victim.kill();
    expect(await basin.artefacts('killed')).toBeLessThan(basin.artefactCount);
    expect(run.isOver).toBe(false);
    await run.ended;
    await basin.expectSame('killed');
    expect(await done(victim)).toBeGreaterThan(before[0]);
    expect(await done(survivor)).toBeGreaterThan(before[1]);
    expect(await victim.state()).toEqual({ running: false, exitCode: 137 });
    await victim.start();
  });

  it('ends a run although a worker is stopped in the middle of it, which ends well within its grace', async () => {
    const [first] = await workers();
    const run = await startRun(services, 'stopped');
    await basin.reached('stopped', 0.3, () => run.isOver);
    expect(await first.stop()).toBe(0);
    expect(await first.log()).toContain('"msg":"stopped"');
    await run.ended;
    await basin.expectSame('stopped');
  });

  it('takes a run up again when the coordinator was killed in the middle of it', async () => {
    const [coordinator] = await services.containers('coordinator');
    const run = await startRun(services, 'taken-up');
    await basin.reached('taken-up', 0.3, () => run.isOver);
    await coordinator.kill();
    expect(await basin.artefacts('taken-up')).toBeLessThan(basin.artefactCount);
    expect(run.isOver).toBe(false);
    await coordinator.start();
    await run.ended;
    await basin.expectSame('taken-up');
  });

  it('stops every service on SIGTERM with exit code 0', async () => {
    const running = [];
    for (const container of await services.containers()) {
      if ((await container.state()).running) running.push(container);
    }
    expect(running.length).toBe(4);
    // Redis last: the others ask it.
    for (const container of running.sort((a, b) => Number(a.service === 'redis') - Number(b.service === 'redis'))) {
      expect([container.service, await container.stop()]).toEqual([container.service, 0]);
    }
  });
});
