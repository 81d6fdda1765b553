import { existsSync, readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { parseBoundary } from '../../shared/region/boundary.ts';
import { indexEdges, polygonCoverage } from '../../shared/region/coverage.ts';
import { makeGrid, projectPolygons } from '../../shared/region/grid.ts';
import { resolveCrs } from '../../shared/region/resolve-crs.ts';
import { snap } from '../../shared/region/snapped-edge.ts';
import { tilesOf, tileWindow } from '../../shared/region/tiles.ts';
import { tilesTouching } from '../../shared/region/tiles-touching.ts';
import { ZoneAccumulator } from '../../shared/region/zone-sum.ts';
import { shoelace } from '../unit/region/shapes.ts';

const fileOf = (name: string) => new URL(`../../../shared/data/dem-basin-landcover/${name}`, import.meta.url);

/** Areas in km2: SUB_AREA of HydroBASINS (Lehner and Grill 2013), carried in the files; the third file has none. */
const BASINS: readonly (readonly [string, number | undefined])[] = [
  ['matapedia.geojson', 2750.5],
  ['salmon_river.geojson', 4194.7],
  ['opengeos_basin.geojson', undefined],
];

describe.each(BASINS)('real basin %s', (name, publishedKm2) => {
  const file = fileOf(name);
  it.skipIf(!existsSync(file))('is read, gridded and counted without loss', async () => {
    const boundary = parseBoundary(readFileSync(file, 'utf8'), name);
    const crs = await resolveCrs('equal-area', boundary);
    const grid = makeGrid(boundary, crs, 60, 128);
    const polygons = projectPolygons(boundary.polygons, crs, grid);
    const snapped = polygons.map((polygon) => polygon.map((ring) => ring.map(([x, y]) => [snap(x), snap(y)] as const)));
    const index = indexEdges(polygons);

    const sumOver = (tiles: ReturnType<typeof tilesOf>) => {
      const sums = new ZoneAccumulator();
      for (const tile of tiles) {
        const { share } = polygonCoverage(index, tileWindow(grid, tile));
        sums.addTile(new Int16Array(share.length).fill(1), null, share);
      }
      return sums;
    };
    const touched = tilesTouching(grid, polygons);
    const sums = sumOver(touched);
    // The tiles that were left out hold nothing, and the order is of no account.
    expect(sumOver(tilesOf(grid).reverse()).toJSON()).toEqual(sums.toJSON());
    expect(touched.length).toBeLessThan(tilesOf(grid).length);
    expect(Math.abs(sums.areaPixels / shoelace(snapped) - 1)).toBeLessThan(1e-9);
    expect(sums.sum).toBe(sums.areaPixels);

    const km2 = (sums.areaPixels * 60 * 60) / 1e6;
    // Those areas were measured before the outline was thinned out.
    if (publishedKm2 !== undefined) expect(Math.abs(km2 / publishedKm2 - 1)).toBeLessThan(0.01);
  });
});
