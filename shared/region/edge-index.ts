import type { PixelPolygons } from '../contract/plan.ts';
import { type Buckets, intoBuckets } from './buckets.ts';
import { snap } from './snapped-edge.ts';

/**
 * Edges of polygons by pixel row, made once and asked for many windows. Bucket r holds the edges that touch row
 * firstRow + r, as ascending offsets into `edges`.
 */
export interface EdgeIndex extends Buckets {
  /** x0, y0, x1, y1 of each edge, snapped, in the order of the rings. */
  readonly edges: Float64Array;
  readonly firstRow: number;
  /** Pixel columns touched: firstColumn up to but without endColumn. */
  readonly firstColumn: number;
  readonly endColumn: number;
  /** 1 when outer rings run so that edges with the inside to their right fall (growing row), else -1. */
  readonly sense: 1 | -1;
}

/**
 * Snaps the vertices and sorts the edges by row. Horizontal edges have no share in any sum and are dropped. Outer
 * rings must all run the same way round and holes the other.
 */
export function indexEdges(polygons: PixelPolygons): EdgeIndex {
  const edges = snappedEdges(polygons);
  let [firstRow, endRow, firstColumn, endColumn] = [Infinity, -Infinity, Infinity, -Infinity];
  let area = 0;
  for (let e = 0; e < edges.length; e += 4) {
    firstRow = Math.min(firstRow, topRow(edges, e));
    endRow = Math.max(endRow, bottomRow(edges, e) + 1);
    firstColumn = Math.min(firstColumn, Math.floor(edges[e]), Math.floor(edges[e + 2]));
    endColumn = Math.max(endColumn, Math.ceil(edges[e]), Math.ceil(edges[e + 2]));
    // Relative to the first vertex, so that far-away polygons do not lose digits.
    area -= (edges[e + 3] - edges[e + 1]) * ((edges[e] - edges[0] + (edges[e + 2] - edges[0])) / 2);
  }
  if (edges.length === 0) [firstRow, endRow, firstColumn, endColumn] = [0, 0, 0, 0];
  return { edges, firstRow, ...byRow(edges, firstRow, endRow), firstColumn, endColumn, sense: area < 0 ? -1 : 1 };
}

function snappedEdges(polygons: PixelPolygons): Float64Array {
  const flat: number[] = [];
  for (const polygon of polygons) {
    for (const ring of polygon) {
      for (let i = 1; i < ring.length; i++) {
        const [y0, y1] = [snap(ring[i - 1][1]), snap(ring[i][1])];
        if (y0 !== y1) flat.push(snap(ring[i - 1][0]), y0, snap(ring[i][0]), y1);
      }
    }
  }
  return Float64Array.from(flat);
}

const topRow = (edges: Float64Array, e: number) => Math.floor(Math.min(edges[e + 1], edges[e + 3]));
const bottomRow = (edges: Float64Array, e: number) => Math.ceil(Math.max(edges[e + 1], edges[e + 3])) - 1;

function byRow(edges: Float64Array, firstRow: number, endRow: number): Buckets {
  return intoBuckets(endRow - firstRow, (take) => {
    for (let e = 0; e < edges.length; e += 4) {
      for (let row = topRow(edges, e); row <= bottomRow(edges, e); row++) take(row - firstRow, e);
    }
  });
}
