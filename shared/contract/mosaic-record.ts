import type { ProductName } from './products.ts';

/** Statistics of a product in its own unit; null when no pixel is valid. */
export interface ProductStatistics {
  readonly count: number;
  readonly minimum: number;
  readonly maximum: number;
  readonly mean: number;
  readonly standardDeviation: number;
  /** Share of all pixels of the raster, percent. */
  readonly validPercent: number;
  /** Pixels outside the product's plausible bounds. */
  readonly outOfBounds: number;
}

/** What the mosaic of one product leaves beside the file itself. */
export interface MosaicRecord {
  readonly product: ProductName;
  readonly when: string;
  /** Bytes and hash of the product file. */
  readonly size: number;
  readonly sha256: string;
  readonly statistics: ProductStatistics | null;
  /** Overview that the report draws, as planes of an artefact: one plane `values` of stored values. */
  readonly preview: {
    readonly key: string;
    readonly rows: number;
    readonly columns: number;
    /** Grid pixels for each pixel of the preview along a side: a power of two. */
    readonly factor: number;
  };
}
