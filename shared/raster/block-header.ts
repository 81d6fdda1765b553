import type { EdgeStrips, SeamEntry } from '../anchors/seam.ts';
import type { ProductName } from '../contract/products.ts';
import type { ZoneSum } from '../region/zone-table.ts';
import type { StoredStatistics } from './product-tile.ts';

/** Seams of one variable on one tile. */
export interface SeamVariable {
  readonly product: ProductName;
  /** Before or after the adjustment between passes. */
  readonly stage: 'before' | 'after';
  /** Seams inside the tile. */
  readonly inside: readonly SeamEntry[];
  /** Strips from which the seams across the tile's edges follow. */
  readonly edges: EdgeStrips;
}

/** Counts over the pixels of the region on one tile. */
export interface QualityCounts {
  readonly regionPixels: number;
  readonly usable: number;
  /** Pixels that have each bit of the quality layer set; index = bit. */
  readonly bits: readonly number[];
}

/** Header of the artefact that a day or integrate job leaves; its planes are `<product>.block` and `<product>.half`. */
export interface BlockHeader {
  readonly statistics: Partial<Record<ProductName, StoredStatistics>>;
  readonly seams: readonly SeamVariable[];
  readonly quality: QualityCounts;
  /** Of a period: the tile's share of every zone. */
  readonly zones?: readonly ZoneSum[];
}
