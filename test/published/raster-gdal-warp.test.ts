import { existsSync } from 'node:fs';
import { join, resolve } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { GridSpec } from '../../shared/contract/grid.ts';
import { openFile } from '../../shared/raster/file-source.ts';
import { openRaster } from '../../shared/raster/raster-file.ts';
import type { RasterSamples } from '../../shared/raster/sample-type.ts';
import { chooseStep, pixelTransform, transformError } from '../../shared/raster/transform.ts';
import { readWarped } from '../../shared/raster/warp.ts';
import { sampleLattice } from '../../shared/region/lattice.ts';
import { gdalJson, hasGdal } from '../support/gdal.ts';
import { temporaryFolder } from '../support/run-cli.ts';

// GDAL's warp without approximation (errorThreshold 0) is the reference: PROJ places every pixel on its own.

const NODATA = -32768;

const grid = (latitude: number, longitude: number, changes: Partial<GridSpec>): GridSpec => ({
  crs: {
    code: `laea:${latitude},${longitude}`,
    proj4: `+proj=laea +lat_0=${latitude} +lon_0=${longitude} +x_0=0 +y_0=0 +datum=WGS84 +units=m +no_defs`,
    kind: 'laea',
    latitudeOfOriginDeg: latitude,
    longitudeOfOriginDeg: longitude,
  },
  originX: 0,
  originY: 0,
  resolution: 30,
  rows: 400,
  columns: 500,
  tileSize: 256,
  ...changes,
});

/** GDAL's values on the whole grid, null for nodata. */
function warpedByGdal(file: string, { crs, originX, originY, resolution, rows, columns }: GridSpec, method: string) {
  const bounds = [originX, originY - rows * resolution, originX + columns * resolution, originY];
  return gdalJson<(number | null)[]>(
    `
w = gdal.Warp('', sys.argv[1], format='MEM', dstSRS=sys.argv[2], resampleAlg=sys.argv[3], errorThreshold=0,
  outputBounds=json.loads(sys.argv[4]), width=${columns}, height=${rows}, dstNodata=${NODATA}, outputType=gdal.GDT_Float64)
print(json.dumps([None if v == ${NODATA} else v for v in w.ReadAsArray().ravel().tolist()]))
`,
    file,
    crs.proj4,
    method,
    JSON.stringify(bounds),
  );
}

async function warpedByUs(file: string, target: GridSpec, resampling: 'bilinear' | 'nearest') {
  const raster = await openRaster(await openFile(file));
  const window = { row: 0, column: 0, rows: target.rows, columns: target.columns };
  const samples: RasterSamples = await readWarped(raster, target, window, { resampling });
  await raster.close();
  return { samples, georeference: raster.header.georeference };
}

/** Distance of each pixel's centre from the nearest border between source pixels, in source pixels. */
function distanceFromTie(target: GridSpec, place: Parameters<typeof pixelTransform>[1], i: number): number {
  const [row, column] = [Math.floor(i / target.columns), i % target.columns];
  const lattice = pixelTransform(target, place, { row, column, rows: 1, columns: 1 });
  const off = [0, 1].map((variable) => {
    const at = sampleLattice(lattice, variable, row, column);
    return Math.abs(at - Math.round(at));
  });
  return Math.min(...off);
}

let folder: string;
let remove: () => Promise<void>;
beforeAll(async () => {
  [folder, remove] = await temporaryFolder();
});
afterAll(() => remove());

