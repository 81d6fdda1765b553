import type { RasterSamples } from './sample-type.ts';

/** Overviews are made until both sides are at most this long, whatever the tile size; one at least. */
const SMALLEST_SIDE = 256;

export interface LevelSize {
  readonly rows: number;
  readonly columns: number;
}

/** Sizes of the overview levels below full resolution, largest first. */
export function overviewLevels(rows: number, columns: number): LevelSize[] {
  const levels: LevelSize[] = [];
  let size = { rows, columns };
  while (levels.length === 0 || size.rows > SMALLEST_SIDE || size.columns > SMALLEST_SIDE) {
    size = { rows: Math.ceil(size.rows / 2), columns: Math.ceil(size.columns / 2) };
    levels.push(size);
  }
  return levels;
}

export type OverviewMode = 'average' | 'nearest';

/**
 * Half the resolution: each pixel from the 2 x 2 above it (fewer at the right and lower edge). `average`: mean of the
 * valid ones, for whole numbers rounded to the nearest (halves up); nodata when none is valid. NaN is never valid.
 * `nearest`: the upper-left one. Levels are aligned to the grid's origin, so tiles of any even size give the same.
 */
export function halve<T extends RasterSamples>(
  samples: T,
  rows: number,
  columns: number,
  nodata: number | null,
  mode: OverviewMode,
): T {
  const outRows = Math.ceil(rows / 2);
  const outColumns = Math.ceil(columns / 2);
  const whole = !(samples instanceof Float32Array || samples instanceof Float64Array);
  const valid = (value: number) => value !== nodata && !Number.isNaN(value);
  const out = new (samples.constructor as new (length: number) => T)(outRows * outColumns);
  for (let r = 0; r < outRows; r++) {
    const top = 2 * r * columns;
    const bottom = 2 * r + 1 < rows ? top + columns : -1;
    for (let c = 0; c < outColumns; c++) {
      const x = 2 * c;
      const right = x + 1 < columns;
      const first = samples[top + x];
      if (mode === 'nearest') {
        out[r * outColumns + c] = first;
        continue;
      }
      let sum = 0;
      let count = 0;
      if (valid(first)) {
        sum += first;
        count++;
      }
      if (right && valid(samples[top + x + 1])) {
        sum += samples[top + x + 1];
        count++;
      }
      if (bottom >= 0 && valid(samples[bottom + x])) {
        sum += samples[bottom + x];
        count++;
      }
      if (right && bottom >= 0 && valid(samples[bottom + x + 1])) {
        sum += samples[bottom + x + 1];
        count++;
      }
      const mean = count === 0 ? (nodata ?? Number.NaN) : sum / count;
      out[r * outColumns + c] = whole ? Math.floor(mean + 0.5) : mean;
    }
  }
  return out;
}

/** A rectangle of samples of one level. */
export interface LevelPiece<T extends RasterSamples> {
  readonly row: number;
  readonly column: number;
  readonly rows: number;
  readonly columns: number;
  readonly samples: T;
}

export interface PyramidOptions<T extends RasterSamples> {
  /** Sizes of the overview levels, as `overviewLevels` gives them. */
  readonly levels: readonly LevelSize[];
  readonly blockSize: number;
  readonly nodata: number | null;
  readonly mode: OverviewMode;
  /** A new array of `length` samples of the raster's type. */
  readonly allocate: (length: number) => T;
  /** Value of pixels that no piece covers. */
  readonly empty: number;
  /** A finished block: blockSize x blockSize samples, padded with `empty`. Called in row-major order for each level. */
  readonly block: (level: number, samples: T) => void;
}

/**
 * Builds the overview levels of a raster from pieces of its first one, given row by row of pieces. It holds one row of
 * blocks for each level, so its memory follows the width of the raster and not its height.
 */
export class PyramidBuilder<T extends RasterSamples> {
  readonly #options: PyramidOptions<T>;
  readonly #bands: LevelBand<T>[];

