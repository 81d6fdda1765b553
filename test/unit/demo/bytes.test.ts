import { mkdir, writeFile } from 'node:fs/promises';
import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { writeDemo } from '../../../infra/demo/write-demo.ts';
import { hashesBelow } from '../../support/products.ts';
import { temporaryFolder } from '../../support/run-cli.ts';

let root: string;
let remove: () => Promise<void>;
let first: Record<string, string>;
const folder = (name: string) => join(root, name);

beforeAll(async () => {
  [root, remove] = await temporaryFolder();
  await writeDemo(folder('first'), { seed: 5, size: 'tiny' });
  first = await hashesBelow(folder('first'));
});
afterAll(() => remove());

describe('the demo basin', () => {
  it('has everything that a basin needs', () => {
    const files = Object.keys(first);
    for (const file of [
      'basin.yaml',
      'basin.geojson',
      'subbasins.geojson',
      'dem.tif',
      'landcover.tif',
      'landcover.csv',
    ]) {
      expect(files).toContain(file);
    }
    expect(files.filter((file) => file.endsWith('_MTL.json'))).not.toHaveLength(0);
    expect(files.filter((file) => file.endsWith('_MTL.txt'))).not.toHaveLength(0);
    expect(files.filter((file) => file.endsWith('_MTL.xml'))).not.toHaveLength(0);
    expect(files.filter((file) => file.endsWith('_QA_PIXEL.TIF'))).toHaveLength(15);
  });

  it('is the same byte for byte when made again from the same seed', async () => {
    await writeDemo(folder('again'), { seed: 5, size: 'tiny' });
    expect(await hashesBelow(folder('again'))).toEqual(first);
  });

  it('is another basin with another seed', async () => {
    await writeDemo(folder('other'), { seed: 6, size: 'tiny' });
    const other = await hashesBelow(folder('other'));
    expect(other['dem.tif']).not.toBe(first['dem.tif']);
    expect(other['basin.geojson']).not.toBe(first['basin.geojson']);
  });

  it('differs only in the spoiled pass and the truth when a calibration error is asked for', async () => {
    const truth = await writeDemo(folder('spoiled'), {
      seed: 5,
      size: 'tiny',
      calibrationError: { pass: '2025-06-21', kelvin: 2 },
    });
    const spoiled = await hashesBelow(folder('spoiled'));
    const changed = Object.keys(spoiled).filter((file) => spoiled[file] !== first[file]);
    expect(changed).toHaveLength(3);
    expect(changed.filter((file) => /20250621.*_ST_B6\.TIF$/.test(file))).toHaveLength(2);
    expect(changed).toContain('truth/truth.json');
    expect(truth.passes.filter(({ contaminationK }) => contaminationK !== 0).map(({ date }) => date)).toEqual([
      '2025-06-21',
    ]);
  });

  it('is left alone when the folder already holds it, and replaces another demo', async () => {
    const place = folder('reused');
    await writeDemo(place, { seed: 5, size: 'tiny' });
    await writeFile(join(place, 'scenes', 'note.txt'), 'mine');
    await writeDemo(place, { seed: 5, size: 'tiny' });
    expect(Object.keys(await hashesBelow(place))).toContain('scenes/note.txt');
    await writeDemo(place, { seed: 6, size: 'tiny' });
    expect(Object.keys(await hashesBelow(place))).not.toContain('scenes/note.txt');
  });

  it('does not touch a folder with scenes of somebody else', async () => {
    const place = folder('foreign');
    await mkdir(join(place, 'scenes'), { recursive: true });
    await expect(writeDemo(place, { size: 'tiny' })).rejects.toThrow(/not of a demo/);
  });
});
