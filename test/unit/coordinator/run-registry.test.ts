import { mkdir, mkdtemp, readFile, rm, writeFile } from 'node:fs/promises';
import { join } from 'node:path';
import { pino } from 'pino';
import { afterAll, beforeAll, beforeEach, describe, expect, it, vi } from 'vitest';
import { writeDemo } from '../../../infra/demo/write-demo.ts';
import { RunRegistry } from '../../../services/coordinator/run-registry.ts';
import type { Job, Settled } from '../../../shared/contract/jobs.ts';
import type { Engine } from '../../../shared/engine/engine.ts';
import { LocalStore } from '../../../shared/store/local-store.ts';
import { temporaryFolder } from '../../support/run-cli.ts';

let whole: string;
let remove: () => Promise<void>;
/** Of one test: a home and outputs. */
let folder: string;
beforeAll(async () => {
  [whole, remove] = await temporaryFolder();
  await writeDemo(whole, { size: 'tiny' });
});
beforeEach(async () => {
  folder = await mkdtemp(join(whole, 'test-'));
});
afterAll(() => remove());

/** An engine that never gets to its jobs: its runs last until they are stopped. */
const idle: Engine = {
  async *run<J extends Job>(_jobs: unknown, { signal }: { signal: AbortSignal }): AsyncGenerator<Settled<J>> {
    await new Promise((stopped) => signal.addEventListener('abort', stopped));
    throw new Error('stopped');
  },
  close: () => Promise.resolve(),
};

const registry = (process: number, lines: string[] = []) =>
  new RunRegistry({
    home: new LocalStore(join(folder, 'home')),
    openEngine: () => idle,
    log: pino({ level: 'info' }, { write: (line: string) => void lines.push(line) }),
    now: () => new Date(),
    host: 'here',
    process,
    software: { name: 'basinloom', version: '0' },
    againMs: 20,
  });
const request = () => ({ basinFile: join(whole, 'basin.yaml'), out: join(folder, 'out') });

describe('the registry of a coordinator', () => {
  it('takes up what an earlier life left open, under the same id, and nothing that was ended', async () => {
    const first = registry(1);
    const left = await first.start(request());
    const other = await first.start({ ...request(), out: join(folder, 'other') });
    expect((await first.cancel(other.record.id)).record.state).toBe('stopped');
    await first.close();
    const second = registry(2);
    expect(await second.resume()).toBe(1);
    expect(second.running).toBe(1);
    const entries = await second.list();
    expect(entries.map(({ record }) => record.id)).toEqual([other.record.id, left.record.id]);
    expect((await second.cancel(left.record.id)).record).toMatchObject({ id: left.record.id, state: 'stopped' });
    expect(await registry(3).resume()).toBe(0);
  });

  it('goes on trying to take up a run whose store another host still seems to hold', async () => {
    const first = registry(1);
    const { record } = await first.start(request());
    await first.close();
    const lock = { host: 'elsewhere', pid: 1, token: 't', refreshed: new Date().toISOString() };
    await mkdir(join(folder, 'out'), { recursive: true });
    await writeFile(join(folder, 'out/.lock'), JSON.stringify(lock));
    const lines: string[] = [];
    const second = registry(2, lines);
    await second.resume();
    expect(second.running).toBe(0);
    await vi.waitFor(() => expect(lines.filter((line) => line.includes('RUN_LOCKED')).length).toBeGreaterThan(1));
    await rm(join(folder, 'out/.lock'));
    await vi.waitFor(() => expect(second.running).toBe(1));
    expect((await second.cancel(record.id)).record.state).toBe('stopped');
  });

  it('refuses a second run in one store, an unknown run and a wrong basin file, and remembers none of them', async () => {
    const runs = registry(1);
    const { record } = await runs.start(request());
    await expect(runs.start(request())).rejects.toMatchObject({ code: 'RUN_LOCKED' });
    await expect(runs.get('../../etc')).rejects.toMatchObject({ code: 'RUN_NOT_FOUND' });
    const missing = { basinFile: join(folder, 'none.yaml') };
    await expect(runs.start(missing)).rejects.toMatchObject({ code: 'BASIN_FILE_MISSING' });
    expect(await runs.list()).toHaveLength(1);
    await runs.cancel(record.id);
    const { open } = JSON.parse(await readFile(join(folder, `home/requests/${record.id}.json`), 'utf8'));
    expect(open).toBe(false);
  });
});
