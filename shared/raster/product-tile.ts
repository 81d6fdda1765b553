import type { GridSpec, PixelWindow } from '../contract/grid.ts';
import type { ProductStatistics } from '../contract/mosaic-record.ts';
import { PRODUCTS, type ProductEntry, type ProductName, type ProductStorage } from '../contract/products.ts';
import { DAY_QUALITY, PERIOD_QUALITY } from '../contract/quality.ts';
import { encodeBlock } from './block.ts';
import { halve } from './pyramid.ts';
import { newSamples } from './sample-type.ts';

/** Stored samples of a product. */
export type ProductSamples = Int16Array | Uint16Array | Uint8Array;

/** Exact statistics of stored values; sums as decimal text, since they outgrow a double over a large basin. */
export interface StoredStatistics {
  readonly count: number;
  /** Stored values; absent when count is 0. */
  readonly minimum?: number;
  readonly maximum?: number;
  readonly sum: string;
  readonly sumOfSquares: string;
  /** Pixels outside the product's plausible bounds. */
  readonly outOfBounds: number;
}

/** One product on one tile, ready for the mosaic. */
export interface ProductTile {
  /** The finished TIFF block: compressed, padded to the tile size with nodata. */
  readonly block: Uint8Array;
  /** First overview level of the tile, uncompressed: the mosaic builds the others from it. */
  readonly half: ProductSamples;
  readonly statistics: StoredStatistics;
}

const LIMITS = { int16: [-32767, 32767], uint16: [0, 65534], uint8: [0, 254] } as const;

export function samplesOf(storage: ProductStorage, length: number): ProductSamples {
  return newSamples(storage, length) as ProductSamples;
}

/**
 * Physical values as stored integers; NaN becomes the product's nodata. Values beyond the storage saturate: they
 * lie far outside every plausible bound and the statistics count them.
 */
export function quantise(product: ProductName, values: Float32Array | Float64Array): ProductSamples {
  const entry: ProductEntry = PRODUCTS[product];
  const stored = samplesOf(entry.storage, values.length);
  const [low, high] = LIMITS[entry.storage];
  const nodata = entry.nodata ?? 0;
  const steps = 1 / entry.scale;
  for (let i = 0; i < values.length; i++) {
    const value = values[i];
    stored[i] = Number.isNaN(value)
      ? nodata
      : Math.max(low, Math.min(high, Math.round((value - entry.offset) * steps)));
  }
  return stored;
}

/** Block, first overview and statistics of a product on the (clipped) window of a tile. */
export function productTile(
  product: ProductName,
  stored: ProductSamples,
  window: PixelWindow,
  grid: GridSpec,
  compression: 'deflate' | 'zstd',
): ProductTile {
  const entry: ProductEntry = PRODUCTS[product];
  return {
    block: encodeBlock(pad(product, stored, window, grid.tileSize), grid.tileSize, compression),
    half: halve(stored, window.rows, window.columns, entry.nodata, entry.overview) as ProductSamples,
    statistics: storedStatistics(entry, stored),
  };
}

/** The block of a tile that has no value at all. */
export function emptyBlock(product: ProductName, tileSize: number, compression: 'deflate' | 'zstd'): Uint8Array {
  const entry: ProductEntry = PRODUCTS[product];
  const samples = samplesOf(entry.storage, tileSize * tileSize).fill(emptyValue(product));
  return encodeBlock(samples, tileSize, compression);
}

/**
 * What stands where no tile was computed: nodata, or for bit fields the bit that says why. A computed tile has the
 * same there, so that it cannot be told how the region was cut.
 */
export function emptyValue(product: ProductName): number {
  const entry: ProductEntry = PRODUCTS[product];
  if (entry.nodata !== null) return entry.nodata;
  return entry.per === 'day' ? DAY_QUALITY.noScene : PERIOD_QUALITY.outsideRegion;
}

function pad(product: ProductName, stored: ProductSamples, window: PixelWindow, size: number): ProductSamples {
  if (window.rows === size && window.columns === size) return stored;
  const entry: ProductEntry = PRODUCTS[product];
  const padded = samplesOf(entry.storage, size * size).fill(emptyValue(product));
  for (let r = 0; r < window.rows; r++) {
    padded.set(stored.subarray(r * window.columns, (r + 1) * window.columns), r * size);
  }
  return padded;
}

/** Plausible bounds as stored values; both ends lie inside, also where the division by the scale is not exact. */
function storedBounds({ bounds, scale, offset }: ProductEntry): [low: number, high: number] {
  if (!bounds) return [Number.NEGATIVE_INFINITY, Number.POSITIVE_INFINITY];
  const rounding = 1e-6;
  return [(bounds[0] - offset) / scale - rounding, (bounds[1] - offset) / scale + rounding];
}

function storedStatistics(entry: ProductEntry, stored: ProductSamples): StoredStatistics {
  const nodata = entry.nodata;
  const [low, high] = storedBounds(entry);
  let count = 0;
  let minimum = Number.POSITIVE_INFINITY;
  let maximum = Number.NEGATIVE_INFINITY;
  let sum = 0;
  let sumOfSquares = 0;
  let outOfBounds = 0;
  for (const value of stored) {
    if (value === nodata) continue;
    count++;
    if (value < minimum) minimum = value;
    if (value > maximum) maximum = value;
    // Exact: at most 2^20 pixels of at most 2^32 each stay below 2^53.
    sum += value;
    sumOfSquares += value * value;
    if (value < low || value > high) outOfBounds++;
  }
  const range = count > 0 ? { minimum, maximum } : {};
  return { count, ...range, sum: String(sum), sumOfSquares: String(sumOfSquares), outOfBounds };
}

export const NO_STATISTICS: StoredStatistics = { count: 0, sum: '0', sumOfSquares: '0', outOfBounds: 0 };

/** Exact union of the statistics of two sets of pixels. */
export function mergeStatistics(a: StoredStatistics, b: StoredStatistics): StoredStatistics {
  if (a.count === 0) return b;
  if (b.count === 0) return a;
  return {
    count: a.count + b.count,
    minimum: Math.min(a.minimum as number, b.minimum as number),
    maximum: Math.max(a.maximum as number, b.maximum as number),
    sum: String(BigInt(a.sum) + BigInt(b.sum)),
    sumOfSquares: String(BigInt(a.sumOfSquares) + BigInt(b.sumOfSquares)),
    outOfBounds: a.outOfBounds + b.outOfBounds,
  };
}

/** @param pixels all pixels of the raster @returns null when no pixel is valid */
export function physicalStatistics(
  product: ProductName,
  stored: StoredStatistics,
  pixels: number,
): ProductStatistics | null {
  if (stored.count === 0) return null;
  const { scale, offset }: ProductEntry = PRODUCTS[product];
  const n = BigInt(stored.count);
  const mean = Number(BigInt(stored.sum)) / stored.count;
  // n * sum(x^2) - sum(x)^2 in whole numbers: no cancellation, the same on every machine.
  const spread = n * BigInt(stored.sumOfSquares) - BigInt(stored.sum) ** 2n;
  const standardDeviation = Math.sqrt(Number(spread)) / stored.count;
  return {
    count: stored.count,
    minimum: (stored.minimum as number) * scale + offset,
    maximum: (stored.maximum as number) * scale + offset,
    mean: mean * scale + offset,
    standardDeviation: standardDeviation * scale,
    validPercent: (100 * stored.count) / pixels,
    outOfBounds: stored.outOfBounds,
  };
}
