import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import type { GridSpec, PixelWindow } from '../../../shared/contract/grid.ts';
import { DAY_QUALITY as Q } from '../../../shared/contract/quality.ts';
import type { SceneRecord } from '../../../shared/contract/scene.ts';
import { memorySource } from '../../../shared/raster/memory-source.ts';
import { openRaster } from '../../../shared/raster/raster-file.ts';
import { readScene } from '../../../shared/scenes/landsat-level-2/scene.ts';
import { type OpenBand, readSurface, type SurfacePlanes } from '../../../shared/scenes/read-surface.ts';
import { bandTiff, clearDn, type FixtureOptions, temporaryFolders, writeScene } from './scene-fixture.ts';

const folder = temporaryFolders();
const WEIGHTS = { blue: 0.1, green: 0.2, red: 0.3, nir: 0.2, swir1: 0.15, swir2: 0.05 };
const ALL = { row: 0, column: 0, rows: 48, columns: 48 };

/** A scene, and a way to open its bands with pixels of one's own. */
async function fixture(options: FixtureOptions = {}) {
  const scene = await readScene(await writeScene(await folder(), options));
  const opened: string[] = [];
  const open: OpenBand = async ({ file }) => {
    const band = /(SR_B\d|ST_B\d+|QA_\w+)\.TIF$/.exec(file)![1];
    opened.push(band);
    return openRaster(memorySource(bandTiff(band, options)));
  };
  const read = (window: PixelWindow, grid = ownGrid(scene)) => readSurface(scene, grid, window, open, WEIGHTS);
  return { scene, opened, open, read };
}

/** The grid of the scene itself, or one moved by part of a pixel. */
function ownGrid({ georeference }: SceneRecord, shift = 0): GridSpec {
  return {
    crs: { code: 'EPSG:32632', proj4: georeference.proj4, kind: 'epsg', epsg: 32632 },
    originX: 500010 + shift,
    originY: 4900020 - shift,
    resolution: 30,
    rows: 48,
    columns: 48,
    tileSize: 128,
  };
}

const equalArea: GridSpec = {
  crs: {
    code: 'laea:44,9',
    proj4: '+proj=laea +lat_0=44 +lon_0=9 +x_0=0 +y_0=0 +datum=WGS84 +units=m +no_defs',
    kind: 'laea',
  },
  originX: 0,
  originY: 28350,
  resolution: 30,
  rows: 60,
  columns: 60,
  tileSize: 128,
};

const dnAt = (band: string, at: number) => clearDn(band, Math.floor(at / 48), at % 48);
const valid = (planes: SurfacePlanes, at: number) =>
  [planes.red, planes.nir, planes.albedo, planes.lst].map((p) => p[at]);

