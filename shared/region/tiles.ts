import type { GridSpec, PixelWindow, TileAddress } from '../contract/grid.ts';

/** Number of tile rows and columns of a grid. */
export function tileGridSize(grid: GridSpec): { tileRows: number; tileColumns: number } {
  return { tileRows: Math.ceil(grid.rows / grid.tileSize), tileColumns: Math.ceil(grid.columns / grid.tileSize) };
}

/** All tiles of a grid, row by row. */
export function tilesOf(grid: GridSpec): TileAddress[] {
  const { tileRows, tileColumns } = tileGridSize(grid);
  return Array.from({ length: tileRows * tileColumns }, (_, i) => ({
    tileRow: Math.floor(i / tileColumns),
    tileColumn: i % tileColumns,
  }));
}

/** Pixels of a tile, clipped to the grid. */
export function tileWindow(grid: GridSpec, { tileRow, tileColumn }: TileAddress): PixelWindow {
  const row = tileRow * grid.tileSize;
  const column = tileColumn * grid.tileSize;
  return {
    row,
    column,
    rows: Math.min(grid.tileSize, grid.rows - row),
    columns: Math.min(grid.tileSize, grid.columns - column),
  };
}

/** The window with `halo` more pixels on every side; may reach outside the grid. */
export function haloWindow({ row, column, rows, columns }: PixelWindow, halo: number): PixelWindow {
  return { row: row - halo, column: column - halo, rows: rows + 2 * halo, columns: columns + 2 * halo };
}

/** Name of a tile for files, jobs and messages: "r0003c0012". */
export function tileId({ tileRow, tileColumn }: TileAddress): string {
  return `r${String(tileRow).padStart(4, '0')}c${String(tileColumn).padStart(4, '0')}`;
}
