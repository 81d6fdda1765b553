import { execFileSync } from 'node:child_process';
import { readFile } from 'node:fs/promises';
import { join } from 'node:path';
import { fromFile } from 'geotiff';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { toPlane } from '../../../infra/demo/plane.ts';
import { writeTiff } from '../../../infra/demo/tiff-writer.ts';
import { type DemoTruth, writeDemo } from '../../../infra/demo/write-demo.ts';
import { filesBelow, readCsv } from '../../support/products.ts';
import { temporaryFolder } from '../../support/run-cli.ts';

let folder: string;
let remove: () => Promise<void>;
let truth: DemoTruth;
let files: string[];

beforeAll(async () => {
  [folder, remove] = await temporaryFolder();
  truth = await writeDemo(folder, { seed: 3, size: 'tiny' });
  files = await filesBelow(folder);
});
afterAll(() => remove());

const band = (pattern: RegExp): string => join(folder, files.find((file) => pattern.test(file)) as string);

async function samples(file: string): Promise<ArrayLike<number>> {
  const tiff = await fromFile(file);
  const [values] = (await (await tiff.getImage()).readRasters()) as unknown as ArrayLike<number>[];
  tiff.close();
  return values;
}

describe('the TIFF writer', () => {
  it.each([
    ['bytes', Uint8Array.from({ length: 300 * 270 }, (_, k) => (k * 7) % 251)],
    ['16-bit numbers', Uint16Array.from({ length: 300 * 270 }, (_, k) => (k * 977) % 65521)],
    ['floats', Float32Array.from({ length: 300 * 270 }, (_, k) => Math.sin(k) * 1e3)],
  ])('writes %s that another reader gives back', async (name, values) => {
    const file = join(folder, `${name}.tif`);
    const place = { epsg: 32633, left: 0, top: 0, pixelWidth: 30, pixelHeight: 30 };
    await writeTiff(file, { samples: values, width: 300, height: 270, ...place });
    expect(Array.from(await samples(file))).toEqual(Array.from(values));
  });
});

interface GdalInfo {
  readonly geoTransform: number[];
  readonly wgs84Extent: { readonly coordinates: number[][][] };
}

function gdalInfo(file: string): GdalInfo {
  return JSON.parse(execFileSync('gdalinfo', ['-json', file], { stdio: ['ignore', 'pipe', 'ignore'] }).toString());
}

const hasGdal = (() => {
  try {
    execFileSync('gdalinfo', ['--version'], { stdio: 'ignore' });
    return true;
  } catch {
    return false;
  }
})();

describe.skipIf(!hasGdal)('GDAL reads the scenes', () => {
  it.each([
    ['LC08', 33],
    ['LE07', 32],
  ])('of %s in UTM zone %i, pixel centres on whole multiples of 30 m', (sensor, zone) => {
    const info = gdalInfo(band(new RegExp(`${sensor}.*_SR_B4\\.TIF$`)));
    expect(JSON.stringify(info)).toContain(`UTM zone ${zone}N`);
    const [left, width, , top, , height] = info.geoTransform;
    expect([width, height]).toEqual([30, -30]);
    expect(((left % 30) + 30) % 30).toBe(15);
    expect(((top % 30) + 30) % 30).toBe(15);
  });

  it('and puts the elevation where the basin is', () => {
    const info = gdalInfo(join(folder, 'dem.tif'));
    const longitudes = info.wgs84Extent.coordinates[0].map(([longitude]) => longitude);
    expect(Math.min(...longitudes)).toBeLessThan(12 - 2400 / 84_200);
    expect(Math.max(...longitudes)).toBeGreaterThan(12 + 2400 / 84_200);
  });
});

