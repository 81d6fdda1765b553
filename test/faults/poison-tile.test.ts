import { readFile, rm, writeFile } from 'node:fs/promises';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { describe, expect, it } from 'vitest';
import { QueueFixture } from '../support/queue-fixture.ts';
import { runCli } from '../support/run-cli.ts';

const POISONED_MAIN = fileURLToPath(new URL('../support/poison/main.ts', import.meta.url));
const JOB = 'day/2025-06-14-r0001c0001';

const queue = QueueFixture.of('tiny');

describe('a tile whose job kills its worker', () => {
  it('is set aside; the rest is finished; `run --failed` makes good when the cause is gone', async () => {
    const { basin, redis } = queue;
    const topology = queue.topology();
    const poison = join(basin.folder, 'poison');
    await writeFile(poison, '');
    let running = true;
    let deaths = 0;
    const keepAlive = async () => {
      // Whoever runs the services starts a worker again when it dies.
      while (running) {
        const worker = topology.start('worker', { POISON_JOB: JOB, POISON_FILE: poison }, POISONED_MAIN);
        if ((await worker.ended) === 'SIGKILL' && running) deaths++;
      }
    };
    const alive = keepAlive();
    topology.start('mosaicker');
    const first = await basin.run('poisoned', redis.url);
    console.log(`${deaths} workers died on the tile`);
    expect(first.exitCode, first.stderr).toBe(3);
    expect(deaths).toBe(3);
    const { run, failures } = JSON.parse((await runCli('failures', basin.out('poisoned'), '--json')).stdout);
    expect(failures).toMatchObject([{ id: JOB, gap: true, error: { code: 'WORKER_LOST' } }]);
    expect(JSON.parse(await readFile(basin.out(`poisoned/runs/${run}/run.json`), 'utf8'))).toMatchObject({
      state: 'complete-with-gaps',
      leftOut: 1,
    });

    await rm(poison);
    const second = await basin.run('poisoned', redis.url, '--failed');
    expect(second.exitCode, second.stderr).toBe(0);
    await basin.expectSame('poisoned');
    const third = await basin.run('poisoned', redis.url, '--failed');
    expect(third).toMatchObject({ exitCode: 0 });
    expect(third.stderr).toMatch(/nothing failed/);
    running = false;
    await topology.stop();
    await alive;
  });
});
