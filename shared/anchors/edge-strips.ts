import type { PixelWindow } from '../contract/grid.ts';

/**
 * The rim of a tile, from which the jumps across its edges follow without the tile itself.
 *
 * A seam run is four pixels long, so three of its positions straddle a tile edge; together they need three lines
 * on either side.
 */
export const STRIP_LINES = 3;

/** Three lines along an edge, in ascending row (or column) order. Plain JSON. */
export interface EdgeStrip {
  /** Global address of the first pixel of the first line. */
  readonly row: number;
  readonly column: number;
  /** Pixels in a line. */
  readonly length: number;
  /** Whether its lines are rows of the grid (top and bottom) or columns (left and right). */
  readonly along: 'row' | 'column';
  /** Stored values, line after line; empty when the strip has no valid pixel. */
  readonly values: readonly number[];
  /** Origins of the same pixels as runs: origin, count, origin, count ... */
  readonly origins: readonly number[];
}

export interface EdgeStrips {
  readonly top: EdgeStrip;
  readonly bottom: EdgeStrip;
  readonly left: EdgeStrip;
  readonly right: EdgeStrip;
}

export type OriginPlane = Uint8Array | Uint16Array | Uint32Array;

/**
 * Takes the strips of a tile of stored values; `window` says where the tile lies. A tile with fewer than three
 * rows or columns (the last of a grid) fills the lines that it does not have with nodata.
 */
export function takeEdges(plane: Int16Array, nodata: number, origin: OriginPlane, window: PixelWindow): EdgeStrips {
  const { rows, columns } = window;
  const strip = (along: 'row' | 'column', firstLine: number): EdgeStrip => {
    const [lines, length] = along === 'row' ? [rows, columns] : [columns, rows];
    const [lineStride, pixelStride] = along === 'row' ? [columns, 1] : [1, columns];
    const values: number[] = [];
    const origins: number[] = [];
    for (let line = firstLine; line < firstLine + STRIP_LINES; line += 1) {
      const inside = line >= 0 && line < lines;
      for (let i = 0; i < length; i += 1) {
        const at = line * lineStride + i * pixelStride;
        values.push(inside ? plane[at] : nodata);
        origins.push(inside ? origin[at] : 0);
      }
    }
    const place = {
      row: window.row + (along === 'row' ? firstLine : 0),
      column: window.column + (along === 'row' ? 0 : firstLine),
      length,
      along,
    };
    const empty = values.every((value) => value === nodata);
    return empty ? { ...place, values: [], origins: [] } : { ...place, values, origins: toRuns(origins) };
  };
  return {
    top: strip('row', 0),
    bottom: strip('row', rows - STRIP_LINES),
    left: strip('column', 0),
    right: strip('column', columns - STRIP_LINES),
  };
}

function toRuns(origins: readonly number[]): number[] {
  const runs: number[] = [];
  for (const origin of origins) {
    if (runs.at(-2) === origin) runs[runs.length - 1] += 1;
    else runs.push(origin, 1);
  }
  return runs;
}

/** The origins of a strip, one for each pixel. */
export function stripOrigins(strip: EdgeStrip): Uint32Array {
  const origins = new Uint32Array(strip.values.length);
  let at = 0;
  for (let run = 0; run < strip.origins.length; run += 2) {
    origins.fill(strip.origins[run], at, at + strip.origins[run + 1]);
    at += strip.origins[run + 1];
  }
  return origins;
}
