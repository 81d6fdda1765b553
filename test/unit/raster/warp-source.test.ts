import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import type { PixelWindow } from '../../../shared/contract/grid.ts';
import { pixelTransform } from '../../../shared/raster/transform.ts';
import { readWarped, sourceWindow, warpBilinear, warpNearest } from '../../../shared/raster/warp.ts';
import { expandLattice } from '../../../shared/region/lattice.ts';
import { arrayRaster, laeaGrid } from './array-raster.ts';

const HUGE = { width: 1e7, height: 1e7 };
const { georeference } = arrayRaster(new Uint8Array(300 * 300), 300).header;
/** Far enough inside for the source window not to be clipped. */
const inside = { ...georeference, originX: georeference.originX - 9e6, originY: georeference.originY + 9e6 };

const windows = fc.record({
  row: fc.integer({ min: -90, max: 200 }),
  column: fc.integer({ min: -90, max: 240 }),
  rows: fc.integer({ min: 1, max: 150 }),
  columns: fc.integer({ min: 1, max: 150 }),
});

function sourceCoordinates(window: PixelWindow) {
  const lattice = pixelTransform(laeaGrid, inside, window);
  const [x, y] = [0, 1].map((variable) => {
    const values = new Float64Array(window.rows * window.columns);
    expandLattice(lattice, variable, window, values);
    return values;
  });
  return { lattice, x, y };
}

describe('the source pixels of a window', () => {
  it('are those that hold a pixel centre, no more and no fewer, when no margin is wanted', () => {
    fc.assert(
      fc.property(windows, (window) => {
        const { lattice, x, y } = sourceCoordinates(window);
        const column = Math.floor(Math.min(...x));
        const row = Math.floor(Math.min(...y));
        const rows = Math.floor(Math.max(...y)) - row + 1;
        const columns = Math.floor(Math.max(...x)) - column + 1;
        expect(sourceWindow(lattice, window, HUGE, 0)).toEqual({ row, column, rows, columns });
      }),
      { numRuns: 60 },
    );
  });

  it('give the same bits with more of the source around them', () => {
    const value = (row: number, column: number) => {
      const hash = Math.imul(row * 7919 + column, 0x9e3779b1) >>> 8;
      return hash % 11 === 0 ? Number.NaN : hash / 1000;
    };
    fc.assert(
      fc.property(windows, fc.integer({ min: 1, max: 9 }), (window, extra) => {
        const lattice = pixelTransform(laeaGrid, inside, window);
        const warped = (margin: number) => {
          const part = sourceWindow(lattice, window, HUGE, margin) as PixelWindow;
          const data = Float32Array.from({ length: part.rows * part.columns }, (_, i) =>
            value(part.row + Math.floor(i / part.columns), part.column + (i % part.columns)),
          );
          const smooth = new Float32Array(window.rows * window.columns);
          const near = new Float32Array(window.rows * window.columns);
          warpBilinear({ ...part, data }, lattice, window, smooth);
          warpNearest({ ...part, data }, lattice, window, near, -1);
          return [smooth, near];
        };
        expect(warped(1 + extra)).toEqual(warped(1));
      }),
      { numRuns: 40 },
    );
  });
});

describe('rasters in degrees', () => {
  const whole = { row: 0, column: 0, rows: laeaGrid.rows, columns: laeaGrid.columns };
  const samples = Float32Array.from({ length: 200 * 160 }, (_, i) => Math.sin(i / 40));
  const degrees = (originX: number) =>
    arrayRaster(samples, 200, {
      place: {
        originX,
        originY: 41.5,
        pixelWidth: 0.001,
        pixelHeight: 0.001,
        proj4: '+proj=longlat +datum=WGS84 +no_defs',
      },
    });

  it('may count longitudes from 0 to 360 as well as from -180 to 180', async () => {
    const usual = await readWarped(degrees(15), laeaGrid, whole, { resampling: 'nearest' });
    expect(usual.filter((value) => value !== 0).length).toBeGreaterThan(10_000);
    const turned = await readWarped(degrees(375), laeaGrid, whole, { resampling: 'nearest' });
    expect(turned).toEqual(usual);
  });
});

it('scale, offset and fill may be given in place of those of the file', async () => {
  const raster = arrayRaster(Int16Array.of(4, 4, 4, 4, 4, 4, 4, 4, 5), 3, { scale: 10, offset: 1, nodata: 4 });
  const grid = { ...laeaGrid, crs: { ...laeaGrid.crs, proj4: georeference.proj4 }, rows: 3, columns: 3 };
  const place = { originX: georeference.originX, originY: georeference.originY };
  const window = { row: 0, column: 0, rows: 1, columns: 2 };
  const read = (toFloat?: { scale: number; offset: number; fill: number | null }) =>
    readWarped(raster, { ...grid, ...place }, window, { resampling: 'bilinear', toFloat });
  expect([...(await read())]).toEqual([Number.NaN, Number.NaN]);
  expect([...(await read({ scale: 0.5, offset: -1, fill: 5 }))]).toEqual([1, 1]);
  expect([...(await read({ scale: 0.5, offset: -1, fill: null }))]).toEqual([1, 1]);
});
