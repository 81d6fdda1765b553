import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import type { PixelWindow } from '../../../shared/contract/grid.ts';
import type { PixelPolygons } from '../../../shared/contract/plan.ts';
import { indexEdges, polygonCoverage } from '../../../shared/region/coverage.ts';
import { ZoneAccumulator } from '../../../shared/region/zone-sum.ts';
import { closed, starRing } from './shapes.ts';

const NODATA = -32768;
const SIDE = 40;

/** Sums over the 40 x 40 pixels of a raster in windows of one size, merged in the order of `keys`. */
function tiled(polygons: PixelPolygons, raster: Int16Array, size: number, keys: readonly number[]): ZoneAccumulator {
  const index = indexEdges(polygons);
  const tiles: ZoneAccumulator[] = [];
  for (let row = 0; row < SIDE; row += size) {
    for (let column = 0; column < SIDE; column += size) {
      const window = { row, column, rows: Math.min(size, SIDE - row), columns: Math.min(size, SIDE - column) };
      const sums = new ZoneAccumulator();
      sums.addTile(crop(raster, window), NODATA, polygonCoverage(index, window).share);
      tiles.push(sums);
    }
  }
  const order = tiles
    .map((sums, i) => ({ sums, key: keys[i % Math.max(1, keys.length)] ?? 0 }))
    .sort((a, b) => a.key - b.key);
  const merged = new ZoneAccumulator();
  // Through JSON, as the sums travel.
  for (const { sums } of order) merged.merge(ZoneAccumulator.fromJSON(JSON.parse(JSON.stringify(sums))));
  return merged;
}

const crop = (raster: Int16Array, { row, column, rows, columns }: PixelWindow) =>
  Int16Array.from(
    { length: rows * columns },
    (_, i) => raster[(row + Math.floor(i / columns)) * SIDE + column + (i % columns)],
  );

const raster = fc
  .array(fc.oneof({ weight: 8, arbitrary: fc.integer({ min: -200, max: 32767 }) }, fc.constant(NODATA)), {
    minLength: SIDE * SIDE,
    maxLength: SIDE * SIDE,
    size: 'max',
  })
  .map((values) => Int16Array.from(values));

describe('zone sums', () => {
  it('weights by share and leaves nodata out of the mean', () => {
    const sums = new ZoneAccumulator();
    sums.addTile([2, 3, 4, NODATA, NODATA, 9], NODATA, Float64Array.of(0.5, 1, 0.25, 1, 0.125, 0));
    expect([sums.touchedPixels, sums.areaPixels, sums.validPixels, sums.sum]).toEqual([5, 2.875, 1.75, 5]);
  });

  it('takes a zero for a value and, without a nodata, every value', () => {
    const sums = new ZoneAccumulator();
    sums.addTile([0, 0], 0, Float64Array.of(1, 0.5));
    expect([sums.areaPixels, sums.validPixels]).toEqual([1.5, 0]);
    sums.addTile([0, NODATA], null, Float64Array.of(1, 0.5));
    expect([sums.areaPixels, sums.validPixels, sums.sum]).toEqual([3, 1.5, NODATA / 2]);
  });

  it('counts only the pixels of the mask', () => {
    const sums = new ZoneAccumulator();
    sums.addTile([5, 7, 11], NODATA, Float64Array.of(1, 1, 0.5), Uint8Array.of(0, 1, 1));
    expect([sums.touchedPixels, sums.areaPixels, sums.sum]).toEqual([2, 1.5, 12.5]);
  });

  it('stays exact beyond 2^53', () => {
    const big = ZoneAccumulator.fromJSON({
      ...new ZoneAccumulator().toJSON(),
      wholeSum: String(2n ** 53n),
      edgeSum: [1],
    });
    // 2^53 + 1 has no double; 2^53 + 1 + 1 has.
    const one = new ZoneAccumulator();
    one.addTile([1], NODATA, Float64Array.of(1));
    big.merge(one);
    expect(big.sum).toBe(2 ** 53 + 2);
    expect(big.toJSON().wholeSum).toBe('9007199254740993');
  });

  it('gives the same bits for any tiling and order of merging', () => {
    fc.assert(
      fc.property(starRing, raster, fc.integer({ min: 3, max: 40 }), fc.array(fc.nat()), (ring, values, size, keys) => {
        const whole = tiled([[ring]], values, SIDE, []);
        const parts = tiled([[ring]], values, size, keys);
        expect(JSON.stringify(parts)).toBe(JSON.stringify(whole));
        expect([parts.areaPixels, parts.validPixels, parts.sum]).toEqual([
          whole.areaPixels,
          whole.validPixels,
          whole.sum,
        ]);
      }),
      { numRuns: 40 },
    );
  });

  it('adds up over zones to the basin', () => {
    fc.assert(
      fc.property(
        raster,
        fc.array(fc.double({ min: 5, max: 35, noNaN: true }), { minLength: 2, maxLength: 8 }),
        (values, xs) => {
          const outline = [
            [3.3, 2.2],
            [1.9, 37.7],
            [38.1, 36.4],
            [36.6, 1.7],
          ] as const;
          const [a, b, c, d] = outline;
          const top = [20.1, 1.9] as const;
          const bottom = [18.7, 37.1] as const;
          const line = xs.map((x, k) => [x, 3 + (33 * (k + 1)) / (xs.length + 1)] as const);
          const basin = tiled([[closed(a, b, bottom, c, d, top)]], values, 16, []);
          const west = tiled([[closed(a, b, bottom, ...line.toReversed(), top)]], values, 16, []);
          const east = tiled([[closed(top, ...line, bottom, c, d)]], values, 16, []);
          for (const key of ['areaPixels', 'validPixels', 'sum'] as const) {
            expect(Math.abs(west[key] + east[key] - basin[key])).toBeLessThanOrEqual(1e-9 * Math.abs(basin[key]));
          }
        },
      ),
      { numRuns: 40 },
    );
  });
});
