import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import type { PixelWindow } from '../../../shared/contract/grid.ts';
import { PRODUCTS, type ProductEntry, type ProductName } from '../../../shared/contract/products.ts';
import {
  emptyBlock,
  emptyValue,
  mergeStatistics,
  NO_STATISTICS,
  type ProductSamples,
  physicalStatistics,
  productTile,
  quantise,
  samplesOf,
} from '../../../shared/raster/product-tile.ts';
import { decodeBlock } from '../../support/decode-block.ts';
import { laeaGrid } from './array-raster.ts';

const grid = { ...laeaGrid, tileSize: 32 };
const NAMES = Object.keys(PRODUCTS) as ProductName[];
const BOUNDED = NAMES.filter((name) => 'bounds' in PRODUCTS[name]);
const tileOf = (stored: ProductSamples, window: PixelWindow, product: ProductName = 'et-day') =>
  productTile(product, stored, window, grid, 'deflate');
const row = (stored: ProductSamples) =>
  tileOf(stored, { row: 0, column: 0, rows: 1, columns: stored.length }).statistics;

describe('physical values as stored numbers', () => {
  it.each(BOUNDED)('come back within half a step: %s', (product) => {
    const { scale, offset, bounds = [0, 0] }: ProductEntry = PRODUCTS[product];
    fc.assert(
      fc.property(fc.double({ min: bounds[0], max: bounds[1], noNaN: true }), (value) => {
        const [stored] = quantise(product, Float64Array.of(value));
        expect(Math.abs(stored * scale + offset - value)).toBeLessThanOrEqual(scale / 2 + 1e-9);
      }),
      { seed: 6, numRuns: 200 },
    );
  });

  it.each(NAMES)('NaN is nodata, and no number ever becomes nodata: %s', (product) => {
    const nodata = PRODUCTS[product].nodata;
    const values = Float64Array.of(Number.NaN, -1e30, 1e30, Number.POSITIVE_INFINITY, Number.NEGATIVE_INFINITY);
    const stored = quantise(product, values);
    expect(stored[0]).toBe(nodata ?? 0);
    if (nodata !== null) expect(Array.from(stored.subarray(1))).not.toContain(nodata);
    expect(stored[1]).toBe(stored[4]);
    expect(stored[2]).toBe(stored[3]);
    expect(stored[2]).toBeGreaterThan(stored[1]);
  });
});

const values = fc
  .array(fc.oneof(fc.constant(-32768), fc.integer({ min: -32767, max: 32767 })), { minLength: 1, maxLength: 200 })
  .map((list) => Int16Array.from(list));

describe('statistics of a tile', () => {
  it('merged over any cut and order are those of the whole', () => {
    fc.assert(
      fc.property(values, fc.array(fc.nat(200), { maxLength: 5 }), fc.boolean(), (stored, cuts, backwards) => {
        const ends = [...cuts.map((cut) => Math.min(cut, stored.length)), 0, stored.length].sort((a, b) => a - b);
        const parts = ends.slice(1).map((end, i) => row(stored.subarray(ends[i], end)));
        if (backwards) parts.reverse();
        expect(parts.reduce(mergeStatistics, NO_STATISTICS)).toEqual(row(stored));
      }),
      { seed: 7, numRuns: 200 },
    );
  });

  it('are exact: sums of large tiles keep every unit', () => {
    const stored = new Int16Array(1 << 20).fill(32767);
    stored[5] = 32766;
    const window = { row: 0, column: 0, rows: 1 << 10, columns: 1 << 10 };
    const { statistics } = productTile('et-day', stored, window, { ...grid, tileSize: 1 << 10 }, 'zstd');
    const n = BigInt(stored.length);
    expect(statistics.sum).toBe(String(n * 32767n - 1n));
    expect(statistics.sumOfSquares).toBe(String((n - 1n) * 32767n ** 2n + 32766n ** 2n));
  });

  it('are the mean and the standard deviation of the population, in units of the product', () => {
    const stored = Int16Array.of(1000, 2000, 4000, -32768);
    const { mean, standardDeviation, ...rest } = physicalStatistics('et-day', row(stored), 8) ?? {};
    expect(mean).toBeCloseTo(7 / 3, 12);
    expect(standardDeviation).toBeCloseTo(Math.sqrt((1 + 4 + 16) / 3 - (7 / 3) ** 2), 12);
    expect(rest).toMatchObject({ count: 3, minimum: 1, maximum: 4, validPercent: 37.5, outOfBounds: 0 });
  });

  it('do not cancel: a million equal values have no spread', () => {
    const one = row(new Int16Array(1024).fill(31999));
    const many = Array.from({ length: 1000 }, () => one).reduce(mergeStatistics, NO_STATISTICS);
    expect(physicalStatistics('et-day', many, 1_024_000)).toMatchObject({ count: 1_024_000, standardDeviation: 0 });
  });

  it.each(BOUNDED)('count what lies outside the plausible bounds, which belong to the inside: %s', (product) => {
    const { scale, bounds = [0, 0], storage }: ProductEntry = PRODUCTS[product];
    const beyond = storage === 'uint16' ? bounds[1] : bounds[0] - scale;
    const stored = quantise(product, Float64Array.of(...bounds, beyond, bounds[1] + scale, Number.NaN));
    const window = { row: 0, column: 0, rows: 1, columns: 5 };
    expect(tileOf(stored, window, product).statistics).toMatchObject({
      count: 4,
      outOfBounds: storage === 'uint16' ? 1 : 2,
    });
  });

  it('are none without a valid pixel', () => {
    expect(row(new Int16Array(4).fill(-32768))).toEqual(NO_STATISTICS);
    expect(physicalStatistics('et-day', NO_STATISTICS, 4)).toBeNull();
  });
});

describe('the block of a tile', () => {
  it('has the tile in its upper left and nothing beyond', () => {
    const window = { row: 192, column: 256, rows: 28, columns: 4 };
    const stored = Int16Array.from({ length: 28 * 4 }, (_, i) => i - 50);
    const { block, half } = tileOf(stored, window);
    const samples = decodeBlock(block, 'int16', 32, 'deflate');
    for (let r = 0; r < 32; r++) {
      const inside = r < 28 ? Array.from(stored.subarray(r * 4, r * 4 + 4)) : [-32768, -32768, -32768, -32768];
      expect(Array.from(samples.subarray(r * 32, r * 32 + 32))).toEqual([...inside, ...new Array(28).fill(-32768)]);
    }
    expect(half).toHaveLength(14 * 2);
  });

  it.each(NAMES)('of a tile without any value is one value: %s', (product) => {
    const { storage } = PRODUCTS[product];
    const samples = decodeBlock(emptyBlock(product, 32, 'zstd'), storage, 32, 'zstd');
    expect(new Set(samples)).toEqual(new Set([emptyValue(product)]));
    const whole = { row: 0, column: 0, rows: 32, columns: 32 };
    const computed = productTile(product, samplesOf(storage, 1024).fill(emptyValue(product)), whole, grid, 'zstd');
    expect(computed.block).toEqual(emptyBlock(product, 32, 'zstd'));
  });
});
