import { spawnSync } from 'node:child_process';
import { existsSync } from 'node:fs';
import { copyFile, readdir, symlink } from 'node:fs/promises';
import { extname, join, resolve } from 'node:path';
import { describe, expect, it } from 'vitest';
import type { CrsSpec, GridSpec } from '../../shared/contract/grid.ts';
import { DAY_QUALITY, DAY_UNUSABLE } from '../../shared/contract/quality.ts';
import type { SceneRecord } from '../../shared/contract/scene.ts';
import { ALBEDO_WEIGHTS } from '../../shared/flux/albedo.ts';
import { openFile } from '../../shared/raster/file-source.ts';
import { openRaster, type RasterFile } from '../../shared/raster/raster-file.ts';
import { findLandsatScenes } from '../../shared/scenes/landsat-level-2/find-scenes.ts';
import { readScene } from '../../shared/scenes/landsat-level-2/scene.ts';
import { groupPasses } from '../../shared/scenes/passes.ts';
import { type OpenBand, readSurface } from '../../shared/scenes/read-surface.ts';
import { temporaryFolders } from '../unit/scenes/scene-fixture.ts';

/*
 * A real Landsat 8 Collection 2 Level-2 scene (path 8, row 59, 2019-12-01), every 15th pixel of the full scene. What
 * is read here is held against GDAL's reading of the same files with the scale factors of USGS LSDS-1619.
 */
const DATA = resolve(import.meta.dirname, '../../../shared/data');
const SCENE = join(DATA, 'l8-c2l2-fullscene-decimated-008059');
const ID = 'LC08_L2SP_008059_20191201_20200825_02_T1';
const PYTHON = '/usr/bin/python3';
const folder = temporaryFolders();

function gdal(script: string): unknown {
  const { stdout, stderr, status } = spawnSync(PYTHON, ['-c', script], { encoding: 'utf8', maxBuffer: 1 << 28 });
  if (status !== 0) throw new Error(stderr);
  return JSON.parse(stdout);
}

/** Places on the grid are right to 1/8 of a source pixel; so much of the local contrast may a value differ. */
const PLACE_TOLERANCE_PIXELS = 1 / 8;

const hasGdal = spawnSync(PYTHON, ['-c', 'from osgeo import gdal; import numpy']).status === 0;

/** Runs with a function that opens each band once; closes them all. */
async function withBands<T>(use: (open: OpenBand) => Promise<T>): Promise<T> {
  const opened = new Map<string, Promise<RasterFile>>();
  try {
    return await use(({ file }) => {
      const raster = opened.get(file) ?? openFile(file).then(openRaster);
      opened.set(file, raster);
      return raster;
    });
  } finally {
    for (const raster of opened.values()) await (await raster).close();
  }
}

const onePixel = { row: 0, column: 0, rows: 1, columns: 1 };

/** A grid whose first pixel has its centre on the centre of a source pixel. */
function gridAt({ georeference }: SceneRecord, row: number, column: number): GridSpec {
  const { originX, originY, pixelWidth, pixelHeight, proj4 } = georeference;
  const crs: CrsSpec = { code: 'EPSG:32618', proj4, kind: 'epsg', epsg: 32618 };
  const x = originX + (column + 0.5) * pixelWidth;
  const y = originY - (row + 0.5) * pixelHeight;
  return { crs, originX: x - 15, originY: y + 15, resolution: 30, rows: 1, columns: 1, tileSize: 128 };
}

