import { type Buckets, intoBuckets } from './buckets.ts';

type Point = readonly [number, number];

/** Widening of a segment, in cells, so that rounding loses no touching pair. */
const MARGIN = 1e-3;

/** Sorts segments into square cells, about as many as there are segments. A segment is in every cell that it touches. */
export function gridCells(segments: readonly { readonly from: Point; readonly to: Point }[]): Buckets {
  let [west, south, east, north] = [Infinity, Infinity, -Infinity, -Infinity];
  for (const { from, to } of segments) {
    west = Math.min(west, from[0], to[0]);
    east = Math.max(east, from[0], to[0]);
    south = Math.min(south, from[1], to[1]);
    north = Math.max(north, from[1], to[1]);
  }
  const [width, height] = [east - west, north - south];
  // The second bound keeps the cells of a very narrow outline from becoming many more than its segments.
  const edge = Math.max(Math.sqrt((width * height) / segments.length), Math.max(width, height) / segments.length) || 1;
  const columns = Math.floor(width / edge + MARGIN) + 1;
  const rows = Math.floor(height / edge + MARGIN) + 1;

  return intoBuckets(rows * columns, (take) => {
    for (let i = 0; i < segments.length; i++) {
      const { from, to } = segments[i];
      const [low, high] = from[1] <= to[1] ? [from, to] : [to, from];
      const [x0, y0] = [(low[0] - west) / edge, (low[1] - south) / edge];
      const [x1, y1] = [(high[0] - west) / edge, (high[1] - south) / edge];
      const xAt = (y: number) => (y <= y0 || y1 === y0 ? x0 : y >= y1 ? x1 : x0 + ((x1 - x0) * (y - y0)) / (y1 - y0));
      const lastRow = Math.min(rows - 1, Math.floor(y1 + MARGIN));
      for (let row = Math.max(0, Math.floor(y0 - MARGIN)); row <= lastRow; row++) {
        const [a, b] = y0 === y1 ? [x0, x1] : [xAt(row - MARGIN), xAt(row + 1 + MARGIN)];
        const lastColumn = Math.min(columns - 1, Math.floor(Math.max(a, b) + MARGIN));
        for (let column = Math.max(0, Math.floor(Math.min(a, b) - MARGIN)); column <= lastColumn; column++) {
          take(row * columns + column, i);
        }
      }
    }
  });
}
