import type { GridSpec, PixelWindow } from '../contract/grid.ts';
import { expandRow, type Lattice } from '../region/lattice.ts';
import { physicalValues, type ToFloat } from './physical.ts';
import type { RasterFile, RasterHeader } from './raster-file.ts';
import { newSamples, type RasterSamples } from './sample-type.ts';
import { pixelTransform } from './transform.ts';

/** Part of a source raster: samples of a window, addressed by the source's own rows and columns. */
export interface SourcePart<T extends RasterSamples> extends PixelWindow {
  readonly data: T;
}

/**
 * Source pixels that a window needs, with `margin` more on every side, clipped to the raster. For nearest no margin is
 * needed, for bilinear one pixel.
 *
 * @returns null when the window lies outside the raster
 */
export function sourceWindow(
  lattice: Lattice,
  window: PixelWindow,
  { width, height }: Pick<RasterHeader, 'width' | 'height'>,
  margin: number,
): PixelWindow | null {
  const { left, right, top, bottom } = windowExtent(lattice, window);
  if (!Number.isFinite(left + right + top + bottom)) return null;
  const column = Math.max(0, Math.floor(left) - margin);
  const row = Math.max(0, Math.floor(top) - margin);
  const columnEnd = Math.min(width, Math.floor(right) + 1 + margin);
  const rowEnd = Math.min(height, Math.floor(bottom) + 1 + margin);
  if (columnEnd <= column || rowEnd <= row) return null;
  return { row, column, rows: rowEnd - row, columns: columnEnd - column };
}

/**
 * Exact extent of the window's pixel centres in the source. Between its nodes the lattice is bilinear, so the extremes
 * lie at the first and last pixels of each cell.
 */
function windowExtent(lattice: Lattice, { row, column, rows, columns }: PixelWindow) {
  const rowsSeen = cellEnds(row, rows, lattice.step);
  const columnsSeen = cellEnds(column, columns, lattice.step);
  const x = new Float64Array(columns);
  const y = new Float64Array(columns);
  const extent = { left: Infinity, right: -Infinity, top: Infinity, bottom: -Infinity };
  for (const r of rowsSeen) {
    expandPlaces(lattice, r, { column, columns }, x, y);
    for (const c of columnsSeen) {
      const at = c - column;
      extent.left = Math.min(extent.left, x[at]);
      extent.right = Math.max(extent.right, x[at]);
      extent.top = Math.min(extent.top, y[at]);
      extent.bottom = Math.max(extent.bottom, y[at]);
    }
  }
  return extent;
}

/** Source columns and rows of part of a global row. */
function expandPlaces(
  lattice: Lattice,
  row: number,
  { column, columns }: Pick<PixelWindow, 'column' | 'columns'>,
  x: Float64Array,
  y: Float64Array,
): void {
  expandRow(lattice, 0, row, column, columns, x);
  expandRow(lattice, 1, row, column, columns, y);
}

/** First and last pixel of a stretch in each lattice cell that it touches. */
function cellEnds(start: number, length: number, step: number): number[] {
  const ends: number[] = [];
  for (let at = start; at < start + length; ) {
    const next = Math.min(start + length, (Math.floor(at / step) + 1) * step);
    ends.push(at, next - 1);
    at = next;
  }
  return ends;
}

/**
 * Bilinear resampling at pixel centres. Nodata (NaN) is never blended: weights are shared among the valid
 * neighbours, and a pixel whose nearest source pixel is nodata stays nodata, so valid ground does not grow.
 *
 * @param out one value for each pixel of the window
 */
export function warpBilinear(
  source: SourcePart<Float32Array>,
  lattice: Lattice,
  window: PixelWindow,
  out: Float32Array,
): void {
  const { data, row: row0, column: column0, rows, columns } = source;
  const sx = new Float64Array(window.columns);
  const sy = new Float64Array(window.columns);
  for (let r = 0; r < window.rows; r++) {
    expandPlaces(lattice, window.row + r, window, sx, sy);
    for (let c = 0; c < window.columns; c++) {
      const x = sx[c] - 0.5;
      const y = sy[c] - 0.5;
      const ix = Math.floor(x);
      const iy = Math.floor(y);
      const fx = x - ix;
      const fy = y - iy;
      const px = ix - column0;
      const py = iy - row0;
      const at = py * columns + px;
      let value = Number.NaN;
      if (px >= 0 && py >= 0 && px + 1 < columns && py + 1 < rows) {
        const top = data[at] + (data[at + 1] - data[at]) * fx;
        const bottom = data[at + columns] + (data[at + columns + 1] - data[at + columns]) * fx;
        value = top + (bottom - top) * fy;
      }
      out[r * window.columns + c] = Number.isNaN(value) ? sharedWeights(source, px, py, fx, fy) : value;
    }
  }
}

