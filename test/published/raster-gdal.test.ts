import { execFileSync } from 'node:child_process';
import { existsSync } from 'node:fs';
import { join, resolve } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { GridSpec } from '../../shared/contract/grid.ts';
import { openFile } from '../../shared/raster/file-source.ts';
import { openRaster, type RasterSamples } from '../../shared/raster/raster-file.ts';
import { transformError } from '../../shared/raster/transform.ts';
import { readWarped } from '../../shared/raster/warp.ts';
import { checkCog, gdalJson, hasGdal } from '../support/gdal.ts';
import { temporaryFolder } from '../support/run-cli.ts';
import { readAll, writeTestCog } from '../support/test-cog.ts';

let folder: string;
let remove: () => Promise<void>;
beforeAll(async () => {
  [folder, remove] = await temporaryFolder();
});
afterAll(() => remove());

const laea: GridSpec = {
  crs: {
    code: 'laea:41.3,15.1',
    proj4: '+proj=laea +lat_0=41.3 +lon_0=15.1 +x_0=0 +y_0=0 +datum=WGS84 +units=m +no_defs',
    kind: 'laea',
    latitudeOfOriginDeg: 41.3,
    longitudeOfOriginDeg: 15.1,
  },
  originX: -6000,
  originY: 9000,
  resolution: 30,
  rows: 700,
  columns: 900,
  tileSize: 256,
};
const utm: GridSpec = {
  ...laea,
  crs: { code: 'EPSG:32633', proj4: '+proj=utm +zone=33 +datum=WGS84 +units=m +no_defs', kind: 'epsg', epsg: 32633 },
  originX: 480000,
  originY: 4590000,
};

describe.skipIf(!hasGdal)('our COG against GDAL', () => {
  const wave = (scale: number) => (i: number) => Math.round(scale * (1 + Math.sin(i / 977) * Math.cos(i / 61)));
  it.each([
    ['int16', 'deflate', laea, Int16Array, -32768],
    ['uint16', 'zstd', utm, Uint16Array, 65535],
    ['uint8', 'deflate', utm, Uint8Array, 255],
    ['float32', 'deflate', laea, Float32Array, -9999],
  ] as const)(
    '%s %s passes the full check and is read equal at every level',
    async (type, compression, grid, Samples, nodata) => {
      const file = join(folder, `cog-${type}.tif`);
      const samples = new Samples(grid.rows * grid.columns).map((_, i) => wave(120)(i)) as RasterSamples;
      samples.fill(nodata, 0, 5000);
      const images = await writeTestCog(file, grid, samples, type, compression, nodata);
      const { valid, text } = checkCog(file);
      expect(valid, text).toBe(true);
      const found = gdalJson<{
        levels: number[][];
        scale: number;
        unit: string;
        note: string;
        description: string;
        layout: string;
        min: string;
      }>(
        `
import numpy
d = gdal.Open(sys.argv[1]); b = d.GetRasterBand(1)
levels = [b] + [b.GetOverview(k) for k in range(b.GetOverviewCount())]
print(json.dumps({'levels': [l.ReadAsArray().astype('f8').ravel().tolist() for l in levels], 'scale': b.GetScale(),
  'unit': b.GetUnitType(), 'note': d.GetMetadataItem('note'), 'description': b.GetDescription(),
  'layout': d.GetMetadataItem('LAYOUT', 'IMAGE_STRUCTURE'), 'min': b.GetMetadataItem('STATISTICS_MINIMUM')}))
`,
        file,
      );
      const { levels: _, ...facts } = found;
      expect(facts).toMatchObject({
        scale: 0.01,
        unit: 'mm',
        note: 'less < more & "quoted"',
        description: 'a test',
        layout: 'COG',
        min: '-300',
      });
      expect(found.levels).toHaveLength(images.length);
      images.forEach((image, level) => {
        expect(found.levels[level].length).toBe(image.length);
        expect(found.levels[level].every((value, i) => value === image[i])).toBe(true);
      });
      expect(await readAll(file)).toEqual(samples);
    },
  );

  it.each([laea, utm])('puts $crs.code where proj4 has it: corners agree with gdaltransform to 1 mm', async (grid) => {
    const file = join(folder, `corner-${grid.crs.kind}.tif`);
    await writeTestCog(file, grid, new Uint8Array(grid.rows * grid.columns), 'uint8', 'deflate', null);
    const proj4 = (await import('proj4')).default;
    for (const [x, y] of [
      [0, 0],
      [grid.columns, 0],
      [grid.columns, grid.rows],
      [0, grid.rows],
    ]) {
      const [east, north] = [grid.originX + x * 30, grid.originY - y * 30];
      const [lon, lat] = proj4(grid.crs.proj4).inverse([east, north]) as [number, number];
      const back = execFileSync(
        'gdaltransform',
        [
          '-s_srs',
          'EPSG:4326',
          '-t_srs',
          gdalJson<string>('d = gdal.Open(sys.argv[1]); print(json.dumps(d.GetProjection()))', file),
        ],
        { input: `${lon} ${lat}\n`, encoding: 'utf8' },
      );
      const [gx, gy] = back.split(' ').map(Number);
      expect(Math.hypot(gx - east, gy - north)).toBeLessThan(1e-3);
    }
  });
});

