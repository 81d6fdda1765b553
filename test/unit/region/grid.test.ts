import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { indexEdges, polygonCoverage } from '../../../shared/region/coverage.ts';
import { projection } from '../../../shared/region/crs.ts';
import type { Polygon, Position } from '../../../shared/region/geometry.ts';
import { makeGrid, projectPolygons } from '../../../shared/region/grid.ts';
import { mapToPixel, pixelToLonLat, pixelToMap } from '../../../shared/region/pixel-place.ts';
import { resolveCrs } from '../../../shared/region/resolve-crs.ts';
import { closed, testGrid } from './shapes.ts';

const area: Polygon = [closed([9.2, 44.1], [11.7, 44.3], [11.1, 45.9], [9.5, 45.6])];
const crs = testGrid(1, 1, 128).crs;

describe('grid of a boundary', () => {
  it.each([30, 100, 250, 12.5, 1000])('is snapped outward at %f m', (resolution) => {
    const grid = makeGrid({ polygons: [area] }, crs, resolution, 256);
    expect([grid.originX / resolution, grid.originY / resolution].every(Number.isInteger)).toBe(true);
    expect([grid.resolution, grid.tileSize, grid.crs]).toEqual([resolution, 256, crs]);
    const points = projectPolygons([area], crs, grid).flat(2);
    const xs = points.map(([x]) => x);
    const ys = points.map(([, y]) => y);
    for (const gap of [Math.min(...xs), Math.min(...ys), grid.columns - Math.max(...xs), grid.rows - Math.max(...ys)]) {
      expect(gap).toBeGreaterThanOrEqual(0);
      expect(gap).toBeLessThan(1);
    }
  });

  it('covers sides that are bent on the map', async () => {
    // The parallel of 60 N bulges south between its ends, seen from a centre north of it.
    const boundary = { polygons: [[closed([0, 60], [20, 60], [20, 64], [0, 64])]] as Polygon[] };
    const laea = await resolveCrs('equal-area', boundary);
    const grid = makeGrid(boundary, laea, 500, 256);
    const southOf = (longitude: number) => mapToPixel(grid, ...projection(laea).forward(longitude, 60)).row;
    expect(southOf(10) - southOf(0)).toBeGreaterThan(50);
    expect(southOf(10)).toBeLessThanOrEqual(grid.rows);
    expect(southOf(10)).toBeGreaterThan(grid.rows - 1);
  });

  it('moves with whole pixels only when the boundary grows', () => {
    const small = makeGrid({ polygons: [area] }, crs, 30, 512);
    const large = makeGrid({ polygons: [area, [closed([8, 44], [8.1, 44], [8, 44.1])]] }, crs, 30, 512);
    expect(((small.originX - large.originX) / 30) % 1).toBe(0);
    expect(small.originX).toBeGreaterThan(large.originX);
  });
});

describe('polygons on the grid', () => {
  const grid = makeGrid({ polygons: [area] }, crs, 30, 512);

  it('keeps every vertex and splits long sides into short ones', () => {
    const ring = projectPolygons([area], crs, grid)[0][0];
    expect(ring[0]).toEqual(ring[ring.length - 1]);
    for (const position of area[0]) {
      const { row, column } = mapToPixel(grid, ...projection(crs).forward(...position));
      expect(ring).toContainEqual([column, row]);
    }
    const longest = Math.max(...ring.slice(1).map(([x, y], i) => Math.hypot(x - ring[i][0], y - ring[i][1])));
    // 0.01 degree of latitude is 1.11 km; a slant side may be longer by the square root of 2.
    expect(longest).toBeLessThan((1112 * Math.SQRT2) / 30);
  });

  it('bends a long side to within a few centimetres', () => {
    // A side of 0.0099 degree stays whole: how far is its middle from the straight line?
    const { forward } = projection(crs);
    for (const [dx, dy] of [
      [0.0099, 0],
      [0, 0.0099],
      [0.0099, 0.0099],
    ]) {
      const [a, b, m] = [0, 1, 0.5].map((share) => forward(11.5 + dx * share, 45.8 + dy * share));
      expect(Math.hypot((a[0] + b[0]) / 2 - m[0], (a[1] + b[1]) / 2 - m[1])).toBeLessThan(0.05);
    }
  });

  it('splits a side into the same points whichever way it is walked', () => {
    const corner = fc.tuple(fc.double({ min: 9, max: 12, noNaN: true }), fc.double({ min: 44, max: 46, noNaN: true }));
    fc.assert(
      fc.property(corner, corner, corner, (a, b, c) => {
        const ring: Position[] = closed(a, b, c);
        const [[forward]] = projectPolygons([[ring]], crs, grid);
        const [[backward]] = projectPolygons([[ring.toReversed()]], crs, grid);
        expect(backward.toReversed()).toEqual(forward);
      }),
    );
  });

  it('lets neighbouring zones meet without gap or overlap', () => {
    const coarse = makeGrid({ polygons: [area] }, crs, 2000, 512);
    const [a, b, c, d] = area[0];
    const middle: Position[] = [
      [10.4, 44.2],
      [10.1, 44.9],
      [10.8, 45.3],
      [10.3, 45.75],
    ];
    const west: Polygon = [closed(a, ...middle, d)];
    const east: Polygon = [closed(b, c, ...middle.toReversed())];
    const whole: Polygon = [closed(a, middle[0], b, c, middle[3], d)];
    const window = { row: 0, column: 0, rows: coarse.rows, columns: coarse.columns };
    const [one, two, both] = [west, east, whole].map(
      (zone) => polygonCoverage(indexEdges(projectPolygons([zone], crs, coarse)), window).share,
    );
    for (let i = 0; i < both.length; i++) expect(Math.abs(one[i] + two[i] - both[i])).toBeLessThanOrEqual(1e-12);
  });
});

describe('places of pixels', () => {
  const grid = testGrid(400, 300, 128);

  it('counts rows down and columns right from the upper-left corner', () => {
    expect(pixelToMap(grid, 0, 0)).toEqual([-3000, 6000]);
    expect(pixelToMap(grid, 0.5, 0.5)).toEqual([-2985, 5985]);
    expect(mapToPixel(grid, -2970, 5910)).toEqual({ row: 3, column: 1 });
  });

  it('finds the way back', () => {
    fc.assert(
      fc.property(fc.integer({ min: -900, max: 900 }), fc.integer({ min: -900, max: 900 }), (row, column) => {
        const [longitude, latitude] = pixelToLonLat(grid, row, column);
        const back = mapToPixel(grid, ...projection(grid.crs).forward(longitude, latitude));
        // Half a millimetre and more: the series of the inverse is cut there.
        expect(back.row).toBeCloseTo(row, 4);
        expect(back.column).toBeCloseTo(column, 4);
        expect(mapToPixel(grid, ...pixelToMap(grid, row, column))).toEqual({ row, column });
      }),
    );
  });
});