describe('the scenes', () => {
  it('hold land of known temperature, fill outside the footprint, and flagged clouds', async () => {
    const quality = await samples(band(/LC08.*20250716.*_QA_PIXEL\.TIF$/));
    const temperature = await samples(band(/LC08.*20250716.*_ST_B10\.TIF$/));
    const red = await samples(band(/LC08.*20250716.*_SR_B4\.TIF$/));
    const counts = new Map<number, number>();
    for (let k = 0; k < quality.length; k++) {
      counts.set(quality[k], (counts.get(quality[k]) ?? 0) + 1);
      expect(temperature[k] === 0).toBe(quality[k] === 1);
      expect(red[k] === 0).toBe(quality[k] === 1);
      if (quality[k] !== 21824) continue;
      const kelvin = temperature[k] * 0.00341802 + 149;
      expect(kelvin).toBeGreaterThan(295);
      expect(kelvin).toBeLessThan(327);
    }
    for (const flag of [1, 21824, 21952, 22280, 21826]) expect(counts.get(flag), String(flag)).toBeGreaterThan(10);
  });

  it('of two rows of a pass agree where they overlap', async () => {
    const read = async (row: number) => {
      const tiff = await fromFile(band(new RegExp(`LE07_L2SP_0340${row}_20250723.*_ST_B6\\.TIF$`)));
      const image = await tiff.getImage();
      const [values] = (await image.readRasters()) as unknown as Uint16Array[];
      const [x, y] = image.getOrigin();
      tiff.close();
      return { values, x, y, width: image.getWidth(), height: image.getHeight() };
    };
    const [north, south] = [await read(31), await read(32)];
    const [dx, dy] = [(south.x - north.x) / 30, (north.y - south.y) / 30];
    let [shared, worst] = [0, 0];
    for (let row = 0; row < south.height; row++) {
      for (let column = 0; column < south.width; column++) {
        const [r, c] = [row + dy, column + dx];
        if (r < 0 || c < 0 || r >= north.height || c >= north.width) continue;
        const [a, b] = [north.values[r * north.width + c], south.values[row * south.width + column]];
        if (a === 0 || b === 0) continue;
        shared++;
        worst = Math.max(worst, Math.abs(a - b));
      }
    }
    expect(shared).toBeGreaterThan(500);
    // One step of the stored number: positions differ by millimetres.
    expect(worst).toBeLessThanOrEqual(1);
  });
});

describe('the weather files', () => {
  it('agree with one another: a day is what its hours add up to', async () => {
    const [station] = await readCsv(join(folder, 'weather/stations.csv'));
    const hourly = await readCsv(join(folder, 'weather', station.hourly));
    const daily = await readCsv(join(folder, 'weather', station.daily));
    const first = hourly.findIndex(({ time_utc }) => time_utc === '2025-07-03T23:00Z');
    const hours = hourly.slice(first, first + 24);
    const day = daily.find(({ date }) => date === '2025-07-04') as Record<string, string>;
    const column = (name: string) => hours.map((hour) => Number(hour[name]));
    const megajoules = column('solar_radiation_w_m2').reduce((sum, value) => sum + value * 0.0036, 0);
    expect(Number(day.solar_radiation_mj_m2)).toBeCloseTo(megajoules, 2);
    const warmest = Math.max(...column('air_temperature_c'));
    expect(Number(day.temperature_max_c)).toBeGreaterThanOrEqual(warmest);
    expect(Number(day.temperature_max_c)).toBeLessThan(warmest + 0.5);
    const wind = column('wind_speed_m_s').reduce((sum, value) => sum + value / 24, 0);
    expect(Number(day.wind_speed_m_s)).toBeCloseTo(wind, 1);
  });

  it('have stations of their own height and place inside the basin', async () => {
    const stations = await readCsv(join(folder, 'weather/stations.csv'));
    expect(stations.length).toBeGreaterThanOrEqual(3);
    const heights = stations.map((station) => Number(station.elevation_m));
    expect(Math.max(...heights) - Math.min(...heights)).toBeGreaterThan(5);
    for (const { longitude_deg, latitude_deg } of stations) {
      const [x, y] = toPlane(Number(longitude_deg), Number(latitude_deg));
      expect(Math.max(Math.abs(x), Math.abs(y))).toBeLessThan(2400);
    }
  });

  it('tell of no rain from a fortnight before the first overpass on', async () => {
    const [station] = await readCsv(join(folder, 'weather/stations.csv'));
    const daily = await readCsv(join(folder, 'weather', station.daily));
    const rain = daily.filter(({ precipitation_mm }) => Number(precipitation_mm) > 0).map(({ date }) => date);
    expect(rain).toEqual(['2025-05-09', '2025-05-10']);
    expect(truth.passes[0].date).toBe('2025-05-29');
  });
});

describe('the basin file', () => {
  it('names the files that are there', async () => {
    const text = await readFile(join(folder, 'basin.yaml'), 'utf8');
    for (const name of ['basin.geojson', 'subbasins.geojson', 'weather/stations.csv', 'dem.tif', 'landcover.tif']) {
      expect(text).toContain(name);
      expect(files).toContain(name);
    }
  });
});
