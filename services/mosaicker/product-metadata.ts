import type { ProductStatistics } from '../../shared/contract/mosaic-record.ts';
import type { Period } from '../../shared/contract/plan.ts';
import { PRODUCTS, type ProductEntry, type ProductName } from '../../shared/contract/products.ts';
import { DAY_QUALITY_BITS, PERIOD_QUALITY_BITS, type QualityBit } from '../../shared/contract/quality.ts';
import type { TiffMetadata } from '../../shared/raster/gdal-metadata.ts';

/** What a product file is about: one overpass date (YYYY-MM-DD), or one accounting period. */
export type ProductTime = { readonly date: string } | { readonly period: Period };

/** Statistics of the valid pixels, in the unit of the product. */
export type BandStatistics = Omit<ProductStatistics, 'count' | 'outOfBounds'> &
  Partial<Pick<ProductStatistics, 'count'>>;

export interface Provenance {
  /** Version of the product definitions and of the program that wrote the file. */
  readonly softwareVersion: string;
  /** Name of the energy balance method, for example "metric". */
  readonly method?: string;
}

/** Quantities that are sums over time; CF cell methods say so. All others hold at the overpass. */
const TOTALS: ReadonlySet<ProductName> = new Set(['et-day', 'et-period']);
const COUNTS: ReadonlySet<ProductName> = new Set(['observations']);
const LONGEST: ReadonlySet<ProductName> = new Set(['longest-gap']);

/**
 * Cell methods of a product, as in section 7.3 of the CF conventions; undefined for a flag, which has none.
 * A value is the mean over the pixel's area.
 */
export function cellMethods(product: ProductName): string | undefined {
  if (qualityBits(product)) return undefined;
  if (TOTALS.has(product)) return 'area: mean time: sum';
  if (COUNTS.has(product)) return 'time: sum';
  if (LONGEST.has(product)) return 'time: maximum';
  return PRODUCTS[product].per === 'day' ? 'area: mean time: point' : 'area: mean time: mean';
}

/** The bit table of a quality product; undefined for every other. */
export function qualityBits(product: ProductName): readonly QualityBit[] | undefined {
  if (product === 'quality-day') return DAY_QUALITY_BITS;
  if (product === 'quality-period') return PERIOD_QUALITY_BITS;
  return undefined;
}

/**
 * The metadata inside a product's TIFF. Every item follows from the product, the date and the versions: nothing
 * depends on when or where the run was made. A standard name is given only where the CF table has one.
 */
export function cogMetadata(
  product: ProductName,
  when: ProductTime,
  statistics: BandStatistics | null,
  provenance: Provenance,
): TiffMetadata {
  const entry: ProductEntry = PRODUCTS[product];
  const items: Record<string, string> = {
    AREA_OR_POINT: 'Area',
    product,
    long_name: entry.title,
  };
  if (entry.standardName) items.standard_name = entry.standardName;
  items.units = entry.unit;
  const methods = cellMethods(product);
  if (methods) items.cell_methods = methods;
  Object.assign(items, timeItems(when), flagItems(product));
  if (entry.bounds) items.plausible_range = `${entry.bounds[0]} ${entry.bounds[1]}`;
  if (provenance.method) items.method = provenance.method;
  items.product_version = provenance.softwareVersion;
  items.Conventions = 'CF-1.11';
  return {
    description: entry.description,
    unit: entry.unit,
    scale: entry.scale,
    offset: entry.offset,
    ...(statistics ? { statistics } : {}),
    items,
  };
}

function timeItems(when: ProductTime): Record<string, string> {
  if ('date' in when) return { date: when.date };
  return { period: when.period.id, period_first_day: when.period.from, period_last_day: when.period.to };
}

/** Flag attributes of section 3.5 of the CF conventions, for independent bits. */
function flagItems(product: ProductName): Record<string, string> {
  const bits = qualityBits(product);
  if (!bits) return {};
  return {
    flag_masks: bits.map(({ bit }) => 2 ** bit).join(' '),
    flag_meanings: bits.map(({ name }) => name.replaceAll('-', '_')).join(' '),
  };
}