describe.skipIf(!hasGdal)('flags warped from UTM', () => {
  it('are GDAL nearest, but at ties', async () => {
    const file = join(folder, 'flags.tif');
    gdalJson(
      `
import numpy
y, x = numpy.mgrid[0:500, 0:600]
a = ((x * 40503 + y * 30011) % 65521).astype('u2')
d = gdal.GetDriverByName('GTiff').Create(sys.argv[1], 600, 500, 1, gdal.GDT_UInt16, ['COMPRESS=ZSTD', 'TILED=YES'])
d.SetGeoTransform((495015, 30, 0, 4586985, 0, -30)); s = osr.SpatialReference(); s.ImportFromEPSG(32633); d.SetProjection(s.ExportToWkt())
d.GetRasterBand(1).WriteArray(a); d = None
print(1)
`,
      file,
    );
    const target = grid(41.4, 15.1, { originX: -13200, originY: 1200 });
    const { samples, georeference } = await warpedByUs(file, target, 'nearest');
    const theirs = warpedByGdal(file, target, 'near');
    const different = [...samples.keys()].filter((i) => theirs[i] !== null && samples[i] !== theirs[i]);
    expect(theirs.filter((value) => value !== null).length).toBeGreaterThan(100_000);
    // The lattice is within 1/8 source pixel by promise and within 0.002 here: only pixels that near a border differ.
    for (const i of different) expect(distanceFromTie(target, georeference, i)).toBeLessThan(0.002);
    expect(different.length).toBeLessThan(0.004 * samples.length);
  });
});

/** Largest difference between neighbours in a row or a column of a raster. */
async function steepestStep(file: string): Promise<number> {
  const raster = await openRaster(await openFile(file));
  const { width, height } = raster.header;
  const all = await raster.readWindow({ row: 0, column: 0, rows: height, columns: width });
  await raster.close();
  let steepest = 0;
  for (let i = width; i < all.length; i++) {
    steepest = Math.max(steepest, Math.abs(all[i] - all[i - width]));
    if (i % width > 0) steepest = Math.max(steepest, Math.abs(all[i] - all[i - 1]));
  }
  return steepest;
}

const DEM = resolve('../shared/data/dem-basin-landcover');

describe.skipIf(!hasGdal || !existsSync(join(DEM, 'zion_srtm_90m.tif')))('an open elevation model in degrees', () => {
  const file = join(DEM, 'zion_srtm_90m.tif');
  const target = grid(37.3, -113, { originX: -9000, originY: 6000, resolution: 60, rows: 200, columns: 300 });

  it('is warped bilinearly as GDAL does it, to the error of the lattice on the steepest cliff', async () => {
    const { samples, georeference } = await warpedByUs(file, target, 'bilinear');
    const theirs = warpedByGdal(file, target, 'bilinear');
    const differences: number[] = [];
    let onlyOne = 0;
    theirs.forEach((value, i) => {
      if (Number.isNaN(samples[i]) !== (value === null)) onlyOne++;
      else if (value !== null) differences.push(Math.abs(samples[i] - value));
    });
    expect(onlyOne).toBe(0);
    // A lattice that is off by e source pixels changes a bilinear value by e * sqrt(2) times the steepest step.
    const off = transformError(target, georeference, chooseStep(target, georeference));
    expect(off).toBeLessThan(0.003);
    expect(Math.max(...differences)).toBeLessThan(1.1 * off * Math.SQRT2 * (await steepestStep(file)) + 0.001);
    // On the whole some 25 m a pixel times 0.0015 pixel.
    expect(differences.reduce((sum, value) => sum + value, 0) / differences.length).toBeLessThan(0.05);
    expect(Math.max(...samples) - Math.min(...samples)).toBeGreaterThan(500);
  });

  it('in windows is the crop of the whole', async () => {
    const raster = await openRaster(await openFile(file));
    const whole = await readWarped(
      raster,
      target,
      { row: 0, column: 0, rows: target.rows, columns: target.columns },
      { resampling: 'bilinear' },
    );
    for (const window of [
      { row: 0, column: 0, rows: 64, columns: 64 },
      { row: 37, column: 101, rows: 99, columns: 130 },
      { row: 199, column: 0, rows: 1, columns: 300 },
    ]) {
      const part = await readWarped(raster, target, window, { resampling: 'bilinear' });
      for (let r = 0; r < window.rows; r++) {
        const from = (window.row + r) * target.columns + window.column;
        expect(part.slice(r * window.columns, (r + 1) * window.columns)).toEqual(
          whole.slice(from, from + window.columns),
        );
      }
    }
    await raster.close();
  });
});
