import type { PixelWindow } from '../../shared/contract/grid.ts';
import { PRODUCTS, type ProductEntry, type ProductName } from '../../shared/contract/products.ts';
import { type BlockCompression, encodeBlock } from '../../shared/raster/block.ts';
import { emptyValue, type ProductSamples, samplesOf } from '../../shared/raster/product-tile.ts';
import { type LevelSize, PyramidBuilder } from '../../shared/raster/pyramid.ts';
import { encodePlanes } from '../../shared/raster/tile-codec.ts';

/** Longest side of the picture that the report draws, pixels. */
const PREVIEW_SIDE = 640;

/** Store key of a mosaic's preview. */
export function previewKey(recordKey: string): string {
  return recordKey.replace(/\.json$/, '.preview');
}

/** Overview blocks of one mosaic, and the small picture that the report draws from one of the levels. */
export class MosaicOverviews {
  readonly #product: ProductName;
  readonly #levels: readonly LevelSize[];
  readonly #tileSize: number;
  readonly #builder: PyramidBuilder<ProductSamples>;
  /** Level that the preview is taken of. */
  readonly #previewLevel: number;
  readonly #previewSize: LevelSize;
  readonly #preview: ProductSamples;
  readonly #blocksDone: number[];
  /** Compressed blocks by level, the first overview first. */
  readonly blocks: Uint8Array[][];

  constructor(product: ProductName, levels: readonly LevelSize[], tileSize: number, compression: BlockCompression) {
    const entry: ProductEntry = PRODUCTS[product];
    this.#product = product;
    this.#levels = levels;
    this.#tileSize = tileSize;
    this.blocks = levels.map(() => []);
    this.#blocksDone = levels.map(() => 0);
    const small = levels.findIndex(({ rows, columns }) => Math.max(rows, columns) <= PREVIEW_SIDE);
    this.#previewLevel = small;
    this.#previewSize = levels[small] ?? { rows: 0, columns: 0 };
    this.#preview = samplesOf(entry.storage, this.#previewSize.rows * this.#previewSize.columns).fill(
      emptyValue(product),
    );
    this.#builder = new PyramidBuilder<ProductSamples>({
      levels,
      blockSize: tileSize,
      nodata: entry.nodata,
      mode: entry.overview,
      allocate: (length) => samplesOf(entry.storage, length),
      empty: emptyValue(product),
      block: (level, samples) => {
        this.blocks[level].push(encodeBlock(samples, tileSize, compression));
        if (level === this.#previewLevel) this.#paint(samples, this.#blocksDone[level]);
        this.#blocksDone[level]++;
      },
    });
  }

  /** Adds the half-resolution part of a tile. Tiles come row by row. */
  add(window: PixelWindow, half: ProductSamples): void {
    this.#builder.add({
      row: window.row / 2,
      column: window.column / 2,
      rows: Math.ceil(window.rows / 2),
      columns: Math.ceil(window.columns / 2),
      samples: half,
    });
  }

  end(): void {
    this.#builder.end();
  }

  preview(): { bytes: Uint8Array; size: { rows: number; columns: number; factor: number } } {
    const { rows, columns } = this.#previewSize;
    const size = { rows, columns, factor: 2 ** (this.#previewLevel + 1) };
    return { bytes: encodePlanes({ product: this.#product }, { values: this.#preview }), size };
  }

  #paint(samples: ProductSamples, index: number): void {
    const { rows, columns } = this.#levels[this.#previewLevel];
    const across = Math.ceil(columns / this.#tileSize);
    const row0 = Math.floor(index / across) * this.#tileSize;
    const column0 = (index % across) * this.#tileSize;
    const width = Math.min(this.#tileSize, columns - column0);
    for (let r = 0; r < Math.min(this.#tileSize, rows - row0); r++) {
      const from = r * this.#tileSize;
      this.#preview.set(samples.subarray(from, from + width), (row0 + r) * columns + column0);
    }
  }
}