describe('readSurface', () => {
  it('gives reflectance, temperature and albedo of the source on the grid of the source', async () => {
    const { read } = await fixture();
    const planes = (await read(ALL))!;
    for (let at = 0; at < 48 * 48; at++) {
      const reflectance = [2, 3, 4, 5, 6, 7].map((n) => dnAt(`SR_B${n}`, at) * 2.75e-5 - 0.2);
      expect(planes.red[at]).toBeCloseTo(reflectance[2], 6);
      expect(planes.nir[at]).toBeCloseTo(reflectance[3], 6);
      expect(planes.lst[at]).toBeCloseTo(dnAt('ST_B10', at) * 0.00341802 + 149, 4);
      const albedo = Object.values(WEIGHTS).reduce((sum, weight, band) => sum + weight * reflectance[band], 0);
      expect(planes.albedo[at]).toBeCloseTo(albedo, 6);
    }
    expect(planes.quality.every((bits) => bits === 0)).toBe(true);
  });

  it('never lets a cloud, a shadow, snow, a saturated or an empty pixel into its neighbours', async () => {
    const bad: Record<number, [qaPixel: number, qaRadsat: number, quality: number]> = {
      [10 * 48 + 10]: [22280, 0, Q.cloud],
      [14 * 48 + 14]: [23888, 0, Q.cloudShadow],
      [18 * 48 + 18]: [30048, 0, Q.snow],
      [22 * 48 + 22]: [21824, 8, Q.saturated],
      [26 * 48 + 26]: [1, 0, Q.fill],
      [30 * 48 + 30]: [21826, 0, Q.cloud],
    };
    const dn = (band: string, row: number, column: number) => {
      const found = bad[row * 48 + column];
      if (!found) return band.startsWith('QA') ? clearDn(band, row, column) : band.startsWith('ST_') ? 44177 : 14000;
      if (band === 'QA_PIXEL') return found[0];
      if (band === 'QA_RADSAT') return found[1];
      return found[2] === Q.fill ? 0 : 60000;
    };
    const { scene, read } = await fixture({ dn });
    const planes = (await read(ALL, ownGrid(scene, 9)))!;
    const clear = [14000 * 2.75e-5 - 0.2, 44177 * 0.00341802 + 149];
    let masked = 0;
    for (let at = 0; at < 48 * 48; at++) {
      // Moved by 9 m of 30, the nearest source pixel is the one of the same row and column.
      expect(planes.quality[at]).toBe(bad[at]?.[2] ?? 0);
      const [red, nir, albedo, lst] = valid(planes, at);
      if (bad[at]) {
        expect([red, nir, albedo, lst]).toEqual([Number.NaN, Number.NaN, Number.NaN, Number.NaN]);
        masked++;
      } else {
        for (const reflectance of [red, nir, albedo]) expect(reflectance).toBeCloseTo(clear[0], 6);
        expect(lst).toBeCloseTo(clear[1], 4);
      }
    }
    expect(masked).toBe(6);
  });

  it.each([
    ['reflectance without data', 'SR_B6', 0, Q.fill],
    ['temperature without data', 'ST_B10', 0, Q.fill],
    ['reflectance -0.2', 'SR_B2', 1, Q.invalidInput],
    ['reflectance 1.6', 'SR_B2', 65535, Q.invalidInput],
    ['red just below 0', 'SR_B4', 7272, Q.invalidInput],
    ['blue just below 0', 'SR_B2', 7272, 0],
    ['near infrared below 0 over dark water', 'SR_B5', 7200, 0],
    ['temperature 229 K', 'ST_B10', 23404, Q.invalidInput],
    ['temperature 346 K', 'ST_B10', 57635, Q.invalidInput],
  ])('%s: quality and nodata agree in all planes', async (_, band, value, quality) => {
    const dn = (name: string, row: number, column: number) =>
      name === band && row === 20 && column === 21 ? value : clearDn(name, row, column);
    const planes = (await (await fixture({ dn })).read(ALL))!;
    const at = 20 * 48 + 21;
    expect(planes.quality[at]).toBe(quality);
    expect(valid(planes, at).map(Number.isNaN)).toEqual(Array(4).fill(quality !== 0));
    expect(planes.quality.filter((bits) => bits !== 0)).toHaveLength(quality === 0 ? 0 : 1);
    const least = Math.min(...[...planes.lst].filter((kelvin) => !Number.isNaN(kelvin)));
    expect(least).toBeGreaterThan(299);
  });

  it('refuses red and near infrared that cancel out', async () => {
    const dn = (name: string, row: number, column: number) =>
      name === 'SR_B4' ? 7280 : name === 'SR_B5' ? 7200 : clearDn(name, row, column);
    const planes = (await (await fixture({ dn })).read(ALL))!;
    expect(planes.quality.every((bits) => bits === Q.invalidInput)).toBe(true);
  });

  it('keeps water, and says so', async () => {
    const dn = (name: string, row: number, column: number) =>
      name === 'QA_PIXEL' ? 21952 : clearDn(name, row, column);
    const planes = (await (await fixture({ dn })).read(ALL))!;
    expect(planes.quality.every((bits) => bits === Q.water)).toBe(true);
    expect(planes.lst.some(Number.isNaN)).toBe(false);
  });

  it('reads no other band where the flags leave nothing to see', async () => {
    const dn = (name: string, row: number, column: number) =>
      name === 'QA_PIXEL' && column < 30 ? 22280 : clearDn(name, row, column);
    const { opened, read } = await fixture({ dn });
    const planes = (await read({ row: 0, column: 0, rows: 20, columns: 20 }))!;
    expect(opened).toEqual(['QA_PIXEL', 'QA_RADSAT']);
    expect(planes.quality.every((bits) => bits === Q.cloud)).toBe(true);
    expect(planes.lst.every(Number.isNaN)).toBe(true);
    await read({ row: 0, column: 20, rows: 20, columns: 20 });
    expect(opened.length).toBe(2 + 9);
  });

  it('gives null where the scene has no pixel, and noScene beyond its edge', async () => {
    const { read } = await fixture();
    expect(await read({ row: 0, column: 100, rows: 10, columns: 10 })).toBeNull();
    expect(await read({ row: -11, column: 0, rows: 10, columns: 10 })).toBeNull();
    const edge = (await read({ row: -1, column: -1, rows: 2, columns: 2 }))!;
    expect([...edge.quality]).toEqual([Q.noScene, Q.noScene, Q.noScene, 0]);
    expect([...edge.red].map(Number.isNaN)).toEqual([true, true, true, false]);
  });

  it('reads TM by its own bits and bands', async () => {
    const dn = (name: string, row: number, column: number) =>
      name === 'QA_PIXEL' ? 5440 + 4 : name === 'QA_RADSAT' && column === 0 ? 1 << 5 : clearDn(name, row, column);
    const planes = (await (await fixture({ sensor: 'TM', dn })).read(ALL))!;
    expect(planes.quality[0]).toBe(Q.saturated);
    expect(planes.quality[1]).toBe(0);
    expect(planes.red[1]).toBeCloseTo(clearDn('SR_B3', 0, 1) * 2.75e-5 - 0.2, 6);
  });

  it('stops on request', async () => {
    const { scene, open } = await fixture();
    const stopped = readSurface(scene, ownGrid(scene), ALL, open, WEIGHTS, AbortSignal.abort());
    await expect(stopped).rejects.toThrow(/abort/i);
  });

  it('gives the crop of the whole for every window, bit for bit', async () => {
    const dn = (band: string, row: number, column: number) => {
      const noise = Math.imul(row * 48 + column + band.length * 7919, 2654435761) >>> 16;
      if (band === 'QA_PIXEL') return noise % 7 === 0 ? 22280 : 21824;
      if (band === 'QA_RADSAT') return 0;
      return noise % 31 === 0 ? 0 : clearDn(band, row, column) + (noise % 500);
    };
    const { read } = await fixture({ dn });
    const whole = { row: -8, column: -8, rows: 70, columns: 70 };
    const all = (await read(whole, equalArea))!;
    expect(all.quality.filter((bits) => bits === 0).length).toBeGreaterThan(500);
    const place = fc.integer({ min: -8, max: 40 });
    const size = fc.integer({ min: 1, max: 22 });
    await fc.assert(
      fc.asyncProperty(place, place, size, size, async (row, column, rows, columns) => {
        const part = await read({ row, column, rows, columns }, equalArea);
        for (const name of ['red', 'nir', 'albedo', 'lst', 'quality'] as const) {
          const crop = all[name].filter((_, i) => {
            const [r, c] = [Math.floor(i / 70) - 8 - row, (i % 70) - 8 - column];
            return r >= 0 && r < rows && c >= 0 && c < columns;
          });
          if (part) expect(Buffer.from(part[name].buffer).equals(Buffer.from(crop.buffer))).toBe(true);
          else
            expect(crop.every((value) => (name === 'quality' ? value === Q.noScene : Number.isNaN(value)))).toBe(true);
        }
      }),
      { seed: 2, numRuns: 60 },
    );
  });
});
