import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import type { GridSpec, PixelWindow } from '../../../shared/contract/grid.ts';
import { readWarped } from '../../../shared/raster/warp.ts';
import { projection } from '../../../shared/region/crs.ts';
import { pixelToMap } from '../../../shared/region/pixel-place.ts';
import { arrayRaster, laeaGrid } from './array-raster.ts';

const WIDTH = 330;
const HEIGHT = 300;
const whole: PixelWindow = { row: 0, column: 0, rows: laeaGrid.rows, columns: laeaGrid.columns };

/** Upper-left corner that puts the raster's middle on the grid's middle, a fraction of a pixel off. */
const place = (() => {
  const { inverse } = projection(laeaGrid.crs);
  const utm = projection({ proj4: '+proj=utm +zone=33 +datum=WGS84 +units=m +no_defs' });
  const [x, y] = utm.forward(...inverse(...pixelToMap(laeaGrid, laeaGrid.rows / 2, laeaGrid.columns / 2)));
  return { originX: x - (WIDTH / 2) * 30 + 7, originY: y + (HEIGHT / 2) * 30 - 11 };
})();

const rough = Float32Array.from({ length: WIDTH * HEIGHT }, (_, i) => (Math.imul(i, 2654435761) >>> 8) / 1e5);
const holed = rough.map((value, i) => (Math.imul(i, 40503) % 11 === 0 ? -9999 : value));
const cropOf = (samples: ArrayLike<number>, grid: GridSpec, { row, column, rows, columns }: PixelWindow) =>
  Array.from({ length: rows * columns }, (_, i) => {
    const r = row + Math.floor(i / columns);
    return samples[r * grid.columns + column + (i % columns)];
  });

const windows = (grid: GridSpec) =>
  fc
    .tuple(
      fc.nat(grid.rows - 1),
      fc.nat(grid.columns - 1),
      fc.integer({ min: 1, max: 90 }),
      fc.integer({ min: 1, max: 90 }),
    )
    .map(([row, column, rows, columns]) => ({
      row,
      column,
      rows: Math.min(rows, grid.rows - row),
      columns: Math.min(columns, grid.columns - column),
    }));

describe('a window of a warped raster', () => {
  it.each(['bilinear', 'nearest'] as const)('is the crop of the whole, bit for bit (%s)', async (resampling) => {
    const raster = arrayRaster(holed, WIDTH, { nodata: -9999, place });
    const all = await readWarped(raster, laeaGrid, whole, { resampling });
    await fc.assert(
      fc.asyncProperty(windows(laeaGrid), async (window) => {
        const part = await readWarped(raster, laeaGrid, window, { resampling });
        expect(Object.is(part.length, window.rows * window.columns)).toBe(true);
        expect(Array.from(part)).toEqual(cropOf(all, laeaGrid, window));
      }),
      { seed: 3, numRuns: 150 },
    );
  });

  it('is the crop of the whole where the grid reaches beyond the raster', async () => {
    const small = holed.slice(0, 100 * WIDTH);
    const raster = arrayRaster(small, WIDTH, { nodata: -9999, place });
    const all = await readWarped(raster, laeaGrid, whole, { resampling: 'bilinear' });
    expect(all.some((value) => !Number.isNaN(value)) && all.some((value) => Number.isNaN(value))).toBe(true);
    await fc.assert(
      fc.asyncProperty(windows(laeaGrid), async (window) => {
        const part = await readWarped(raster, laeaGrid, window, { resampling: 'bilinear' });
        expect(Array.from(part)).toEqual(cropOf(all, laeaGrid, window));
      }),
      { seed: 4, numRuns: 100 },
    );
  });

  it('may reach outside the grid (a halo) and does not change inside', async () => {
    const raster = arrayRaster(holed, WIDTH, { nodata: -9999, place });
    const all = await readWarped(raster, laeaGrid, whole, { resampling: 'bilinear' });
    const halo = await readWarped(
      raster,
      laeaGrid,
      { row: -2, column: -2, rows: whole.rows + 4, columns: whole.columns + 4 },
      { resampling: 'bilinear' },
    );
    const inner = cropOf(halo, { ...laeaGrid, columns: whole.columns + 4 }, { ...whole, row: 2, column: 2 });
    expect(inner).toEqual(Array.from(all));
  });

  it('reads little more than it needs', async () => {
    const raster = arrayRaster(holed, WIDTH, { nodata: -9999, place });
    await readWarped(raster, laeaGrid, { row: 100, column: 100, rows: 20, columns: 20 }, { resampling: 'bilinear' });
    expect(raster.wanted).toHaveLength(1);
    expect(raster.wanted[0]).toBeLessThan(28 * 28);
  });
});

/** The raster's own grid, shifted by fractions of a pixel: weights are then known. */
const shifted = (dx: number, dy: number): GridSpec => ({
  ...laeaGrid,
  crs: { code: 'EPSG:32633', proj4: '+proj=utm +zone=33 +datum=WGS84 +units=m +no_defs', kind: 'epsg', epsg: 32633 },
  originX: 495015 + dx * 30,
  originY: 4586985 - dy * 30,
  rows: 3,
  columns: 3,
});