/** Bilinear value where some of the four neighbours are nodata or outside. */
function sharedWeights(source: SourcePart<Float32Array>, px: number, py: number, fx: number, fy: number): number {
  const { data, rows, columns } = source;
  const sample = (x: number, y: number) =>
    x < 0 || y < 0 || x >= columns || y >= rows ? Number.NaN : data[y * columns + x];
  const nearest = sample(px + (fx < 0.5 ? 0 : 1), py + (fy < 0.5 ? 0 : 1));
  if (Number.isNaN(nearest)) return Number.NaN;
  let sum = 0;
  let weights = 0;
  for (let k = 0; k < 4; k++) {
    const [dx, dy] = [k & 1, k >> 1];
    const value = sample(px + dx, py + dy);
    const weight = (dx ? fx : 1 - fx) * (dy ? fy : 1 - fy);
    if (Number.isNaN(value) || weight === 0) continue;
    sum += weight * value;
    weights += weight;
  }
  return weights > 0 ? sum / weights : Number.NaN;
}

/** Nearest source pixel, for flags and classes. @param outside value where the source has no pixel */
export function warpNearest<T extends RasterSamples>(
  source: SourcePart<T>,
  lattice: Lattice,
  window: PixelWindow,
  out: T,
  outside: number,
): void {
  const { data, row: row0, column: column0, rows, columns } = source;
  const sx = new Float64Array(window.columns);
  const sy = new Float64Array(window.columns);
  for (let r = 0; r < window.rows; r++) {
    expandPlaces(lattice, window.row + r, window, sx, sy);
    for (let c = 0; c < window.columns; c++) {
      const px = Math.floor(sx[c]) - column0;
      const py = Math.floor(sy[c]) - row0;
      const inside = px >= 0 && py >= 0 && px < columns && py < rows;
      out[r * window.columns + c] = inside ? data[py * columns + px] : outside;
    }
  }
}

export interface WarpOptions {
  readonly resampling: 'bilinear' | 'nearest';
  /** For bilinear, in place of the scale, offset and nodata of the file's own header. */
  readonly toFloat?: ToFloat;
}

/** Source pixels read beside the needed ones: one for the bilinear neighbour, one for rounding. */
export const SOURCE_MARGIN = 2;

/**
 * A window of the grid read from a raster. `bilinear`: physical values as float32, NaN for nodata and outside the
 * raster. `nearest`: stored values; outside the raster its nodata, or 0 when it has none.
 *
 * @throws BasinloomError RASTER_TRUNCATED, RASTER_CORRUPT, RASTER_READ
 */
export async function readWarped(
  raster: RasterFile,
  grid: GridSpec,
  window: PixelWindow,
  { resampling, toFloat }: WarpOptions,
): Promise<RasterSamples> {
  const { header } = raster;
  const pixels = window.rows * window.columns;
  const lattice = pixelTransform(grid, header.georeference, window);
  const needed = sourceWindow(lattice, window, header, SOURCE_MARGIN);
  if (resampling === 'nearest') {
    const outside = header.nodata ?? 0;
    const out = newSamples(header.sampleType, pixels).fill(outside);
    if (needed) warpNearest({ ...needed, data: await raster.readWindow(needed) }, lattice, window, out, outside);
    return out;
  }
  const out = new Float32Array(pixels).fill(Number.NaN);
  if (needed) {
    const stored = await raster.readWindow(needed);
    const data = physicalValues(stored, toFloat ?? { ...header, fill: header.nodata });
    warpBilinear({ ...needed, data }, lattice, window, out);
  }
  return out;
}
