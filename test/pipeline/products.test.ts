import { readFile } from 'node:fs/promises';
import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { writeDemo } from '../../infra/demo/write-demo.ts';
import { PRODUCTS, type ProductName } from '../../shared/contract/products.ts';
import { checkCog, gdalJson, hasGdal } from '../support/gdal.ts';
import { filesBelow, readCsv, sha256 } from '../support/products.ts';
import { runCli, temporaryFolder } from '../support/run-cli.ts';

let folder: string;
let remove: () => Promise<void>;
let products: string[];
const out = (path: string) => join(folder, 'out', path);

beforeAll(async () => {
  [folder, remove] = await temporaryFolder();
  await writeDemo(folder, { seed: 5, size: 'small' });
  const all =
    'products=[et-day, et-fraction, evaporative-fraction, net-radiation, soil-heat, sensible-heat, latent-heat, surface-temperature, et-period, et-ratio]';
  const { exitCode, stderr } = await runCli(
    'run',
    join(folder, 'basin.yaml'),
    '--set',
    all,
    '--set',
    'grid.tile=128',
    '--threads',
    '2',
  );
  expect(exitCode, stderr).toBe(0);
  products = await filesBelow(out('products'), (path) => path.endsWith('.tif'));
});
afterAll(() => remove());

describe.skipIf(!hasGdal)('every product, asked of GDAL', () => {
  it('passes the full check of Cloud Optimized GeoTIFF', () => {
    expect(products.length).toBeGreaterThan(50);
    for (const product of products) {
      const { valid, text } = checkCog(out(`products/${product}`));
      expect(valid, text).toBe(true);
    }
  });

  it('says its unit, scale, nodata, statistics and reference system', () => {
    for (const path of products) {
      const found = gdalJson<{
        unit: string;
        scale: number;
        offset: number;
        nodata: number | null;
        stats: number[];
        true: number[];
        overviews: number;
        wkt: string;
      }>(
        `
d = gdal.Open(sys.argv[1]); b = d.GetRasterBand(1)
m = b.GetMetadata()
a = b.ReadAsArray().astype('f8'); n = b.GetNoDataValue()
v = a[a != n] if n is not None else a.ravel()
print(json.dumps({'unit': b.GetUnitType(), 'scale': b.GetScale(), 'offset': b.GetOffset(), 'nodata': n,
  'stats': [float(m['STATISTICS_MINIMUM']), float(m['STATISTICS_MAXIMUM']), float(m['STATISTICS_MEAN']), float(m['STATISTICS_STDDEV'])] if v.size else [],
  'true': [float(v.min()), float(v.max()), float(v.mean()), float(v.std())] if v.size else [],
  'overviews': b.GetOverviewCount(), 'wkt': d.GetProjection()}))
`,
        out(`products/${path}`),
      );
      const name = path.slice(path.lastIndexOf('/') + 1, -4) as ProductName;
      const entry = PRODUCTS[name];
      expect(found, path).toMatchObject({
        unit: entry.unit,
        scale: entry.scale,
        offset: entry.offset,
        nodata: entry.nodata,
      });
      expect(found.overviews).toBeGreaterThan(0);
      expect(found.wkt).toMatch(/Lambert_Azimuthal_Equal_Area/);
      found.true.forEach((value, k) => {
        expect(Math.abs(found.stats[k] - value), `${path} statistic ${k}`).toBeLessThan(
          1e-6 * Math.max(1, Math.abs(value)),
        );
      });
    }
  });

  it('closes the energy balance at every pixel to the rounding of the stored values: Rn - G = H + LE', () => {
    const dates = [
      ...new Set(products.filter((path) => path.includes('net-radiation')).map((path) => path.split('/')[0])),
    ];
    for (const date of dates) {
      const worst = gdalJson<number>(
        `
r = []
valid = None
for name in ('net-radiation', 'soil-heat', 'sensible-heat', 'latent-heat'):
    d = gdal.Open(sys.argv[1] + '/' + name + '.tif'); b = d.GetRasterBand(1); a = b.ReadAsArray()
    ok = a != b.GetNoDataValue(); valid = ok if valid is None else valid & ok
    r.append(a.astype('f8') * b.GetScale())
left = abs(r[0] - r[1] - r[2] - r[3])[valid]
print(json.dumps(float(left.max())))
`,
        out(`products/${date}`),
      );
      expect(worst).toBeLessThanOrEqual(0.2001);
    }
  });
});

