import { readFile } from 'node:fs/promises';
import { join } from 'node:path';
import { setTimeout as sleep } from 'node:timers/promises';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { writeDemo } from '../../infra/demo/write-demo.ts';
import { filesBelow, hashesBelow } from '../support/products.ts';
import { runCli, startCli, temporaryFolder } from '../support/run-cli.ts';

let folder: string;
let remove: () => Promise<void>;
const published = (path: string) => /^(products|tables)\/|^report\.html$/.test(path);
const arguments_ = (name: string) => [
  'run',
  join(folder, 'basin.yaml'),
  '--out',
  join(folder, name),
  '--set',
  'grid.tile=128',
  '--threads',
  '2',
];

/** Files among a run's artefacts so far. */
const artefacts = (name: string) =>
  filesBelow(join(folder, name, 'artefacts')).then(
    (all) => all.length,
    () => 0,
  );

interface Counts {
  readonly total: number;
  readonly done: number;
  readonly kept: number;
  readonly setAside: number;
}

/** Counts of every stage of the latest run. */
async function counts(name: string): Promise<Record<string, Counts>> {
  const { stdout } = await runCli('status', join(folder, name), '--json');
  return (JSON.parse(stdout) as { stages: Record<string, Counts> }).stages;
}

beforeAll(async () => {
  [folder, remove] = await temporaryFolder();
  await writeDemo(folder, { seed: 12, size: 'small' });
  const { exitCode, stderr } = await runCli(...arguments_('whole'));
  expect(exitCode, stderr).toBe(0);
});
afterAll(() => remove());

describe('a run that is killed', () => {
  it('ends with identical files after five kills at random moments, and leaves nothing half-written', async () => {
    const total = await artefacts('whole');
    let kills = 0;
    // Random moments, one in each fifth of the work; a moment is told by what is in the store, not by a clock.
    for (let fifth = 0; fifth < 5; fifth++) {
      const moment = total * ((fifth + Math.random()) / 5) * 0.98;
      const { child, ended } = startCli(arguments_('killed'));
      let running = true;
      void ended.then(() => {
        running = false;
      });
      while (running && (await artefacts('killed')) < moment) await sleep(5);
      child.kill('SIGKILL');
      if ((await ended).signal === 'SIGKILL') kills++;
    }
    const last = await runCli(...arguments_('killed'));
    console.log(`killed ${kills} times`);
    expect(last.exitCode, last.stderr).toBe(0);
    expect(kills).toBe(5);
    expect(await hashesBelow(join(folder, 'killed'), published)).toEqual(
      await hashesBelow(join(folder, 'whole'), published),
    );
    expect(await filesBelow(join(folder, 'killed'), (path) => path.includes('.part-'))).toEqual([]);
  });

  it('does no job again when nothing has changed', async () => {
    const before = await counts('whole');
    expect(before.flux.done).toBeGreaterThan(0);
    const { exitCode } = await runCli(...arguments_('whole'));
    expect(exitCode).toBe(0);
    const after = await counts('whole');
    for (const stage of ['terrain', 'prepare', 'flux', 'overlap', 'day', 'integrate', 'tally', 'mosaic']) {
      expect(after[stage], stage).toMatchObject({ total: before[stage].total, done: 0, kept: before[stage].total });
    }
  });

  it('stops cleanly on SIGTERM, says so, and goes on afterwards', async () => {
    const { child, ended } = startCli(arguments_('stopped'));
    while ((await artefacts('stopped')) < 5) await sleep(20);
    child.kill('SIGTERM');
    const stopped = await ended;
    expect(stopped.exitCode, stopped.stderr).toBe(143);
    const { stdout } = await runCli('status', join(folder, 'stopped'), '--json');
    expect(JSON.parse(stdout)).toMatchObject({ state: 'stopped' });
    expect((await runCli(...arguments_('stopped'))).exitCode).toBe(0);
    expect(await readFile(join(folder, 'stopped/report.html'))).toEqual(
      await readFile(join(folder, 'whole/report.html')),
    );
  });
});
