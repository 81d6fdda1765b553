import { readFile, writeFile } from 'node:fs/promises';
import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { GridSpec } from '../../../shared/contract/grid.ts';
import { temporaryFolder } from '../../support/run-cli.ts';
import { readAll, writeTestCog } from '../../support/test-cog.ts';

let folder: string;
let remove: () => Promise<void>;
beforeAll(async () => {
  [folder, remove] = await temporaryFolder();
});
afterAll(() => remove());

const utm: GridSpec = {
  crs: { code: 'EPSG:32633', proj4: '+proj=utm +zone=33 +datum=WGS84 +units=m +no_defs', kind: 'epsg', epsg: 32633 },
  originX: 480000,
  originY: 4590000,
  resolution: 30,
  rows: 700,
  columns: 900,
  tileSize: 256,
};

describe('damaged files', () => {
  it('say what is wrong and where', async () => {
    const file = join(folder, 'sound.tif');
    await writeTestCog(
      file,
      utm,
      new Uint16Array(utm.rows * utm.columns).map((_, i) => i % 5000),
      'uint16',
      'deflate',
      65535,
    );
    const bytes = await readFile(file);
    await writeFile(join(folder, 'cut.tif'), bytes.subarray(0, Math.floor(bytes.length * 0.7)));
    await expect(readAll(join(folder, 'cut.tif'))).rejects.toMatchObject({ code: 'RASTER_TRUNCATED' });
    const spoiled = Buffer.from(bytes);
    spoiled.fill(0xff, bytes.length - 3000, bytes.length - 2900);
    await writeFile(join(folder, 'spoiled.tif'), spoiled);
    await expect(readAll(join(folder, 'spoiled.tif'))).rejects.toMatchObject({
      code: 'RASTER_CORRUPT',
      message: expect.stringMatching(/block \d+/),
    });
    await expect(readAll(join(folder, 'missing.tif'))).rejects.toMatchObject({ code: 'RASTER_MISSING' });
    await writeFile(join(folder, 'text.tif'), 'not a TIFF at all, just words that go on for a while');
    await expect(readAll(join(folder, 'text.tif'))).rejects.toMatchObject({ code: 'RASTER_CORRUPT' });
  });
});
