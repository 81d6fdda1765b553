import type { ProductStatistics } from '../../shared/contract/mosaic-record.ts';
import { PRODUCTS, type ProductEntry, type ProductName } from '../../shared/contract/products.ts';

/** One product of one date or period against its plausible range. */
export interface BoundsRow {
  readonly when: string;
  readonly product: ProductName;
  readonly unit: string;
  /** Of the valid pixels; NaN when there are none. */
  readonly minimum: number;
  readonly mean: number;
  readonly maximum: number;
  readonly low: number;
  readonly high: number;
  /** Valid pixels. */
  readonly count: number;
  /** Valid pixels below `low` or above `high`. */
  readonly outside: number;
  /** outside / count; 0 when there is no valid pixel. */
  readonly outsideShare: number;
}

export type BoundsStatistics = Pick<ProductStatistics, 'count' | 'minimum' | 'mean' | 'maximum' | 'outOfBounds'>;

/** Counts of values in bins of equal width: bin i holds [start + i * width, start + (i + 1) * width). */
export interface ValueHistogram {
  readonly start: number;
  readonly width: number;
  readonly counts: readonly number[];
}

/**
 * Checks one product against the plausible range of the product table.
 *
 * @param statistics null when the product has no valid pixel
 * @returns one row; none for a product without a range (counts, flags)
 */
export function checkBounds(
  product: ProductName,
  statistics: BoundsStatistics | ValueHistogram | null,
  when: string,
): readonly BoundsRow[] {
  const entry: ProductEntry = PRODUCTS[product];
  if (!entry.bounds) return [];
  const [low, high] = entry.bounds;
  const found = statistics && 'counts' in statistics ? ofHistogram(statistics, low, high) : statistics;
  const count = found?.count ?? 0;
  const outside = found?.outOfBounds ?? 0;
  return [
    {
      when,
      product,
      unit: entry.unit,
      minimum: found?.minimum ?? Number.NaN,
      mean: found?.mean ?? Number.NaN,
      maximum: found?.maximum ?? Number.NaN,
      low,
      high,
      count,
      outside,
      outsideShare: count > 0 ? outside / count : 0,
    },
  ];
}

/**
 * Statistics of a histogram. A bin counts as outside when its centre lies outside; minimum and maximum are the
 * outer edges of the filled bins.
 */
function ofHistogram(histogram: ValueHistogram, low: number, high: number): BoundsStatistics | null {
  const { start, width, counts } = histogram;
  const first = counts.findIndex((n) => n > 0);
  if (first < 0) return null;
  const last = counts.findLastIndex((n) => n > 0);
  let count = 0;
  let sum = 0;
  let outOfBounds = 0;
  counts.forEach((n, i) => {
    const centre = start + (i + 0.5) * width;
    count += n;
    sum += n * centre;
    if (centre < low || centre > high) outOfBounds += n;
  });
  return {
    count,
    minimum: start + first * width,
    mean: sum / count,
    maximum: start + (last + 1) * width,
    outOfBounds,
  };
}

const FLUXES = ['net-radiation', 'soil-heat', 'sensible-heat', 'latent-heat'] as const satisfies readonly ProductName[];

/** The usual order of the fluxes of a clear midday, and what was found. */
export interface FluxOrder {
  readonly when: string;
  /** Product with the largest mean, and with the narrowest range. */
  readonly largest: ProductName;
  readonly narrowest: ProductName;
  /** True when net radiation is the largest and soil heat has the narrowest range. */
  readonly usual: boolean;
}

/**
 * Compares the four fluxes of one date: over land at a clear midday net radiation is the largest term and soil
 * heat varies least. Another order is no error, but a reason to look.
 *
 * @returns null unless all four fluxes are given with valid pixels
 */
export function checkFluxOrder(
  when: string,
  statistics: Partial<Record<ProductName, BoundsStatistics | null>>,
): FluxOrder | null {
  const found = FLUXES.flatMap((product) => {
    const one = statistics[product];
    return one && one.count > 0 ? [{ product, mean: one.mean, range: one.maximum - one.minimum }] : [];
  });
  if (found.length < FLUXES.length) return null;
  const largest = found.reduce((a, b) => (b.mean > a.mean ? b : a)).product;
  const narrowest = found.reduce((a, b) => (b.range < a.range ? b : a)).product;
  return { when, largest, narrowest, usual: largest === 'net-radiation' && narrowest === 'soil-heat' };
}
