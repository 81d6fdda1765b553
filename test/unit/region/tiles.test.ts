import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import type { PixelWindow } from '../../../shared/contract/grid.ts';
import type { PixelPolygons } from '../../../shared/contract/plan.ts';
import { indexEdges, polygonCoverage } from '../../../shared/region/coverage.ts';
import { haloWindow, tileGridSize, tileId, tilesOf, tileWindow } from '../../../shared/region/tiles.ts';
import { tilesTouching } from '../../../shared/region/tiles-touching.ts';
import { closed, rectangle, testGrid } from './shapes.ts';

const grid = testGrid(300, 520, 128);

describe('tiles of a grid', () => {
  it('covers the grid with clipped tiles, row by row', () => {
    expect(tileGridSize(grid)).toEqual({ tileRows: 3, tileColumns: 5 });
    const tiles = tilesOf(grid);
    expect(tiles.map(({ tileRow, tileColumn }) => tileRow * 5 + tileColumn)).toEqual([...Array(15).keys()]);
    expect(tileWindow(grid, tiles[0])).toEqual({ row: 0, column: 0, rows: 128, columns: 128 });
    expect(tileWindow(grid, tiles[14])).toEqual({ row: 256, column: 512, rows: 44, columns: 8 });
    const pixels = tiles
      .map((tile) => tileWindow(grid, tile))
      .reduce((sum, { rows, columns }) => sum + rows * columns, 0);
    expect(pixels).toBe(300 * 520);
  });

  it('lets a halo reach outside', () => {
    expect(haloWindow({ row: 0, column: 128, rows: 128, columns: 100 }, 3)).toEqual({
      row: -3,
      column: 125,
      rows: 134,
      columns: 106,
    });
  });

  it('names tiles so that they sort', () => {
    expect(tileId({ tileRow: 3, tileColumn: 12 })).toBe('r0003c0012');
    expect(tileId({ tileRow: 12345, tileColumn: 0 })).toBe('r12345c0000');
  });
});

const touched = (polygons: PixelPolygons) =>
  tilesTouching(grid, polygons).map(({ tileRow, tileColumn }) => `${tileRow},${tileColumn}`);

describe('tiles that polygons touch', () => {
  it('finds the tiles of a rectangle and not those that it only borders', () => {
    expect(touched(rectangle(128, 0, 256, 128))).toEqual(['0,1']);
    expect(touched(rectangle(127.9, 0, 256.1, 128.1))).toEqual(['0,0', '0,1', '0,2', '1,0', '1,1', '1,2']);
  });

  it('finds tiles that only a level side crosses', () => {
    expect(touched(rectangle(10, 5, 500, 20))).toEqual(['0,0', '0,1', '0,2', '0,3']);
    expect(touched(rectangle(10, 100, 500, 150))).toHaveLength(8);
  });

  it('finds tiles deep inside, and none inside a hole', () => {
    expect(touched(rectangle(-1000, -1000, 2000, 2000))).toHaveLength(15);
    const ring = [
      [closed([1, 1], [1, 299], [519, 299], [519, 1]), closed([120, 120], [390, 120], [390, 260], [120, 260])],
    ];
    expect(touched(ring)).toEqual(
      tilesOf(grid)
        .map(tileId)
        .filter((id) => !/r0001c000[12]/.test(id))
        .map((id) => `${Number(id.slice(1, 5))},${Number(id.slice(6))}`),
    );
  });

  it('fills polygons that overlap', () => {
    expect(touched([...rectangle(1, 1, 400, 299), ...rectangle(100, 1, 519, 299)])).toHaveLength(15);
  });

  it('ignores what lies outside the grid', () => {
    expect(touched(rectangle(-300, -300, -1, -1))).toEqual([]);
    expect(touched(rectangle(600, 10, 900, 20))).toEqual([]);
    expect(touched([])).toEqual([]);
  });

  it('finds every tile in which a pixel has a share, and hardly another', () => {
    const small = testGrid(40, 48, 8);
    // Thousandths, and now and then a whole pixel: doubles as such would crowd round zero.
    const along = (max: number) =>
      fc.oneof(
        fc.integer({ min: -10_000, max: max * 1000 }).map((n) => n / 1000),
        fc.integer({ min: -10, max }),
      );
    const corner = fc.tuple(along(58), along(50));
    fc.assert(
      fc.property(fc.array(corner, { minLength: 3, maxLength: 3 }), (corners) => {
        const polygons = [[closed(...corners)]];
        const index = indexEdges(polygons);
        const found = new Set(tilesTouching(small, polygons).map(tileId));
        for (const tile of tilesOf(small)) {
          const { empty } = polygonCoverage(index, tileWindow(small, tile));
          if (!empty) expect(found).toContain(tileId(tile));
          // A sliver thinner than the snapping has no share; its outline must still pass the tile, or nearly.
          if (empty && !passes(polygons[0][0], haloWindow(tileWindow(small, tile), 1))) {
            expect(found).not.toContain(tileId(tile));
          }
        }
      }),
      { numRuns: 300 },
    );
  });
});

/** Whether a ring comes into a window, seen at steps of a quarter pixel. */
function passes(ring: readonly (readonly [number, number])[], { row, column, rows, columns }: PixelWindow): boolean {
  return ring.slice(1).some(([x1, y1], i) => {
    const [x0, y0] = ring[i];
    return Array.from({ length: 401 }, (_, k) => [x0 + ((x1 - x0) * k) / 400, y0 + ((y1 - y0) * k) / 400]).some(
      ([x, y]) => x >= column && x <= column + columns && y >= row && y <= row + rows,
    );
  });
}
