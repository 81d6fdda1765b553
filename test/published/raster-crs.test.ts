import { execFileSync } from 'node:child_process';
import { existsSync } from 'node:fs';
import { join } from 'node:path';
import proj4 from 'proj4';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { openFile } from '../../shared/raster/file-source.ts';
import { openRaster } from '../../shared/raster/raster-file.ts';
import { gdalJson, hasGdal } from '../support/gdal.ts';
import { temporaryFolder } from '../support/run-cli.ts';

/** Points (longitude, latitude) through PROJ, by GDAL's own command. */
function gdalTransform(target: string, points: readonly (readonly number[])[]): number[][] {
  const input = points.map(([longitude, latitude]) => `${longitude} ${latitude}`).join('\n');
  const args = ['-s_srs', 'OGC:CRS84', '-t_srs', target, '-output_xy'];
  const output = execFileSync('gdaltransform', args, { input: `${input}\n`, encoding: 'utf8' });
  return output
    .trim()
    .split('\n')
    .map((line) => line.split(' ').map(Number));
}

function largestDistance(definition: string, target: string, points: readonly (readonly number[])[]): number {
  const theirs = gdalTransform(target, points);
  const ours = points.map((point) => proj4(definition).forward([...point]) as [number, number]);
  return Math.max(...ours.map(([x, y], k) => Math.hypot(x - theirs[k][0], y - theirs[k][1])));
}

/** A net of points about a place. */
function around(longitude: number, latitude: number, degrees: number): number[][] {
  const steps = [-1, -0.6, -0.1, 0.3, 0.8, 1].map((share) => share * degrees);
  return steps.flatMap((east) => steps.map((north) => [longitude + east, latitude + north]));
}

describe.skipIf(!hasGdal)('proj4 against PROJ (gdaltransform), to 1 mm', () => {
  it.each([
    ['+proj=laea +lat_0=41.3 +lon_0=15.1 +x_0=0 +y_0=0 +datum=WGS84 +units=m +no_defs', 15.1, 41.3, 8],
    ['+proj=laea +lat_0=-12.7 +lon_0=-59.9 +x_0=0 +y_0=0 +datum=WGS84 +units=m +no_defs', -59.9, -12.7, 10],
    ['+proj=laea +lat_0=0 +lon_0=179.9 +x_0=0 +y_0=0 +datum=WGS84 +units=m +no_defs', 175, 0, 4],
    ['+proj=utm +zone=33 +datum=WGS84 +units=m +no_defs', 15, 60, 6],
    ['+proj=utm +zone=18 +south +datum=WGS84 +units=m +no_defs', -75, -9, 6],
  ])('%s', (definition, longitude, latitude, degrees) => {
    expect(largestDistance(definition, definition, around(longitude, latitude, degrees))).toBeLessThan(1e-3);
  });
});

/** Systems as GDAL writes them into GeoKeys, and a place in each. */
const SYSTEMS = [
  ['EPSG:32633', 15, 41, 3],
  ['EPSG:26913', -105, 40, 3],
  ['EPSG:3035', 10, 50, 8],
  ['EPSG:5070', -100, 40, 9],
  ['+proj=laea +lat_0=41.3 +lon_0=15.1 +datum=WGS84 +units=m', 15, 41, 5],
  ['+proj=aea +lat_0=23 +lon_0=-96 +lat_1=29.5 +lat_2=45.5 +datum=NAD83 +units=m', -100, 40, 9],
  ['+proj=tmerc +lat_0=2 +lon_0=31.5 +k=0.9998 +x_0=300000 +y_0=-1000 +datum=WGS84 +units=m', 32, 3, 2],
] as const;

describe.skipIf(!hasGdal)('the system of a file that GDAL writes', () => {
  let folder: string;
  let remove: () => Promise<void>;
  beforeAll(async () => {
    [folder, remove] = await temporaryFolder();
  });
  afterAll(() => remove());

  const write = (name: string, system: string): string => {
    const file = join(folder, name);
    gdalJson(
      `
d = gdal.GetDriverByName('GTiff').Create(sys.argv[1], 4, 4, 1, gdal.GDT_Byte)
srs = osr.SpatialReference(); srs.SetFromUserInput(sys.argv[2])
d.SetGeoTransform((1000, 30, 0, 2000, 0, -30)); d.SetProjection(srs.ExportToWkt()); d = None
print(1)
`,
      file,
      system,
    );
    return file;
  };

  it.each(SYSTEMS)(
    '%s is found, with points where PROJ has them to 1 mm',
    async (system, longitude, latitude, degrees) => {
      const raster = await openRaster(await openFile(write('system.tif', system)));
      await raster.close();
      const { proj4: definition } = raster.header.georeference;
      const points = around(longitude, latitude, degrees);
      const theirs = gdalJson<string>(
        's = osr.SpatialReference(gdal.Open(sys.argv[1]).GetProjection()); print(json.dumps(s.ExportToProj4()))',
        join(folder, 'system.tif'),
      );
      // As GDAL reads the same file; its own shift of a metre or so from WGS 84 to NAD83 is left out on both sides.
      expect(
        largestDistance(definition, theirs.replace('+datum=NAD83', '+ellps=GRS80 +towgs84=0,0,0'), points),
      ).toBeLessThan(1e-3);
    },
  );

  it.each([
    ['EPSG:26713', 'EPSG:26713'],
    ['+proj=aea +lat_0=23 +lon_0=-96 +lat_1=29.5 +lat_2=45.5 +datum=NAD27 +units=m', 'EPSG:4267'],
    ['+proj=aea +lat_0=23 +lon_0=-96 +lat_1=29.5 +lat_2=45.5 +a=6370997 +b=6370997 +units=m', 'datum'],
    ['+proj=aea +lat_0=23 +lon_0=-96 +lat_1=29.5 +lat_2=45.5 +datum=WGS84 +units=us-ft', 'unit'],
    ['+proj=sinu +lon_0=0 +a=6371007.181 +b=6371007.181 +units=m', 'method'],
  ])('%s is refused: it would be placed wrong, unseen', async (system, said) => {
    const opened = openRaster(await openFile(write('refused.tif', system)));
    await expect(opened).rejects.toMatchObject({ code: 'RASTER_NO_CRS', message: expect.stringContaining(said) });
  });
});

const NLCD = '../shared/data/dem-basin-landcover/deb-stars_nlcd_3km_lc.tif';
describe.skipIf(!hasGdal || !existsSync(NLCD))('a land-cover file in Albers on NAD83', () => {
  it('lies where GDAL has it', async () => {
    const raster = await openRaster(await openFile(NLCD));
    await raster.close();
    const { originX, originY, proj4: definition } = raster.header.georeference;
    const [longitude, latitude] = proj4(definition).inverse([originX, originY]) as [number, number];
    const wkt = gdalJson<string>(
      'print(json.dumps(osr.SpatialReference(gdal.Open(sys.argv[1]).GetProjection()).ExportToProj4()))',
      NLCD,
    );
    const [[x, y]] = gdalTransform(wkt.replace('+datum=NAD83', '+ellps=GRS80 +towgs84=0,0,0'), [[longitude, latitude]]);
    expect(Math.hypot(x - originX, y - originY)).toBeLessThan(1e-3);
  });
});
