import { cp, mkdir, readdir, readFile, rename, writeFile } from 'node:fs/promises';
import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { writeDemo } from '../../infra/demo/write-demo.ts';
import { loadBasin } from '../../services/coordinator/load-basin.ts';
import { makePlan } from '../../services/coordinator/make-plan.ts';
import { addDays } from '../../shared/time/calendar.ts';
import { startRedis, type TestRedis } from '../support/redis.ts';
import { runCli, temporaryFolder } from '../support/run-cli.ts';
import { Topology } from '../support/topology.ts';

/** Passes stand for themselves: an adjustment would rightly move the days of all that overlap. */
const SETTINGS = {
  'period.from': '2025-05-29',
  'period.to': '2025-08-11',
  'grid.tile': '128',
  'method.adjust.use': 'false',
  'integrate.maxGapDays': '10',
};
const ARRIVALS = 20;

let folder: string;
let remove: () => Promise<void>;
let redis: TestRedis;
let topology: Topology;

interface Counts {
  readonly total: number;
  readonly done: number;
  readonly kept: number;
}

beforeAll(async () => {
  [folder, remove] = await temporaryFolder();
  await writeDemo(folder, { seed: 12, size: 'tiny' });
  await rename(join(folder, 'scenes'), join(folder, 'archive'));
  await mkdir(join(folder, 'scenes'));
  await secondSatellite();
  redis = await startRedis();
  topology = new Topology(redis.url);
  topology.start('worker', { BASINLOOM_THREADS: '2' });
  topology.start('mosaicker');
  await topology.ready();
});
afterAll(async () => {
  await topology?.stop();
  await redis?.stop();
  await remove();
});

describe('an archive whose scenes arrive one by one', () => {
  it('has only the tiles computed that each new scene touches', async () => {
    const scenes = (await readdir(join(folder, 'archive'))).sort((a, b) => (dateOf(a) < dateOf(b) ? -1 : 1));
    expect(scenes.length).toBe(ARRIVALS);
    let before = new Map<string, string>();
    const seen: string[] = [];
    for (const scene of scenes) {
      await rename(join(folder, 'archive', scene), join(folder, 'scenes', scene));
      const { passes, leftOut } = await makePlan(await loadBasin(join(folder, 'basin.yaml'), { set: SETTINGS }));
      const [pass] = passes.filter((entry) => entry.pass.scenes.some(({ id }) => id === scene));
      expect(pass, `${scene}: ${JSON.stringify(leftOut)}`).toBeDefined();
      const own = pass.sceneTiles[pass.pass.scenes.findIndex(({ id }) => id === scene)];
      const counts = await run();
      const calibrations = await readCalibrations();
      // A pass that had to borrow may find a nearer lender in the new one; its tiles are touched too.
      const changed = passes.filter(({ pass: { id } }) => calibrations.get(id) !== before.get(id));
      before = calibrations;
      const fluxTiles = changed.reduce((sum, { tiles }) => sum + tiles.length, 0);
      const dates = new Set(changed.map((entry) => entry.pass.date));
      const dayTiles = passes.filter((entry) => dates.has(entry.pass.date)).flatMap(({ tiles }) => tiles).length;
      seen.push(
        `${scene}: prepare ${counts.prepare.done}/${counts.prepare.total}, flux ${counts.flux.done}/${counts.flux.total}, day ${counts.day.done}/${counts.day.total}`,
      );
      expect(counts.prepare.done, scene).toBe(own.length);
      expect(counts.flux.done, scene).toBeLessThanOrEqual(fluxTiles);
      expect(counts.day.done, scene).toBeLessThanOrEqual(dayTiles);
      expect(counts.prepare.kept, scene).toBe(counts.prepare.total - own.length);
    }
    console.log(seen.join('\n'));
  }, 280_000);
});

async function run(): Promise<Record<'prepare' | 'flux' | 'day', Counts>> {
  const settings = Object.entries({ ...SETTINGS, engine: redis.url }).flatMap(([key, value]) => [
    '--set',
    `${key}=${value}`,
  ]);
  const { exitCode, stderr } = await runCli('run', join(folder, 'basin.yaml'), ...settings);
  expect([0, 3], stderr).toContain(exitCode);
  const { stdout } = await runCli('status', join(folder, 'out'), '--json');
  return (JSON.parse(stdout) as { stages: Record<'prepare' | 'flux' | 'day', Counts> }).stages;
}

/** What each pass was calibrated to in the latest run, as text. */
async function readCalibrations(): Promise<Map<string, string>> {
  const runs = (await readdir(join(folder, 'out/runs'))).sort();
  const lineage = JSON.parse(await readFile(join(folder, 'out/runs', runs.at(-1) as string, 'lineage.json'), 'utf8'));
  const passes = lineage.passes as { id: string; calibration?: unknown }[];
  return new Map(passes.map(({ id, calibration }) => [id, JSON.stringify(calibration)]));
}

/** The scenes of one satellite a second time, four days later, as a twin would bring them. */
async function secondSatellite(): Promise<void> {
  const archive = join(folder, 'archive');
  for (const scene of (await readdir(archive)).filter((name) => name.startsWith('LC08'))) {
    const from = dateOf(scene);
    const to = addDays(from, 4);
    const renamed = (text: string) =>
      text
        .replaceAll('LC08', 'LC09')
        .replaceAll('LANDSAT_8', 'LANDSAT_9')
        .replaceAll(from, to)
        .replaceAll(from.replaceAll('-', ''), to.replaceAll('-', ''));
    const target = join(archive, renamed(scene));
    await cp(join(archive, scene), target, { recursive: true });
    for (const file of await readdir(target)) {
      await rename(join(target, file), join(target, renamed(file)));
      if (!file.includes('_MTL.')) continue;
      const metadata = join(target, renamed(file));
      await writeFile(metadata, renamed(await readFile(metadata, 'utf8')));
    }
  }
}

function dateOf(scene: string): string {
  const [, year, month, day] = /_(\d{4})(\d{2})(\d{2})_/.exec(scene) as RegExpExecArray;
  return `${year}-${month}-${day}`;
}
