import { describe, expect, it } from 'vitest';
import { indexEdges, polygonCoverage } from '../../shared/region/coverage.ts';
import type { Polygon } from '../../shared/region/geometry.ts';
import { makeGrid, projectPolygons } from '../../shared/region/grid.ts';
import { resolveCrs } from '../../shared/region/resolve-crs.ts';
import { ZoneAccumulator } from '../../shared/region/zone-sum.ts';
import { closed, shoelace } from '../unit/region/shapes.ts';

/** WGS 84 (NIMA TR8350.2). */
const A = 6378137;
const F = 1 / 298.257223563;
const E = Math.sqrt(F * (2 - F));

/** Area between two parallels and two meridians, m2: Snyder 1987 (USGS PP 1395), eq. 3-12, integrated. */
function ellipsoidalCellArea(west: number, south: number, east: number, north: number): number {
  const q = (latitude: number) => {
    const s = Math.sin((latitude * Math.PI) / 180);
    return (1 - E * E) * (s / (1 - E * E * s * s) - Math.log((1 - E * s) / (1 + E * s)) / (2 * E));
  };
  return (A * A * (((east - west) * Math.PI) / 180) * (q(north) - q(south))) / 2;
}

const cell = (west: number, south: number): Polygon => [
  closed([west, south], [west + 1, south], [west + 1, south + 1], [west, south + 1]),
];

describe('area on the ellipsoid', () => {
  it('the formula gives the published area of the whole ellipsoid', () => {
    // 510 065 621.7 km2; radius of the sphere of equal area 6 371 007.1809 m (NIMA TR8350.2, table 3.3).
    const whole = ellipsoidalCellArea(-180, -90, 180, 90);
    expect(whole / 1e6).toBeCloseTo(510065621.7, 1);
    expect(Math.sqrt(whole / (4 * Math.PI))).toBeCloseTo(6371007.1809, 3);
  });

  it('the formula gives the areas of 1-degree cells (regression)', () => {
    expect(ellipsoidalCellArea(0, 0, 1, 1) / 1e6).toBeCloseTo(12308.463894, 5);
    expect(ellipsoidalCellArea(0, 40, 1, 41) / 1e6).toBeCloseTo(9412.851604, 5);
    expect(ellipsoidalCellArea(0, 60, 1, 61) / 1e6).toBeCloseTo(6123.140879, 5);
  });

  it.each([
    [10, 0],
    [10, 40],
    [10, 60],
    [-71, -34],
    [179, -18],
  ])('the equal-area grid keeps the area of the cell at %i, %i', async (west, south) => {
    const boundary = { polygons: [cell(west, south)] };
    const crs = await resolveCrs('equal-area', boundary);
    const grid = makeGrid(boundary, crs, 30, 512);
    const area = shoelace(projectPolygons(boundary.polygons, crs, grid)) * 30 * 30;
    const expected = ellipsoidalCellArea(west, south, west + 1, south + 1);
    expect(Math.abs(area / expected - 1)).toBeLessThan(1e-6);
  });

  it('the equal-area grid keeps areas far from its centre', async () => {
    const cells = [cell(-10, 20), cell(-10, 60), cell(29, 20), cell(29, 60)];
    const crs = await resolveCrs('equal-area', { polygons: cells });
    const grid = makeGrid({ polygons: cells }, crs, 250, 512);
    for (const polygon of cells) {
      const [west, south] = polygon[0][0];
      const area = shoelace(projectPolygons([polygon], crs, grid)) * 250 * 250;
      expect(Math.abs(area / ellipsoidalCellArea(west, south, west + 1, south + 1) - 1)).toBeLessThan(1e-6);
    }
  });

  it('the shares of the pixels add up to the area of the cell', async () => {
    const boundary = { polygons: [cell(10, 45)] };
    const crs = await resolveCrs('equal-area', boundary);
    const grid = makeGrid(boundary, crs, 500, 512);
    const edges = indexEdges(projectPolygons(boundary.polygons, crs, grid));
    const { share } = polygonCoverage(edges, { row: 0, column: 0, rows: grid.rows, columns: grid.columns });
    const area = share.reduce((sum, value) => sum + value, 0) * 500 * 500;
    expect(Math.abs(area / ellipsoidalCellArea(10, 45, 11, 46) - 1)).toBeLessThan(1e-6);
  });

  it('UTM areas are those of the square of its scale: 0.9996 on the central meridian (Snyder 1987, chapter 8)', async () => {
    const sliver: Polygon = [closed([14.99, 47], [15.01, 47], [15.01, 47.02], [14.99, 47.02])];
    const crs = await resolveCrs(32633, { polygons: [sliver] });
    const grid = makeGrid({ polygons: [sliver] }, crs, 30, 512);
    const area = shoelace(projectPolygons([sliver], crs, grid)) * 900;
    expect(area / ellipsoidalCellArea(14.99, 47, 15.01, 47.02)).toBeCloseTo(0.9996 ** 2, 6);
  });
});

describe('means of zones', () => {
  it('are weighted by area (arithmetic identity: x 2, 3, 4 with w 0.5, 1, 0.25 give 2.857143)', () => {
    const sums = new ZoneAccumulator();
    sums.addTile([2, 3, 4], -32768, Float64Array.of(0.5, 1, 0.25));
    expect(sums.sum / sums.validPixels).toBeCloseTo(2.857143, 6);
    expect(sums.sum / sums.validPixels).toBe(5 / 1.75);
  });
});