describe('the tables and the catalogue', () => {
  it('zone volumes add up to the basin within 1e-9, and are the sum of the published pixels', async () => {
    const rows = (await readCsv(out('tables/zones.csv'))).filter((row) => row.land_cover === 'all');
    for (const period of new Set(rows.map((row) => row.period))) {
      const of = rows.filter((row) => row.period === period);
      const basin = Number(of.find((row) => row.zone_kind === 'basin')?.et_volume_m3);
      const zones = of
        .filter((row) => row.zone_kind === 'sub-basin')
        .reduce((sum, row) => sum + Number(row.et_volume_m3), 0);
      // The table has one decimal of a cubic metre: six zones may lose 0.05 each.
      expect(Math.abs(zones - basin)).toBeLessThan(0.35 + 1e-9 * basin);
    }
  });

  it('land-cover classes add up to their zone', async () => {
    const rows = await readCsv(out('tables/zones.csv'));
    for (const whole of rows.filter((row) => row.land_cover === 'all')) {
      const parts = rows.filter(
        (row) => row.zone === whole.zone && row.period === whole.period && row.land_cover !== 'all',
      );
      const sum = parts.reduce((total, row) => total + Number(row.area_km2), 0);
      expect(sum).toBeCloseTo(Number(whole.area_km2), 4);
    }
  });

  it('STAC items give the size and SHA-256 of each file', async () => {
    const items = await filesBelow(out('products'), (path) => path.endsWith('item.json'));
    expect(items.length).toBeGreaterThan(8);
    const item = JSON.parse(await readFile(out(`products/${items[0]}`), 'utf8'));
    expect(item.stac_version).toBe('1.1.0');
    for (const asset of Object.values(item.assets) as {
      href: string;
      'file:checksum': string;
      'file:size': number;
    }[]) {
      const file = join(out('products'), items[0], '..', asset.href);
      expect(asset['file:checksum']).toBe(`1220${await sha256(file)}`);
      expect(asset['file:size']).toBe((await readFile(file)).length);
    }
  });

  it('every anchor has its place, values and reason', async () => {
    const rows = await readCsv(out('tables/anchors.csv'));
    expect(rows.length).toBeGreaterThan(20);
    for (const row of rows) {
      for (const column of [
        'row',
        'column',
        'longitude_deg',
        'latitude_deg',
        'ndvi',
        'surface_temperature_k',
        'temperature_difference_k',
        'reason',
      ]) {
        expect(row[column], column).not.toBe('');
      }
    }
  });

  it('the report is one file without outside references', async () => {
    const html = await readFile(out('report.html'), 'utf8');
    expect(html).not.toMatch(/(src|href)="https?:/);
    expect(html).toMatch(/they do not decide/);
  });

  it('lineage walks from layers to scenes, anchors, weather and parameters', async () => {
    const [run] = await filesBelow(out('runs'), (path) => path.endsWith('lineage.json'));
    const lineage = JSON.parse(await readFile(out(`runs/${run}`), 'utf8'));
    expect(lineage.layers.length).toBeGreaterThan(8);
    const [pass] = lineage.passes;
    expect(pass.scenes[0].fingerprint).toMatch(/^[0-9a-f]/);
    expect(pass.calibration.anchors.length).toBeGreaterThan(1);
    expect(pass.weather.overpass.length).toBeGreaterThan(0);
    expect(lineage.basin.method.lapseRateKPerM).toBe(0.0065);
  });
});
