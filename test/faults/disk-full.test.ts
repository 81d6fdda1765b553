import { execFileSync } from 'node:child_process';
import { mkdir, readFile, rm, statfs, writeFile } from 'node:fs/promises';
import { join } from 'node:path';
import { setTimeout as sleep } from 'node:timers/promises';
import { afterAll, afterEach, beforeAll, beforeEach, describe, expect, it } from 'vitest';
import { writeDemo } from '../../infra/demo/write-demo.ts';
import { filesBelow, hashesBelow } from '../support/products.ts';
import { startRedis } from '../support/redis.ts';
import { runCli, startCli, temporaryFolder } from '../support/run-cli.ts';
import { Topology } from '../support/topology.ts';

const DISK_BYTES = 64 * 1024 * 1024;
const isPublished = (path: string) => /^(products|tables)\/|^report\.html$/.test(path);
const isUnfinished = (path: string) => path.includes('.part-');

let folder: string;
let remove: () => Promise<void>;
const disk = () => join(folder, 'disk');
const out = () => join(disk(), 'out');
const runArguments = (to: string) => [
  'run',
  join(folder, 'basin.yaml'),
  '--out',
  to,
  '--set',
  'grid.tile=128',
  '--threads',
  '2',
];

/** A disk of its own that can be filled; only root may mount one, and not in every container. */
function mountDisk(at: string): boolean {
  try {
    execFileSync('mount', ['-t', 'tmpfs', '-o', `size=${DISK_BYTES}`, 'tmpfs', at], { stdio: 'ignore' });
    return true;
  } catch {
    return false;
  }
}

const canMount = process.platform === 'linux' && process.getuid?.() === 0 && (await triesToMount());

async function triesToMount(): Promise<boolean> {
  const [at, removeFolder] = await temporaryFolder();
  const mounted = mountDisk(at);
  if (mounted) execFileSync('umount', [at]);
  await removeFolder();
  return mounted;
}

/** Fills the disk but for some bytes; the name of the file that does is returned. */
async function fill(leave: number): Promise<string> {
  const { bavail, bsize } = await statfs(disk());
  const ballast = join(disk(), 'ballast');
  await writeFile(ballast, Buffer.alloc(Math.max(0, bavail * bsize - leave), 1));
  return ballast;
}

/** Waits until a process has written a text to its errors, or has ended. */
async function untilSaid(child: ReturnType<typeof startCli>, text: RegExp): Promise<boolean> {
  let said = '';
  let ended = false;
  child.child.stderr?.on('data', (chunk) => {
    said += chunk;
  });
  void child.ended.then(() => {
    ended = true;
  });
  while (!ended && !text.test(said)) await sleep(50);
  return text.test(said);
}

describe.skipIf(!canMount)('a full disk', () => {
  let expected: Record<string, string>;

  beforeAll(async () => {
    [folder, remove] = await temporaryFolder();
    await writeDemo(folder, { seed: 12, size: 'tiny' });
    const { exitCode, stderr } = await runCli(...runArguments(join(folder, 'whole/out')));
    expect(exitCode, stderr).toBe(0);
    expected = await hashesBelow(join(folder, 'whole/out'), isPublished);
    await mkdir(disk());
  });
  afterAll(() => remove());
  beforeEach(() => {
    execFileSync('mount', ['-t', 'tmpfs', '-o', `size=${DISK_BYTES}`, 'tmpfs', disk()]);
  });
  afterEach(() => {
    execFileSync('umount', ['--lazy', disk()]);
  });

  it('makes jobs wait and say why; the run ends complete when there is space again', async () => {
    // Room for the plan and some tiles: the disk fills while jobs work.
    const ballast = await fill(1_500_000);
    const run = startCli(runArguments(out()));
    expect(await untilSaid(run, /waiting: .*the disk is full.*STORE_FULL/)).toBe(true);
    await rm(ballast);
    const { exitCode, stderr } = await run.ended;
    expect(exitCode, stderr).toBe(0);
    expect(stderr).not.toMatch(/set aside/);
    expect(await hashesBelow(out(), isPublished)).toEqual(expected);
    expect(await filesBelow(out(), isUnfinished)).toEqual([]);
    const [record] = await filesBelow(join(out(), 'runs'), (path) => path.endsWith('run.json'));
    expect(JSON.parse(await readFile(join(out(), 'runs', record), 'utf8'))).toMatchObject({
      state: 'complete',
      leftOut: 0,
    });
  });

  it('makes the workers of a queue wait in the same way', async () => {
    const redis = await startRedis();
    const topology = new Topology(redis.url);
    try {
      topology.start('worker');
      topology.start('mosaicker');
      await topology.ready();
      const ballast = await fill(1_500_000);
      const run = startCli([...runArguments(out()), '--set', `engine=${redis.url}`]);
      expect(await untilSaid(run, /waiting: .*the disk is full.*STORE_FULL/)).toBe(true);
      await rm(ballast);
      const { exitCode, stderr } = await run.ended;
      expect(exitCode, stderr).toBe(0);
      expect(topology.lines(({ msg }) => msg === 'waits')[0]).toMatchObject({ error: { code: 'STORE_FULL' } });
      expect(await hashesBelow(out(), isPublished)).toEqual(expected);
      expect(await filesBelow(out(), isUnfinished)).toEqual([]);
    } finally {
      await topology.stop();
      await redis.stop();
    }
  });

  it.each([
    ['lock', 0, /\.lock: the disk is full/],
    ['plan', 12_288, /artefacts\/plan\/.*: the disk is full/],
  ])('ends a run whose own %s has no room, and the same command goes on', async (_, leave, message) => {
    const ballast = await fill(leave);
    const full = await runCli(...runArguments(out()));
    expect(full.exitCode, full.stderr).toBe(74);
    expect(full.stderr).toMatch(message);
    expect(full.stderr).toMatch(/Free space/);
    expect(await filesBelow(disk(), isUnfinished)).toEqual([]);
    await rm(ballast);
    const again = await runCli(...runArguments(out()));
    expect(again.exitCode, again.stderr).toBe(0);
    expect(await hashesBelow(out(), isPublished)).toEqual(expected);
  });
});