describe.skipIf(!hasGdal)('our warp against gdalwarp', () => {
  it('bilinear: equal inside to 0.02 of a field that spans 100, with the transform within 1/8 pixel', async () => {
    const source = join(folder, 'warp-source.tif');
    gdalJson(
      `
import numpy
y, x = numpy.mgrid[0:900, 0:1200]
a = (50 + 40 * numpy.sin(x / 15.0) * numpy.cos(y / 19.0)).astype('f4')
a[300:340, 500:560] = -9999
d = gdal.GetDriverByName('GTiff').Create(sys.argv[1], 1200, 900, 1, gdal.GDT_Float32)
d.SetGeoTransform((495015, 30, 0, 4586985, 0, -30)); s = osr.SpatialReference(); s.ImportFromEPSG(32633); d.SetProjection(s.ExportToWkt())
d.GetRasterBand(1).WriteArray(a); d.GetRasterBand(1).SetNoDataValue(-9999); d = None
print(1)
`,
      source,
    );
    const raster = await openRaster(await openFile(source));
    expect(transformError(laea, raster.header.georeference, 64)).toBeLessThan(1 / 8);
    const window = { row: 0, column: 0, rows: laea.rows, columns: laea.columns };
    const ours = await readWarped(raster, laea, window, { resampling: 'bilinear' });
    await raster.close();
    const theirs = gdalJson<(number | null)[]>(
      `
w = gdal.Warp('', sys.argv[1], format='MEM', dstSRS=sys.argv[2], resampleAlg='bilinear', errorThreshold=0, dstNodata=-9999,
  outputBounds=(-6000, 9000 - 700 * 30, -6000 + 900 * 30, 9000), width=900, height=700)
print(json.dumps([None if v == -9999 else v for v in w.ReadAsArray().astype('f8').ravel().tolist()]))
`,
      source,
      laea.crs.proj4,
    );
    let [compared, worst, onlyOne] = [0, 0, 0];
    ours.forEach((value, i) => {
      const their = theirs[i];
      if (Number.isNaN(value) !== (their === null)) onlyOne++;
      else if (their !== null) {
        compared++;
        worst = Math.max(worst, Math.abs(value - their));
      }
    });
    console.log(`warp: ${compared} pixels, largest difference ${worst.toFixed(4)}, valid in one only ${onlyOne}`);
    expect(compared).toBeGreaterThan(300_000);
    expect(onlyOne / compared).toBeLessThan(0.002);
    // Beside nodata the two share weights differently; elsewhere they agree to the lattice's error.
    expect(worst).toBeLessThan(4);
    const inner = ours.filter(
      (value, i) => theirs[i] !== null && Math.abs(value - (theirs[i] as number)) > 0.02,
    ).length;
    expect(inner / compared).toBeLessThan(0.002);
  });
});

const DATA = resolve('../shared/data');
describe.skipIf(!hasGdal || !existsSync(DATA))('open files that others wrote', () => {
  it.each([
    'l8-c2l2-fullscene-decimated-008059/LC08_L2SP_008059_20191201_20200825_02_T1_ST_B10.TIF',
    'l8-c2l2-fullscene-decimated-008059/LC08_L2SP_008059_20191201_20200825_02_T1_QA_PIXEL.TIF',
    'dem-basin-landcover/davos_srtm_30m.tif',
    'dem-basin-landcover/zion_srtm_90m.tif',
    'l5-tm-224063-rstoolbox/LT52240631988227CUB02_B6.TIF',
  ])('%s is read as GDAL reads it', async (path) => {
    const file = join(DATA, path);
    const found = gdalJson<{ gt: number[]; values: number[] }>(
      `
d = gdal.Open(sys.argv[1]); b = d.GetRasterBand(1)
print(json.dumps({'gt': d.GetGeoTransform(), 'values': b.ReadAsArray().astype('f8').ravel().tolist()}))
`,
      file,
    );
    const raster = await openRaster(await openFile(file));
    const { originX, originY, pixelWidth, pixelHeight } = raster.header.georeference;
    [originX, pixelWidth, originY, -pixelHeight].forEach((value, k) => {
      expect(value).toBeCloseTo([found.gt[0], found.gt[1], found.gt[3], found.gt[5]][k], 9);
    });
    await raster.close();
    const ours = await readAll(file);
    expect(ours.length).toBe(found.values.length);
    expect(found.values.every((value, i) => value === ours[i])).toBe(true);
  });
});
