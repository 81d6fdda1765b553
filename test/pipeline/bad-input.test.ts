import { copyFile, cp, mkdir, open, readdir, readFile, rm, stat, writeFile } from 'node:fs/promises';
import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { writeDemo } from '../../infra/demo/write-demo.ts';
import { lockStore } from '../../shared/store/store-lock.ts';
import { moveEast, rewriteUniform } from '../support/rewrite-tiff.ts';
import { runCli, temporaryFolder } from '../support/run-cli.ts';

/**
 * What a user's files can do to a run. Each case copies a tiny sound basin, spoils one thing, and looks at the
 * message, the exit code and what became of the rest.
 */
let sound: string;
let root: string;
let remove: () => Promise<void>;
let cases = 0;

beforeAll(async () => {
  [root, remove] = await temporaryFolder();
  sound = join(root, 'sound');
  await writeDemo(sound, { seed: 13, size: 'tiny' });
});
afterAll(() => remove());

async function copyBasin(): Promise<string> {
  const folder = join(root, `case-${cases++}`);
  await cp(sound, folder, { recursive: true });
  return folder;
}
const run = (folder: string, ...options: string[]) =>
  runCli('run', join(folder, 'basin.yaml'), '--out', join(folder, 'out'), '--threads', '2', ...options);

async function failures(
  folder: string,
): Promise<{ kind: string; id: string; error: { code: string; message: string } }[]> {
  const runs = await readdir(join(folder, 'out/runs'));
  const text = await readFile(join(folder, 'out/runs', runs.sort().at(-1) as string, 'failures.json'), 'utf8');
  const { failures: gaps, notes } = JSON.parse(text);
  return [...gaps, ...notes];
}

/** Files of the scenes folder whose path matches. */
async function sceneFiles(folder: string, pattern: RegExp): Promise<string[]> {
  const entries = await readdir(join(folder, 'scenes'), { recursive: true });
  return entries
    .filter((entry) => pattern.test(entry))
    .map((entry) => join(folder, 'scenes', entry))
    .sort();
}

async function edit(file: string, change: (text: string) => string): Promise<void> {
  const text = await readFile(file, 'utf8');
  const changed = change(text);
  expect(changed, `nothing changed in ${file}`).not.toBe(text);
  await writeFile(file, changed);
}

describe('a sound basin', () => {
  it('runs through with exit code 0', async () => {
    const { exitCode, stderr } = await run(await copyBasin());
    expect(exitCode, stderr).toBe(0);
  });
});

describe('bad scenes', () => {
  it('a missing band file leaves the scene out, names the file and finishes the rest with gaps', async () => {
    const folder = await copyBasin();
    const [band] = await sceneFiles(folder, /ST_B(6|10)\.TIF$/);
    await rm(band);
    const { exitCode, stderr } = await run(folder);
    expect(exitCode, stderr).toBe(3);
    expect(stderr).toContain(band);
    expect(await failures(folder)).toContainEqual(
      expect.objectContaining({ error: expect.objectContaining({ code: 'SCENE_BAND_MISSING' }) }),
    );
    await stat(join(folder, 'out/report.html'));
  });

  it('a truncated TIFF is named, and other tiles finish', async () => {
    const folder = await copyBasin();
    const [band] = await sceneFiles(folder, /SR_B4\.TIF$/);
    const { size } = await stat(band);
    const file = await open(band, 'r+');
    await file.truncate(Math.floor(size * 0.6));
    await file.close();
    const { exitCode, stderr } = await run(folder, '--set', 'grid.tile=128');
    expect(exitCode, stderr).toBe(3);
    expect(stderr).toContain(band);
    expect(stderr).toMatch(/ends before its data/);
    await stat(join(folder, 'out/report.html'));
  });

  it('metadata without thermal constants say how to order the scene', async () => {
    const folder = await copyBasin();
    for (const file of await sceneFiles(folder, /MTL\.(json|txt|xml)$/)) {
      if (/TEMPERATURE_MULT_BAND/.test(await readFile(file, 'utf8'))) {
        await edit(file, (text) => text.replaceAll('TEMPERATURE_MULT_BAND', 'TEMPERATURE_GONE_BAND'));
        break;
      }
    }
    const { exitCode, stderr } = await run(folder);
    expect(exitCode, stderr).toBe(3);
    expect(stderr).toMatch(/no surface-temperature scaling/);
  });

  it('a scene outside the region is left out, which is no gap', async () => {
    const folder = await copyBasin();
    // A second basin, far away, whose scenes lie in the same folder.
    const other = join(folder, 'scenes', 'far');
    await mkdir(other, { recursive: true });
    const [mtl] = await sceneFiles(folder, /MTL\.(json|txt|xml)$/);
    const id = (/([^/]+)_MTL/.exec(mtl) as RegExpExecArray)[1];
    for (const file of await sceneFiles(folder, new RegExp(`${id}_`))) {
      await copyFile(file, join(other, file.slice(file.lastIndexOf('/') + 1)));
    }
    await moveScene(other);
    const { exitCode, stderr } = await run(folder);
    expect(exitCode, stderr).toBe(0);
    expect(stderr).toMatch(/does not touch the region/);
  });

  it('an all-cloud pass is left out with its reason, which is no gap', async () => {
    const folder = await copyBasin();
    const [qa] = await sceneFiles(folder, /QA_PIXEL\.TIF$/);
    // USGS QA_PIXEL 22280: high confidence cloud over land.
    await rewriteUniform(qa, 22280);
    const { exitCode, stderr } = await run(folder);
    expect(exitCode, stderr).toBe(0);
    expect(stderr).toMatch(/no clear pixel/);
  });

  it('a folder without scenes ends the run with exit code 66', async () => {
    const folder = await copyBasin();
    await rm(join(folder, 'scenes'), { recursive: true });
    await mkdir(join(folder, 'scenes'));
    const { exitCode, stderr } = await run(folder);
    expect(exitCode, stderr).toBe(66);
    expect(stderr).toMatch(/no scene found/);
  });
});

