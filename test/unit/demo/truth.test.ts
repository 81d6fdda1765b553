import { join } from 'node:path';
import { fromFile } from 'geotiff';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { dayOf } from '../../../infra/demo/calendar.ts';
import { toDegrees } from '../../../infra/demo/plane.ts';
import { tallReferenceDay } from '../../../infra/demo/reference-et.ts';
import { makeWorld } from '../../../infra/demo/world.ts';
import {
  compareTruth,
  type DemoTruth,
  loadTruth,
  truthAt,
  truthMap,
  truthZoneVolumes,
  writeDemo,
} from '../../../infra/demo/write-demo.ts';
import { temporaryFolder } from '../../support/run-cli.ts';

let folder: string;
let remove: () => Promise<void>;
let truth: DemoTruth;

beforeAll(async () => {
  [folder, remove] = await temporaryFolder();
  await writeDemo(folder, { seed: 4, size: 'tiny' });
  truth = await loadTruth(folder);
});
afterAll(() => remove());

const grid = {
  crs: {
    code: 'EPSG:32633',
    proj4: '+proj=utm +zone=33 +datum=WGS84 +units=m +no_defs',
    kind: 'epsg' as const,
    epsg: 32633,
  },
  originX: 246_600,
  originY: 4_544_400,
  resolution: 30,
  rows: 90,
  columns: 80,
};

describe('the true ET', () => {
  const field = (crop: string) => {
    const { list } = makeWorld(4, 'tiny').land.parcels;
    const found = list.find((parcel) => parcel.crop === crop && Math.hypot(parcel.x, parcel.y) < 2400);
    return found as (typeof list)[number];
  };

  it('of a dense wet field is 1.05 times tall reference ET, and of dry fallow nothing', () => {
    const world = makeWorld(4, 'tiny');
    for (const date of ['2025-06-01', '2025-06-14', '2025-07-31']) {
      const { x, y } = field('lucerne');
      const site = { x, y, elevation: world.terrain.elevation(x, y) };
      const reference = tallReferenceDay(world.weather, dayOf(date), site);
      expect(truthAt(truth, ...toDegrees(x, y), date) / reference).toBeCloseTo(1.05, 3);
      const fallow = field('fallow');
      expect(truthAt(truth, ...toDegrees(fallow.x, fallow.y), date)).toBeLessThan(0.05);
    }
  });

  it('of a period is the sum of its days', () => {
    const { x, y } = field('maize');
    const place = toDegrees(x, y);
    let sum = 0;
    for (let day = 1; day <= 30; day++) sum += truthAt(truth, ...place, `2025-06-${String(day).padStart(2, '0')}`);
    expect(truthAt(truth, ...place, '2025-06')).toBeCloseTo(sum, 6);
    const whole = truthAt(truth, ...place, '2025-06-01_2025-07-31');
    expect(whole).toBeCloseTo(sum + truthAt(truth, ...place, '2025-07'), 6);
  });

  it('on a map is that of its pixel centres', () => {
    const map = truthMap(truth, grid, '2025-07-07');
    expect(map).toHaveLength(grid.rows * grid.columns);
    const comparison = compareTruth(truth, grid, '2025-07-07', map);
    expect(comparison).toMatchObject({ count: map.length, bias: 0, rmse: 0 });
    expect(comparison.correlation).toBeCloseTo(1, 10);
  });

  it('is compared pixel by pixel: bias, error and missing pixels', () => {
    const map = truthMap(truth, grid, '2025-07');
    const estimate = map.map((value, k) => (k % 3 === 0 ? Number.NaN : value + (k % 3 === 1 ? 4 : 2)));
    const { count, bias, rmse, biasPct, meanTruthMm } = compareTruth(truth, grid, '2025-07', estimate);
    expect(count).toBe((map.length * 2) / 3);
    expect(bias).toBeCloseTo(3, 4);
    expect(rmse).toBeCloseTo(Math.sqrt(10), 4);
    expect(biasPct).toBeCloseTo((100 * 3) / meanTruthMm, 4);
    const only = compareTruth(truth, grid, '2025-07', estimate, (index) => index % 3 === 1);
    expect(only.bias).toBeCloseTo(4, 4);
  });

  it('refuses a date or period that it does not know', () => {
    expect(() => truthAt(truth, 12, 41, '2025-09')).toThrow(/knows no/);
    expect(() => truthZoneVolumes(truth, '2025-09')).toThrow(/no period/);
  });
});

describe('the true volumes', () => {
  it('of the months add up to those of the period', () => {
    const [june, july, whole] = ['2025-06', '2025-07', '2025-06-01_2025-07-31'].map((id) =>
      truthZoneVolumes(truth, id),
    );
    whole.forEach((zone, k) => {
      expect(zone.volumeM3).toBeCloseTo(june[k].volumeM3 + july[k].volumeM3, 0);
      expect((zone.etMeanMm / 1000) * zone.areaM2).toBeCloseTo(zone.volumeM3, 3);
    });
  });

  it('are those of the map of the true ET', async () => {
    const tiff = await fromFile(join(folder, 'truth/et-2025-06-01_2025-07-31.tif'));
    const image = await tiff.getImage();
    const [values] = (await image.readRasters()) as unknown as Float32Array[];
    tiff.close();
    const known = values.filter((value) => !Number.isNaN(value));
    const mean = known.reduce((sum, value) => sum + value, 0) / known.length;
    const zones = truthZoneVolumes(truth);
    const area = zones.reduce((sum, zone) => sum + zone.areaM2, 0);
    const volume = zones.reduce((sum, zone) => sum + zone.volumeM3, 0);
    // Cells at different latitudes differ in area by a few parts in 10 000.
    expect(Math.abs(mean / ((1000 * volume) / area) - 1)).toBeLessThan(1e-3);
    expect(Math.abs((known.length * 900) / area - 1)).toBeLessThan(5e-3);
  });
});