describe('bilinear values', () => {
  const window = { row: 0, column: 0, rows: 3, columns: 3 };
  const nine = Float32Array.of(1, 2, 4, 8, 16, 32, 64, 128, 256);

  it('are the source where the pixels coincide', async () => {
    expect(await readWarped(arrayRaster(nine, 3), shifted(0, 0), window, { resampling: 'bilinear' })).toEqual(nine);
  });

  it('are weighted by distance, and by the valid neighbours alone at the edge', async () => {
    const out = await readWarped(arrayRaster(nine, 3), shifted(0.25, 0.25), window, { resampling: 'bilinear' });
    expect(out[0]).toBeCloseTo((1 * 9 + 2 * 3 + 8 * 3 + 16) / 16, 5);
    // The lower right pixel: only the nearest source pixel is there.
    expect(out[8]).toBe(256);
    expect(out[2]).toBeCloseTo(4 * 0.75 + 32 * 0.25, 5);
  });

  it('take scale and offset', async () => {
    const stored = Uint16Array.of(7, 8, 9, 7, 8, 9, 7, 8, 9);
    const raster = arrayRaster(stored, 3, { scale: 0.5, offset: -1 });
    const out = await readWarped(raster, shifted(0, 0), window, { resampling: 'bilinear' });
    expect(Array.from(out.subarray(0, 3))).toEqual([2.5, 3, 3.5]);
  });

  it('never blend nodata, and valid ground does not grow', async () => {
    const raster = arrayRaster(Float32Array.of(10, -9999, 10, 10, 10, 10, 10, 10, 10), 3, { nodata: -9999 });
    const near = await readWarped(raster, shifted(0.4, 0), window, { resampling: 'bilinear' });
    expect(Array.from(near.subarray(0, 3))).toEqual([10, Number.NaN, 10]);
    const far = await readWarped(raster, shifted(0.6, 0), window, { resampling: 'bilinear' });
    expect(Array.from(far.subarray(0, 2))).toEqual([Number.NaN, 10]);
  });

  it('lie between the least and the largest source value, on any askew grid', async () => {
    const raster = arrayRaster(holed, WIDTH, { nodata: -9999, place });
    const out = await readWarped(raster, laeaGrid, whole, { resampling: 'bilinear' });
    const valid = Array.from(out).filter((value) => !Number.isNaN(value));
    expect(valid.length).toBeGreaterThan(0.85 * out.length);
    expect(Math.min(...valid)).toBeGreaterThanOrEqual(Math.min(...rough));
    expect(Math.max(...valid)).toBeLessThanOrEqual(Math.max(...rough));
  });

  it('reproduce a plane: resampling is linear', async () => {
    const { inverse } = projection(laeaGrid.crs);
    const { forward } = projection({ proj4: '+proj=utm +zone=33 +datum=WGS84 +units=m +no_defs' });
    const plane = Float32Array.from({ length: WIDTH * HEIGHT }, (_, i) => (i % WIDTH) * 2 - Math.floor(i / WIDTH) * 3);
    const out = await readWarped(arrayRaster(plane, WIDTH, { place }), laeaGrid, whole, { resampling: 'bilinear' });
    for (const [row, column] of [
      [0, 0],
      [110, 130],
      [219, 259],
      [37, 201],
    ]) {
      const [x, y] = forward(...inverse(...pixelToMap(laeaGrid, row + 0.5, column + 0.5)));
      const sourceColumn = (x - place.originX) / 30 - 0.5;
      const sourceRow = (place.originY - y) / 30 - 0.5;
      // The lattice is within 1/8 pixel; a pixel is worth 2 and 3.
      expect(Math.abs(out[row * laeaGrid.columns + column] - (2 * sourceColumn - 3 * sourceRow))).toBeLessThan(5 / 8);
    }
  });
});

describe('nearest values', () => {
  const window = { row: 0, column: 0, rows: 3, columns: 3 };
  const flags = Uint16Array.of(1, 2, 4, 8, 16, 32, 64, 128, 256);

  it('are those of the pixel that holds the centre, in the stored type', async () => {
    const out = await readWarped(arrayRaster(flags, 3), shifted(0.49, -0.49), window, { resampling: 'nearest' });
    expect(out).toEqual(flags);
    const next = await readWarped(arrayRaster(flags, 3), shifted(0.51, 0), window, { resampling: 'nearest' });
    expect(Array.from(next)).toEqual([2, 4, 0, 16, 32, 0, 128, 256, 0]);
  });

  it('are never changed by scale and offset, and keep nodata', async () => {
    const raster = arrayRaster(flags, 3, { nodata: 16, scale: 10, offset: 5 });
    const out = await readWarped(raster, shifted(1, 0), window, { resampling: 'nearest' });
    expect(Array.from(out)).toEqual([2, 4, 16, 16, 32, 16, 128, 256, 16]);
  });
});

describe('a window that the raster does not reach', () => {
  const far: GridSpec = { ...laeaGrid, originX: laeaGrid.originX + 300_000 };
  it('is NaN or the nodata, and nothing is read', async () => {
    const raster = arrayRaster(Uint8Array.of(1, 2, 3, 4), 2, { nodata: 255 });
    const window = { row: 0, column: 0, rows: 4, columns: 5 };
    const values = await readWarped(raster, far, window, { resampling: 'bilinear' });
    expect(values).toHaveLength(20);
    expect(values.every((value) => Number.isNaN(value))).toBe(true);
    expect(await readWarped(raster, far, window, { resampling: 'nearest' })).toEqual(new Uint8Array(20).fill(255));
    expect(raster.wanted).toEqual([]);
  });
});