  constructor(options: PyramidOptions<T>) {
    this.#options = options;
    this.#bands = options.levels.map((size) => new LevelBand(size, options));
  }

  /**
   * Adds a piece of the first overview level (level 0 here). Pieces come top to bottom; those beside one another must
   * lie in the same row of blocks, so the block size is a multiple of their height (half a tile: always so).
   *
   * @throws RangeError when the piece reaches out of the level
   */
  add(piece: LevelPiece<T>): void {
    if (this.#bands.length === 0) return;
    const { rows, columns } = this.#options.levels[0];
    if (piece.row + piece.rows > rows || piece.column + piece.columns > columns) {
      throw new RangeError(`piece at ${piece.row},${piece.column} reaches out of a level of ${rows} x ${columns}`);
    }
    this.#put(0, piece);
  }

  /** Writes out what is left. */
  end(): void {
    for (let level = 0; level < this.#bands.length; level++) {
      while (!this.#bands[level].finished) this.#flush(level);
    }
  }

  #put(level: number, piece: LevelPiece<T>): void {
    const band = this.#bands[level];
    // A piece may be taller than what is left of the band: it is put in part by part.
    for (let done = 0; done < piece.rows; ) {
      while (piece.row + done >= band.endRow) this.#flush(level);
      const rows = Math.min(piece.rows - done, band.endRow - (piece.row + done));
      band.copy(piece, done, rows);
      done += rows;
    }
  }

  #flush(level: number): void {
    const { blockSize, nodata, mode, block } = this.#options;
    const band = this.#bands[level];
    for (const samples of band.blocks(blockSize)) block(level, samples);
    if (level + 1 < this.#bands.length) {
      const { rows, columns } = band;
      const samples = halve(band.samples.subarray(0, rows * columns) as T, rows, columns, nodata, mode);
      const next = { row: band.firstRow / 2, column: 0, rows: Math.ceil(rows / 2), columns: Math.ceil(columns / 2) };
      this.#put(level + 1, { ...next, samples });
    }
    band.advance();
  }
}

/** The row of blocks of one level that is being filled. */
class LevelBand<T extends RasterSamples> {
  readonly #size: LevelSize;
  readonly #height: number;
  readonly #empty: number;
  readonly #allocate: (length: number) => T;
  readonly samples: T;
  firstRow = 0;

  constructor(size: LevelSize, { blockSize, empty, allocate }: PyramidOptions<T>) {
    this.#size = size;
    this.#height = blockSize;
    this.#empty = empty;
    this.#allocate = allocate;
    this.samples = allocate(blockSize * size.columns).fill(empty) as T;
  }

  get columns(): number {
    return this.#size.columns;
  }

  /** Rows of the level that lie in the band. */
  get rows(): number {
    return Math.min(this.#height, this.#size.rows - this.firstRow);
  }

  get endRow(): number {
    return this.firstRow + this.rows;
  }

  get finished(): boolean {
    return this.firstRow >= this.#size.rows;
  }

  copy(piece: LevelPiece<T>, skip: number, rows: number): void {
    for (let r = 0; r < rows; r++) {
      const from = (skip + r) * piece.columns;
      const to = (piece.row + skip + r - this.firstRow) * this.columns + piece.column;
      this.samples.set(piece.samples.subarray(from, from + piece.columns) as never, to);
    }
  }

  *blocks(size: number): Generator<T> {
    for (let column = 0; column < this.columns; column += size) {
      const width = Math.min(size, this.columns - column);
      const block = this.#allocate(size * size).fill(this.#empty) as T;
      for (let r = 0; r < this.rows; r++) {
        const from = r * this.columns + column;
        block.set(this.samples.subarray(from, from + width) as never, r * size);
      }
      yield block;
    }
  }

  advance(): void {
    this.firstRow += this.#height;
    this.samples.fill(this.#empty);
  }
}