describe('bad weather', () => {
  const hourlyFiles = async (folder: string) => {
    const names = await readdir(join(folder, 'weather'));
    return names.filter((name) => /hourly/.test(name)).map((name) => join(folder, 'weather', name));
  };

  it('a file without wind is refused: wind is never guessed', async () => {
    const folder = await copyBasin();
    for (const file of await hourlyFiles(folder)) await edit(file, (text) => text.replace('wind_speed_m_s', 'wnd'));
    const { exitCode, stderr } = await run(folder);
    expect(exitCode, stderr).toBe(65);
    expect(stderr).toMatch(/wind_speed_m_s/);
  });

  it('a gap at an overpass sets that pass aside and keeps the others', async () => {
    const folder = await copyBasin();
    const { stdout } = await runCli('plan', join(folder, 'basin.yaml'), '--log', 'json');
    const { pass } = JSON.parse(stdout).passes[1] as { pass: { id: string; acquired: string } };
    const day = pass.acquired.slice(0, 10);
    for (const file of await hourlyFiles(folder)) {
      await edit(file, (text) =>
        text
          .split('\n')
          .filter((line) => !new RegExp(`^${day}T(0[6-9]|1[0-3])`).test(line))
          .join('\n'),
      );
    }
    const { exitCode, stderr } = await run(folder);
    expect(exitCode, stderr).toBe(3);
    expect(stderr).toContain(pass.id);
    expect(stderr).toMatch(/no weather at the overpass/);
  });
});

describe('bad region', () => {
  it('a boundary that crosses itself is refused with the place', async () => {
    const folder = await copyBasin();
    const yaml = await readFile(join(folder, 'basin.yaml'), 'utf8');
    const name = (/boundary:\s*([^\s,}]+)/.exec(yaml) as RegExpExecArray)[1].replaceAll(/['"]/g, '');
    const bow = {
      type: 'Polygon',
      coordinates: [
        [
          [12, 41],
          [12.1, 41.1],
          [12.1, 41],
          [12, 41.1],
          [12, 41],
        ],
      ],
    };
    await writeFile(join(folder, name), JSON.stringify(bow));
    const { exitCode, stderr } = await run(folder);
    expect(exitCode, stderr).toBe(65);
    expect(stderr).toMatch(/crosses itself near longitude 12\.05/);
  });

  it.each([
    ['EPSG:4326', /not a projected system in metres/],
    ['EPSG:3857', /not a projected system in metres/],
    ['EPSG:999999', /unknown coordinate reference system/],
  ])('the grid system %s is refused', async (crs, message) => {
    const { exitCode, stderr } = await run(sound, '--set', `grid.crs=${crs}`);
    expect(exitCode, stderr).toBe(78);
    expect(stderr).toMatch(message);
  });
});

describe('a wrong command line or basin file', () => {
  it.each([
    [['run', 'no-such.yaml'], 66, /no such basin file/],
    [['run'], 2, /missing required argument/],
    [['rum', 'basin.yaml'], 2, /unknown command/],
    [['run', 'basin.yaml', '--thread', '2'], 2, /unknown option/],
    [['run', 'basin.yaml', '--threads', 'two'], 2, /whole number/],
    [['status', 'no-such-folder'], 66, /no run found/],
  ])('%j ends with %i', async (args, code, message) => {
    const { exitCode, stderr } = await runCli(...args);
    expect(exitCode, stderr).toBe(code);
    expect(stderr).toMatch(message);
  });

  it('an unknown key is named with its line and the nearest key', async () => {
    const folder = await copyBasin();
    await edit(join(folder, 'basin.yaml'), (text) => text.replace('resolution', 'resolutoin'));
    const { exitCode, stderr } = await run(folder);
    expect(exitCode, stderr).toBe(78);
    expect(stderr).toMatch(/basin\.yaml:\d+: unknown key "grid\.resolutoin".*resolution/);
  });

  it('a second run in the same folder is kept out', async () => {
    const folder = await copyBasin();
    const release = await lockStore(join(folder, 'out'));
    const { exitCode, stderr } = await run(folder);
    await release();
    expect(exitCode, stderr).toBe(75);
    expect(stderr).toContain(String(process.pid));
  });
});

/** Moves every TIFF of a folder 2000 km east, as a foreign scene would lie. */
async function moveScene(folder: string): Promise<void> {
  for (const name of (await readdir(folder)).filter((entry) => entry.endsWith('.TIF'))) {
    await moveEast(join(folder, name), 2_000_000);
  }
}
