import type { Ring } from './outline.ts';
import { toPlane } from './plane.ts';

/** A lattice of square cells on the world's map, for sums over zones and for maps of the truth. */
export interface CellGrid {
  /** North-western corner of the first cell, m on the world's map. */
  readonly west: number;
  readonly north: number;
  readonly cell: number;
  readonly columns: number;
  readonly rows: number;
}

/** The cells around some rings. */
export function cellsAround(rings: readonly Ring[], cell: number): CellGrid {
  const points = rings.flat().map(([longitude, latitude]) => toPlane(longitude, latitude));
  const west = Math.floor(Math.min(...points.map(([x]) => x)) / cell) * cell;
  const north = Math.ceil(Math.max(...points.map(([, y]) => y)) / cell) * cell;
  return {
    west,
    north,
    cell,
    columns: Math.ceil((Math.max(...points.map(([x]) => x)) - west) / cell),
    rows: Math.ceil((north - Math.min(...points.map(([, y]) => y))) / cell),
  };
}

/**
 * Which ring holds the centre of each cell: its index, or -1. Even-odd rule along each row of cells. Straight sides
 * in degrees are straight on the world's map.
 */
export function ringOfCells(rings: readonly Ring[], grid: CellGrid): Int8Array {
  const out = new Int8Array(grid.columns * grid.rows).fill(-1);
  rings.forEach((ring, index) => {
    const points = ring.map(([longitude, latitude]) => toPlane(longitude, latitude));
    for (let row = 0; row < grid.rows; row++) {
      const y = grid.north - (row + 0.5) * grid.cell;
      const crossings = crossingsOf(points, y);
      for (let k = 0; k + 1 < crossings.length; k += 2) {
        const from = Math.max(0, Math.ceil((crossings[k] - grid.west) / grid.cell - 0.5));
        const to = Math.min(grid.columns - 1, Math.ceil((crossings[k + 1] - grid.west) / grid.cell - 0.5) - 1);
        if (to >= from) out.fill(index, row * grid.columns + from, row * grid.columns + to + 1);
      }
    }
  });
  return out;
}

/** Where the sides of a ring cross a parallel, from west to east. */
function crossingsOf(points: readonly (readonly [number, number])[], y: number): number[] {
  const found: number[] = [];
  for (let k = 1; k < points.length; k++) {
    const [x0, y0] = points[k - 1];
    const [x1, y1] = points[k];
    if (y0 > y !== y1 > y) found.push(x0 + ((y - y0) / (y1 - y0)) * (x1 - x0));
  }
  return found.sort((a, b) => a - b);
}
