import { PRODUCTS, type ProductEntry, type ProductName } from '../../../shared/contract/products.ts';
import { type BandStatistics, qualityBits } from '../product-metadata.ts';

/** A published product file, as an item lists it. */
export interface ProductAsset {
  readonly product: ProductName;
  /** Relative to the item. @defaultValue "./<product>.tif" */
  readonly href?: string;
  /** Bytes. */
  readonly size: number;
  /** Hex digits, lower case. */
  readonly sha256: string;
  /** Of the valid pixels, in the unit of the product; null when no pixel is valid. */
  readonly statistics: BandStatistics | null;
}

/** Any other file of the item's folder: a table, the lineage. */
export interface SideAsset {
  readonly key: string;
  readonly href: string;
  readonly title: string;
  readonly mediaType: string;
  readonly roles: readonly string[];
  readonly size?: number;
  readonly sha256?: string;
}

const COG = 'image/tiff; application=geotiff; profile=cloud-optimized';

/** Multihash of a SHA-256: code 0x12, length 0x20, digest (file extension v2.1.0). */
export function multihash(sha256: string): string {
  return `1220${sha256.toLowerCase()}`;
}

/** STAC 1.1 says "" for a number without unit, where UDUNITS says "1". */
export function stacUnit(unit: string): string {
  return unit === '1' ? '' : unit;
}

/**
 * Asset of one product: common band fields of STAC 1.1, raster v2.0.0 for scale, offset and sampling, file
 * v2.1.0 for identity, classification v2.0.0 for the bits of a quality layer.
 */
export function productAsset(asset: ProductAsset, resolutionM: number): Record<string, unknown> {
  return {
    href: asset.href ?? `./${asset.product}.tif`,
    ...assetDefinition(asset.product, resolutionM),
    bands: [band(asset.product, asset.statistics)],
    'file:size': asset.size,
    'file:checksum': multihash(asset.sha256),
  };
}

/** What all files of a product share: the part that a collection lists under `item_assets`. */
export function assetDefinition(product: ProductName, resolutionM: number): Record<string, unknown> {
  const entry: ProductEntry = PRODUCTS[product];
  return {
    title: entry.title,
    description: `${entry.description}.`,
    type: COG,
    roles: qualityBits(product) ? ['metadata', 'quality'] : ['data'],
    data_type: entry.storage,
    ...(entry.nodata === null ? {} : { nodata: entry.nodata }),
    unit: stacUnit(entry.unit),
    'raster:sampling': 'area',
    'raster:spatial_resolution': resolutionM,
    'raster:scale': entry.scale,
    'raster:offset': entry.offset,
  };
}

function band(product: ProductName, statistics: BandStatistics | null): Record<string, unknown> {
  const bits = qualityBits(product);
  // Minimum and mean of a bit field say nothing.
  const summary = statistics && !bits ? { statistics: bandStatistics(statistics) } : {};
  const bitfields = bits
    ? {
        'classification:bitfields': bits.map(({ bit, name, meaning }) => ({
          name,
          description: meaning,
          offset: bit,
          length: 1,
          classes: [
            { value: 0, name: `not-${name}`, description: `not: ${meaning}` },
            { value: 1, name, description: meaning },
          ],
        })),
      }
    : {};
  return { name: product, ...summary, ...bitfields };
}

function bandStatistics(statistics: BandStatistics): Record<string, number> {
  return {
    minimum: statistics.minimum,
    maximum: statistics.maximum,
    mean: statistics.mean,
    stddev: statistics.standardDeviation,
    ...(statistics.count === undefined ? {} : { count: statistics.count }),
    valid_percent: statistics.validPercent,
  };
}

/** Asset of a file that is no raster. */
export function sideAsset(asset: SideAsset): Record<string, unknown> {
  return {
    href: asset.href,
    title: asset.title,
    type: asset.mediaType,
    roles: [...asset.roles],
    ...(asset.size === undefined ? {} : { 'file:size': asset.size }),
    ...(asset.sha256 === undefined ? {} : { 'file:checksum': multihash(asset.sha256) }),
  };
}