describe.skipIf(!existsSync(SCENE))('a real Landsat 8 scene', () => {
  it('gives one record from all three forms of its metadata', async () => {
    const records = await Promise.all(
      ['json', 'txt', 'xml'].map((form) => readScene(join(SCENE, `${ID}_MTL.${form}`))),
    );
    const [json, text, xml] = records.map(({ metadataFile, ...record }) => record);
    expect(text).toEqual(json);
    expect(xml).toEqual(json);
    expect(json).toMatchObject({
      id: ID,
      satellite: 'LANDSAT_8',
      albedoModel: 'oli',
      path: 8,
      row: 59,
      acquired: '2019-12-01T15:13:51.861Z',
      cloudCoverPct: 81.02,
      earthSunDistanceAu: 0.9860755,
    });
  });

  it('is found once, and is one pass', async () => {
    const found = await findLandsatScenes(SCENE);
    const scenes = found.flatMap((entry) => ('scene' in entry ? [entry.scene] : []));
    expect(found).toHaveLength(1);
    expect(scenes[0].metadataFile).toMatch(/_MTL\.json$/);
    expect(groupPasses(scenes, -5)).toMatchObject([{ id: '2019-12-01-landsat8-p008', date: '2019-12-01' }]);
  });

  it('has its problem named when a band is lost, whatever form the metadata have', async () => {
    const root = await folder();
    for (const name of await readdir(SCENE)) {
      if (name.endsWith('_MTL.xml')) await copyFile(join(SCENE, name), join(root, name));
      else if (extname(name) === '.TIF' && !name.includes('SR_B6')) await symlink(join(SCENE, name), join(root, name));
    }
    expect(await findLandsatScenes(root)).toMatchObject([{ id: ID, problem: { code: 'SCENE_BAND_MISSING' } }]);
  });

  it.skipIf(!hasGdal)('gives the values of clear pixels that GDAL reads', async () => {
    const scene = await readScene(join(SCENE, `${ID}_MTL.json`));
    const expected = gdal(`
import json
from osgeo import gdal
import numpy as np
read = lambda name: gdal.Open('${SCENE}/${ID}_' + name + '.TIF').ReadAsArray().astype(np.float64)
clear = (read('QA_PIXEL').astype(int) & 63) == 0
clear &= (read('ST_B10') > 0)
at = np.argwhere(clear)[::97]
rows, columns = at[:, 0], at[:, 1]
sr = lambda n: (read('SR_B%d' % n) * 2.75e-5 - 0.2)[rows, columns].tolist()
print(json.dumps({'rows': rows.tolist(), 'columns': columns.tolist(), 'bands': [sr(n) for n in range(2, 8)],
  'lst': (read('ST_B10') * 0.00341802 + 149)[rows, columns].tolist()}))`) as {
      rows: number[];
      columns: number[];
      bands: number[][];
      lst: number[];
    };
    expect(expected.rows.length).toBeGreaterThan(200);
    const weights = ALBEDO_WEIGHTS.oli;
    await withBands(async (open) => {
      for (const [k, row] of expected.rows.entries()) {
        const planes = await readSurface(scene, gridAt(scene, row, expected.columns[k]), onePixel, open, weights);
        const [blue, green, red, nir, swir1, swir2] = expected.bands.map((values) => values[k]);
        const visible = weights.blue * blue + weights.green * green + weights.red * red;
        const infrared = weights.nir * nir + weights.swir1 * swir1 + weights.swir2 * swir2;
        expect(planes?.red[0]).toBeCloseTo(red, 6);
        expect(planes?.nir[0]).toBeCloseTo(nir, 6);
        expect(planes?.albedo[0]).toBeCloseTo(visible + infrared, 6);
        // float32 holds temperatures to 1.5e-5 K
        expect(planes?.lst[0]).toBeCloseTo(expected.lst[k], 4);
        expect(planes && planes.quality[0] & DAY_UNUSABLE).toBe(0);
      }
    });
  });

  it.skipIf(!hasGdal)('lies where gdalwarp puts it on another projection', async () => {
    const scene = await readScene(join(SCENE, `${ID}_MTL.json`));
    const proj4 = '+proj=laea +lat_0=1.5 +lon_0=-75 +x_0=0 +y_0=0 +datum=WGS84 +units=m +no_defs';
    const size = 300;
    const grid: GridSpec = {
      crs: { code: 'laea:1.5,-75', proj4, kind: 'laea' },
      ...{ originX: -67500, originY: 67500, resolution: 450, rows: size, columns: size, tileSize: 512 },
    };
    const window = { row: 0, column: 0, rows: size, columns: size };
    const planes = await withBands((open) => readSurface(scene, grid, window, open, ALBEDO_WEIGHTS.oli));
    if (!planes) throw new Error('the scene was not found');
    const warped = gdal(`
import json
from osgeo import gdal
import numpy as np
def warp(name, how):
  return gdal.Warp('', '${SCENE}/${ID}_' + name + '.TIF', format='MEM', dstSRS='${proj4}', outputBounds=(-67500, -67500, 67500, 67500),
    width=${size}, height=${size}, resampleAlg=how, errorThreshold=0, outputType=gdal.GDT_Float64).ReadAsArray()
print(json.dumps({'qa': warp('QA_PIXEL', 'near').ravel().tolist(), 'lst': (warp('ST_B10', 'bilinear') * 0.00341802 + 149).ravel().tolist()}))`) as {
      qa: number[];
      lst: number[];
    };
    const isMasked = warped.qa.map((value) => (value & 0b111111) !== 0);
    const flags = DAY_QUALITY.fill | DAY_QUALITY.cloud | DAY_QUALITY.cloudShadow | DAY_QUALITY.snow;
    let disagree = 0;
    let compared = 0;
    let tooFar = 0;
    let sum = 0;
    for (let at = 0; at < size * size; at++) {
      if (isMasked[at] !== ((planes.quality[at] & flags) !== 0)) disagree++;
      // Bilinear values are comparable where all neighbours are clear.
      const around = [-1, 0, 1].flatMap((r) => [-1, 0, 1].map((c) => at + r * size + c));
      if (around.some((near) => isMasked[near] !== false || planes.quality[near] !== 0)) continue;
      const kelvin = around.map((near) => planes.lst[near]);
      const difference = Math.abs(planes.lst[at] - warped.lst[at]);
      if (difference > (Math.max(...kelvin) - Math.min(...kelvin)) * PLACE_TOLERANCE_PIXELS) tooFar++;
      sum += difference;
      compared++;
    }
    expect(compared).toBeGreaterThan(1000);
    expect(disagree / (size * size)).toBeLessThan(0.001);
    expect(tooFar / compared).toBeLessThan(0.001);
    expect(sum / compared).toBeLessThan(0.002);
  });
});

describe.skipIf(!existsSync(join(DATA, 'deb-r-cran-satellite')))('real scenes of other kinds', () => {
  it.each([
    ['deb-r-cran-satellite/extdata', 2],
    ['deb-r-cran-satellite/testdata', 2],
    ['l5-tm-224063-rstoolbox', 1],
    ['l8-l1-020039-native30m', 1],
  ])('%s: Level-1 is refused by name, not by accident', async (place, count) => {
    const found = await findLandsatScenes(join(DATA, place));
    expect(found).toHaveLength(count);
    for (const entry of found) {
      if ('scene' in entry) throw new Error('a Level-1 scene was taken');
      expect(entry.problem).toMatchObject({ code: 'SCENE_METADATA', message: expect.stringContaining('Collection 2') });
    }
  });
});
