import type { PixelWindow } from '../contract/grid.ts';
import type { EdgeIndex } from './edge-index.ts';
import { edgeXAt } from './snapped-edge.ts';

export { type EdgeIndex, indexEdges } from './edge-index.ts';

/** Share of every pixel that lies inside. */
export interface Coverage {
  /** 0..1, row by row; exactly 1 inside and exactly 0 outside. */
  readonly share: Float64Array;
  /** True when no pixel of the window is touched. */
  readonly empty: boolean;
}

/**
 * Exact area share of polygons in the pixels of a window.
 *
 * Signed areas are summed along each row: an edge gives every pixel to its right its height within the row, and the
 * pixels that it crosses the part to its right. Heights of edges left of a pixel are whole multiples of 2^-16, so
 * their sum is exact in any order; the parts inside a pixel are summed in the order of the edges. The share of a
 * pixel is therefore the same, bit for bit, in whatever window it is asked for, and the shares of zones with common
 * vertices add up to 1 within rounding. Where one zone has an extra vertex on a common side, snapping (2^-17 pixel)
 * and the bend of the projected side (centimetres) leave a sliver that both zones or neither of them count.
 *
 * Polygons that overlap one another count as their union in whole pixels; in the pixels of their outlines the shares
 * are added, up to 1.
 */
export function polygonCoverage(index: EdgeIndex, window: PixelWindow): Coverage {
  const { rows, columns } = window;
  const share = new Float64Array(rows * columns);
  if (window.column >= index.endColumn || window.column + columns <= index.firstColumn) return { share, empty: true };
  // delta[c]: exact heights that begin to count at column c.
  const delta = new Float64Array(columns + 1);
  let empty = true;
  for (let r = 0; r < rows; r++) {
    const row = window.row + r;
    const at = row - index.firstRow;
    if (at < 0 || at + 1 >= index.start.length) continue;
    const out = share.subarray(r * columns, (r + 1) * columns);
    delta.fill(0);
    for (let k = index.start[at]; k < index.start[at + 1]; k++) {
      addEdge(index.edges, index.list[k], row, window.column, out, delta);
    }
    let left = 0;
    for (let c = 0; c < columns; c++) {
      left += delta[c];
      // Rounding of the inner parts may leave a few ulp outside 0..1; an overlap or a stray hole leaves more.
      const value = Math.min(1, Math.max(0, index.sense * (left + out[c])));
      out[c] = value;
      if (value > 0) empty = false;
    }
  }
  return { share, empty };
}

/** One edge in one pixel row: `inner` gets the parts inside pixels, `delta` the heights that count further right. */
function addEdge(
  edges: Float64Array,
  e: number,
  row: number,
  firstColumn: number,
  inner: Float64Array,
  delta: Float64Array,
): void {
  const falls = edges[e + 1] < edges[e + 3];
  const [top, bottom] = falls ? [e, e + 2] : [e + 2, e];
  const topX = edges[top];
  const topY = edges[top + 1];
  const bottomX = edges[bottom];
  const bottomY = edges[bottom + 1];
  const y0 = Math.max(topY, row);
  const y1 = Math.min(bottomY, row + 1);
  const height = y1 - y0;
  if (height <= 0) return;
  const sign = falls ? 1 : -1;
  const xa = edgeXAt(topX, topY, bottomX, bottomY, y0);
  const xb = edgeXAt(topX, topY, bottomX, bottomY, y1);
  const x0 = Math.min(xa, xb);
  const x1 = Math.max(xa, xb);
  const c0 = Math.floor(x0);
  const c1 = Math.max(c0, Math.ceil(x1) - 1);
  const columns = inner.length;
  // Right of the last crossed pixel the whole height counts.
  const after = Math.max(0, c1 + 1 - firstColumn);
  if (after <= columns) delta[after] += sign * height;
  for (let c = Math.max(c0, firstColumn); c <= Math.min(c1, firstColumn + columns - 1); c++) {
    inner[c - firstColumn] += sign * areaRightOf(x0, x1, height, c);
  }
}

/**
 * Area, within the pixel column [c, c + 1], to the right of a segment that falls over `height` while x runs from x0
 * to x1: the integral over y of the clamped distance to the pixel's right side.
 */
function areaRightOf(x0: number, x1: number, height: number, c: number): number {
  if (x1 === x0) return height * (c + 1 - x0);
  const rate = height / (x1 - x0);
  const from = Math.max(x0, c);
  const to = Math.min(x1, c + 1);
  const before = Math.max(0, Math.min(x1, c) - x0) * rate;
  const within = to > from ? (to - from) * rate * (c + 1 - (from + to) / 2) : 0;
  return before + within;
}
