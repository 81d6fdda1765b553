import { existsSync } from 'node:fs';
import { mkdir, readFile, writeFile } from 'node:fs/promises';
import { join, resolve } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { gdalJson, hasGdal } from '../support/gdal.ts';
import { readCsv } from '../support/products.ts';
import { runCli, temporaryFolder } from '../support/run-cli.ts';

/**
 * A real Landsat 8 Collection 2 Level-2 scene (path 8, row 59, 2019-12-01, thinned to 512 x 512 pixels) through the
 * whole run. The weather is NOT measured: it is plausible for the place and day, and only good for seeing that real
 * scenes go through.
 */
const SCENE = resolve('../shared/data/l8-c2l2-fullscene-decimated-008059');
const present = existsSync(SCENE);

let folder: string;
let remove: () => Promise<void>;

const hours = Array.from({ length: 72 }, (_, k) => {
  const time = new Date(Date.UTC(2019, 10, 30) + k * 3_600_000);
  const local = (time.getUTCHours() + 19) % 24;
  const sun = Math.max(0, Math.sin(((local - 6 + 0.5) / 12) * Math.PI));
  const air = 23 + 6 * Math.max(-0.6, Math.sin(((local - 8.5) / 12) * Math.PI));
  return [
    time.toISOString().replace('.000Z', 'Z'),
    air.toFixed(2),
    '72',
    (0.8 + 1.2 * sun).toFixed(2),
    (900 * sun).toFixed(1),
    '0',
  ];
});

beforeAll(async () => {
  if (!present) return;
  [folder, remove] = await temporaryFolder();
  await mkdir(join(folder, 'weather'));
  const list =
    'station,longitude_deg,latitude_deg,elevation_m,wind_height_m,hourly,daily\nPlausible,-75.3,1.5,400,2,hourly.csv,\n';
  await writeFile(join(folder, 'weather/stations.csv'), list);
  const header =
    'time_utc,air_temperature_c,relative_humidity_pct,wind_speed_m_s,solar_radiation_w_m2,precipitation_mm';
  await writeFile(join(folder, 'weather/hourly.csv'), `${[header, ...hours.map((row) => row.join(','))].join('\n')}\n`);
  const ring = [
    [-75.9, 0.6],
    [-74.3, 0.6],
    [-74.3, 2.3],
    [-75.9, 2.3],
    [-75.9, 0.6],
  ];
  await writeFile(join(folder, 'basin.geojson'), JSON.stringify({ type: 'Polygon', coordinates: [ring] }));
  await writeFile(
    join(folder, 'basin.yaml'),
    `region: { name: Real scene, boundary: basin.geojson }
grid: { resolution: 450, tile: 128 }
period: { from: 2019-12-01, to: 2019-12-01, step: whole }
scenes: [{ source: landsat-level-2, path: ${JSON.stringify(SCENE)} }]
weather: [{ source: station-csv, path: weather/stations.csv }]
elevation: 400
method: { anchors: { homogeneity: { maxNdviSd: 0.12, maxTemperatureSdK: 2.5 } } }
products: [et-day, et-fraction, surface-temperature, net-radiation, soil-heat, sensible-heat, latent-heat, et-period]
`,
  );
});
afterAll(() => remove?.());

describe.skipIf(!present)('a real Landsat scene', () => {
  it('goes through survey, prepare, anchors, flux and mosaic', async () => {
    const { exitCode, stderr } = await runCli('run', join(folder, 'basin.yaml'), '--threads', '2');
    expect(exitCode, stderr).toBe(0);
    const anchors = await readCsv(join(folder, 'out/tables/anchors.csv'));
    const of = (role: string) => anchors.filter((row) => row.role === role);
    expect(of('cold').length).toBeGreaterThan(0);
    expect(of('hot').length).toBeGreaterThan(0);
    const mean = (rows: Record<string, string>[], key: string) =>
      rows.reduce((sum, row) => sum + Number(row[key]), 0) / rows.length;
    expect(mean(of('hot'), 'surface_temperature_k')).toBeGreaterThan(mean(of('cold'), 'surface_temperature_k') + 3);
    expect(mean(of('cold'), 'ndvi')).toBeGreaterThan(mean(of('hot'), 'ndvi') + 0.1);
  });

  it('finds the clear share that the scene is known to have: 16 % of its valid pixels (counted in its quality band)', async () => {
    const record = JSON.parse(await readFile(join(folder, 'out/products/2019-12-01/item.json'), 'utf8'));
    const valid = record.assets['surface-temperature'].bands[0].statistics.valid_percent;
    expect(valid).toBeGreaterThan(8);
    expect(valid).toBeLessThan(30);
  });

  it('gives fluxes within the physical bounds of a clear late morning', async () => {
    const rows = await readCsv(join(folder, 'out/tables/bounds.csv'));
    for (const row of rows.filter(({ when }) => when === '2019-12-01')) {
      expect(Number(row.outside_fraction), `${row.product} ${row.minimum}..${row.maximum}`).toBeLessThan(0.05);
    }
  });

  it.skipIf(!hasGdal)('has the surface temperature that GDAL makes of the delivered numbers on the same grid', () => {
    const st = join(SCENE, 'LC08_L2SP_008059_20191201_20200825_02_T1_ST_B10.TIF');
    const ours = join(folder, 'out/products/2019-12-01/surface-temperature.tif');
    const found = gdalJson<{ n: number; bias: number; spread: number }>(
      `
ours = gdal.Open(sys.argv[1]); band = ours.GetRasterBand(1)
mine = band.ReadAsArray().astype('f8') * band.GetScale() + band.GetOffset()
valid = band.ReadAsArray() != band.GetNoDataValue()
gt = ours.GetGeoTransform()
bounds = (gt[0], gt[3] + gt[5] * ours.RasterYSize, gt[0] + gt[1] * ours.RasterXSize, gt[3])
w = gdal.Warp('', sys.argv[2], format='MEM', dstSRS=ours.GetProjection(), resampleAlg='near', srcNodata=0,
  dstNodata=0, outputBounds=bounds, width=ours.RasterXSize, height=ours.RasterYSize)
dn = w.GetRasterBand(1).ReadAsArray().astype('f8')
d = (mine - (dn * 0.00341802 + 149.0))[valid & (dn > 0)]
print(json.dumps({'n': int(d.size), 'bias': float(d.mean()), 'spread': float(abs(d).mean())}))
`,
      ours,
      st,
    );
    // Nearest against bilinear over 450 m pixels: no bias, and a mean difference of a fraction of the local contrast.
    expect(found.n).toBeGreaterThan(5000);
    expect(Math.abs(found.bias)).toBeLessThan(0.05);
    expect(found.spread).toBeLessThan(1.2);
  });
});
