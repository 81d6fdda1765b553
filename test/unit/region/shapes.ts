import fc from 'fast-check';
import type { GridSpec } from '../../../shared/contract/grid.ts';
import type { PixelPolygons } from '../../../shared/contract/plan.ts';

type Point = readonly [number, number];

/** A closed ring through the points. */
export const closed = (...points: Point[]): Point[] => [...points, points[0]];

/** One rectangle, x to the right and y down. */
export const rectangle = (x0: number, y0: number, x1: number, y1: number): PixelPolygons => [
  [closed([x0, y0], [x0, y1], [x1, y1], [x1, y0])],
];

/** Area between the rings, pixels; holes by orientation. */
export function shoelace(polygons: PixelPolygons): number {
  let sum = 0;
  for (const ring of polygons.flat()) {
    const [[originX, originY]] = ring;
    for (let i = 1; i < ring.length; i++) {
      const [ax, ay] = [ring[i - 1][0] - originX, ring[i - 1][1] - originY];
      const [bx, by] = [ring[i][0] - originX, ring[i][1] - originY];
      sum += ax * by - bx * ay;
    }
  }
  return Math.abs(sum / 2);
}

/** Star-shaped rings around (20, 20): they never cross themselves. Radii 1..19 pixels, 3 to 24 corners. */
export const starRing = fc
  .array(fc.double({ min: 1, max: 19, noNaN: true }), { minLength: 3, maxLength: 24 })
  .map((radii) =>
    closed(
      ...radii.map((radius, k): Point => {
        const angle = (2 * Math.PI * k) / radii.length;
        return [20 + radius * Math.cos(angle), 20 + radius * Math.sin(angle)];
      }),
    ),
  );

export const testGrid = (rows: number, columns: number, tileSize: number): GridSpec => ({
  crs: {
    code: 'laea:45,10',
    proj4: '+proj=laea +lat_0=45 +lon_0=10 +x_0=0 +y_0=0 +datum=WGS84 +units=m +no_defs',
    kind: 'laea',
    latitudeOfOriginDeg: 45,
    longitudeOfOriginDeg: 10,
  },
  originX: -3000,
  originY: 6000,
  resolution: 30,
  rows,
  columns,
  tileSize,
});
