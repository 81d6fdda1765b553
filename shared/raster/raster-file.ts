import { BasinloomError } from '../contract/errors.ts';
import type { PixelWindow } from '../contract/grid.ts';
import type { ByteSource } from './byte-source.ts';
import { decodeRasterBlock } from './decode-block.ts';
import { type BlockLayout, type RasterHeader, readLayout } from './raster-header.ts';
import { bytesPerSample, newSamples, type RasterSamples } from './sample-type.ts';

export type { RasterHeader } from './raster-header.ts';
export type { RasterSamples } from './sample-type.ts';

/** The first band of an open raster. */
export interface RasterFile {
  readonly header: RasterHeader;
  /**
   * Samples of a window in source pixels, row by row. Reads only the blocks that the window touches; the last few
   * decoded blocks are kept, since neighbouring windows share them.
   *
   * Pixels of blocks that were left out of the file (sparse) are nodata, or 0 where the file names none.
   *
   * @throws BasinloomError RASTER_TRUNCATED, RASTER_CORRUPT, RASTER_READ
   * @throws RangeError when the window reaches out of the raster
   */
  readWindow(window: PixelWindow): Promise<RasterSamples>;
  close(): Promise<void>;
}

/** Decoded blocks kept by one open raster, bytes. A row of 512-pixel blocks across a scene is about 4 MB. */
const CACHE_BYTES = 8 << 20;

/**
 * Opens a raster. The source is the raster's from now on: it is closed with it, and at once when the header is of no
 * use.
 *
 * @throws BasinloomError RASTER_CORRUPT, RASTER_TRUNCATED, RASTER_READ, RASTER_UNSUPPORTED, RASTER_NO_CRS
 */
export async function openRaster(source: ByteSource): Promise<RasterFile> {
  try {
    return new BlockReader(source, await readLayout(source));
  } catch (error) {
    await source.close();
    throw error;
  }
}

class BlockReader implements RasterFile {
  readonly header: RasterHeader;
  readonly #source: ByteSource;
  readonly #layout: BlockLayout;
  readonly #cache = new Map<number, Promise<RasterSamples | null>>();
  readonly #kept: number;

  constructor(source: ByteSource, layout: BlockLayout) {
    this.#source = source;
    this.#layout = layout;
    this.header = layout.header;
    const { blockWidth, blockHeight, sampleType } = layout.header;
    this.#kept = Math.max(2, Math.floor(CACHE_BYTES / (blockWidth * blockHeight * bytesPerSample(sampleType))));
  }

  async readWindow(window: PixelWindow): Promise<RasterSamples> {
    const { width, height, blockWidth, blockHeight, sampleType, nodata } = this.header;
    const { row, column, rows, columns } = window;
    if (!(row >= 0 && column >= 0 && row + rows <= height && column + columns <= width)) {
      throw new RangeError(`window ${row},${column} ${rows}x${columns} reaches out of ${this.#source.name}`);
    }
    const out = newSamples(sampleType, window.rows * window.columns);
    const lastRow = window.row + window.rows - 1;
    const lastColumn = window.column + window.columns - 1;
    for (let by = Math.floor(window.row / blockHeight); by <= Math.floor(lastRow / blockHeight); by++) {
      for (let bx = Math.floor(window.column / blockWidth); bx <= Math.floor(lastColumn / blockWidth); bx++) {
        const block = await this.#block(by, bx);
        const x0 = Math.max(window.column, bx * blockWidth);
        const x1 = Math.min(lastColumn + 1, (bx + 1) * blockWidth);
        const y1 = Math.min(lastRow + 1, (by + 1) * blockHeight);
        for (let y = Math.max(window.row, by * blockHeight); y < y1; y++) {
          const to = (y - window.row) * window.columns + x0 - window.column;
          const from = (y - by * blockHeight) * blockWidth + x0 - bx * blockWidth;
          if (block) out.set(block.subarray(from, from + x1 - x0) as never, to);
          else out.fill(nodata ?? 0, to, to + x1 - x0);
        }
      }
    }
    return out;
  }

  close(): Promise<void> {
    this.#cache.clear();
    return this.#source.close();
  }

  #block(by: number, bx: number): Promise<RasterSamples | null> {
    const index = by * this.#layout.blocksAcross + bx;
    const block = this.#cache.get(index) ?? this.#read(index, by);
    this.#cache.delete(index);
    this.#cache.set(index, block);
    block.catch(() => this.#cache.delete(index));
    if (this.#cache.size > this.#kept) {
      const [oldest] = this.#cache.keys();
      this.#cache.delete(oldest);
    }
    return block;
  }

  /** A decoded block, or null for a sparse one (length 0: nodata everywhere). */
  async #read(index: number, by: number): Promise<RasterSamples | null> {
    const { offsets, lengths, header } = this.#layout;
    const length = Number(lengths[index]);
    if (length === 0) return null;
    const place = `block ${index}`;
    const offset = Number(offsets[index]);
    if (!(offset + length <= this.#source.size)) {
      throw new BasinloomError('RASTER_TRUNCATED', { file: this.#source.name, place });
    }
    const bytes = await this.#source.read(offset, length);
    // The last strip may be shorter than the others; tiles are always whole.
    const strips = header.blockWidth === header.width;
    const rows = strips ? Math.min(header.blockHeight, header.height - by * header.blockHeight) : header.blockHeight;
    try {
      return decodeRasterBlock(bytes, this.#layout, rows);
    } catch (error) {
      const detail = (error as Error).message;
      throw new BasinloomError('RASTER_CORRUPT', { file: this.#source.name, place, detail }, { cause: error });
    }
  }
}
