import type { GridSpec, TileAddress } from '../contract/grid.ts';
import type { PixelPolygons } from '../contract/plan.ts';
import { edgeXAt, snap } from './snapped-edge.ts';
import { tileGridSize } from './tiles.ts';

/**
 * Tiles of the grid that a set of polygons touches, row by row: every tile in which a pixel has a share, and a few
 * more at most that an outline only runs along. Walks the outline tile row by tile row; the cost follows the outline
 * and the number of tiles found.
 *
 * @param polygons in global pixel coordinates; either way round
 */
export function tilesTouching(grid: GridSpec, polygons: PixelPolygons): TileAddress[] {
  const size = grid.tileSize;
  const { tileRows, tileColumns } = tileGridSize(grid);
  const touched = Array.from({ length: tileRows }, () => new Uint8Array(tileColumns));
  /** Where the outline crosses the middle line of a tile row, and which way: between crossings lies the inside. */
  const crossings: { x: number; turn: number }[][] = Array.from({ length: tileRows }, () => []);
  /**
   * Marks the tiles of a row from x0 to x1; one that begins exactly at the end is not touched. A side along a border
   * of tiles marks none: what it encloses has other sides, or the middle line inside.
   */
  const mark = (tileRow: number, x0: number, x1: number) => {
    if (x0 >= grid.columns) return;
    const to = Math.min(tileColumns, Math.ceil(x1 / size));
    for (let c = Math.max(0, Math.floor(x0 / size)); c < to; c++) touched[tileRow][c] = 1;
  };
  const walk = (topX: number, topY: number, bottomX: number, bottomY: number, turn: number) => {
    const firstRow = Math.max(0, Math.floor(topY / size));
    const end = Math.min(bottomY, grid.rows);
    for (let row = firstRow; row * size < end && topY < grid.rows; row++) {
      const rowEnd = Math.min((row + 1) * size, grid.rows);
      const a = edgeXAt(topX, topY, bottomX, bottomY, row * size);
      const b = edgeXAt(topX, topY, bottomX, bottomY, rowEnd);
      mark(row, Math.min(a, b), Math.max(a, b));
      const middle = (row * size + rowEnd) / 2;
      if (topY <= middle && middle < bottomY) {
        crossings[row].push({ x: edgeXAt(topX, topY, bottomX, bottomY, middle), turn });
      }
    }
  };
  /** A level edge inside a tile row; along a border of tiles it cuts no tile. */
  const markLevel = (y: number, x0: number, x1: number) => {
    if (y > 0 && y < grid.rows) mark(Math.floor(y / size), x0, x1);
  };
  for (const ring of polygons.flat()) {
    for (let i = 1; i < ring.length; i++) {
      const [x0, y0, x1, y1] = [snap(ring[i - 1][0]), snap(ring[i - 1][1]), snap(ring[i][0]), snap(ring[i][1])];
      if (y0 < y1) walk(x0, y0, x1, y1, 1);
      else if (y1 < y0) walk(x1, y1, x0, y0, -1);
      else if (y0 % size !== 0) markLevel(y0, Math.min(x0, x1), Math.max(x0, x1));
    }
  }
  for (let row = 0; row < tileRows; row++) markInside(crossings[row], (x0, x1) => mark(row, x0, x1));
  return touched.flatMap((columns, tileRow) =>
    [...columns.keys()].filter((c) => columns[c] === 1).map((tileColumn) => ({ tileRow, tileColumn })),
  );
}

function markInside(crossings: { x: number; turn: number }[], mark: (x0: number, x1: number) => void): void {
  crossings.sort((a, b) => a.x - b.x);
  let winding = 0;
  for (let k = 0; k + 1 < crossings.length; k++) {
    winding += crossings[k].turn;
    if (winding !== 0) mark(crossings[k].x, crossings[k + 1].x);
  }
}
