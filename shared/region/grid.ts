import type { CrsSpec, GridSpec } from '../contract/grid.ts';
import type { PixelPolygons } from '../contract/plan.ts';
import type { Boundary, Polygon, Position } from './boundary.ts';
import { projection } from './crs.ts';
import { mapToPixel } from './pixel-place.ts';

/**
 * Longest side of a projected outline before it is split, degrees. A straight line in longitude and latitude is
 * bent on the map; split at 0.01 degree (about 1 km) the chord error stays under a few centimetres. Both zones of a
 * shared side are split at the same points, so they stay neighbours without gap or overlap.
 */
const LONGEST_SIDE_DEG = 0.01;

/**
 * The grid that covers a boundary: edges at whole multiples of the resolution, snapped outward. Sides that are bent on
 * the map lie inside too, because they are split as finely as `projectPolygons` splits them.
 *
 * @param crs a system that can be computed over the whole boundary (see resolveCrs)
 * @param resolution m
 * @param tileSize pixels
 */
export function makeGrid(boundary: Boundary, crs: CrsSpec, resolution: number, tileSize: number): GridSpec {
  const { forward } = projection(crs);
  let [west, south, east, north] = [Infinity, Infinity, -Infinity, -Infinity];
  for (const polygon of boundary.polygons) {
    for (const [longitude, latitude] of densify(polygon).flat()) {
      const [x, y] = forward(longitude, latitude);
      west = Math.min(west, x);
      east = Math.max(east, x);
      south = Math.min(south, y);
      north = Math.max(north, y);
    }
  }
  const first = Math.floor(west / resolution);
  const top = Math.ceil(north / resolution);
  return {
    crs,
    originX: first * resolution,
    originY: top * resolution,
    resolution,
    rows: top - Math.floor(south / resolution),
    columns: Math.ceil(east / resolution) - first,
    tileSize,
  };
}

/**
 * Polygons of longitude and latitude as rings in global pixel coordinates [column, row], fractional. The way
 * round of a ring is kept, seen on the map. They may reach outside the grid.
 */
export function projectPolygons(polygons: readonly Polygon[], crs: CrsSpec, grid: GridSpec): PixelPolygons {
  const { forward } = projection(crs);
  return polygons.map((polygon) =>
    densify(polygon).map((ring) =>
      ring.map(([longitude, latitude]): [number, number] => {
        const { row, column } = mapToPixel(grid, ...forward(longitude, latitude));
        return [column, row];
      }),
    ),
  );
}

function densify(polygon: Polygon): Position[][] {
  return polygon.map((ring) => {
    const dense: Position[] = [ring[0]];
    for (let i = 1; i < ring.length; i++) dense.push(...splitSide(ring[i - 1], ring[i]));
    return dense;
  });
}

/** Points after `from` up to and with `to`; the same points whichever way the side is walked. */
function splitSide(from: Position, to: Position): Position[] {
  const length = Math.max(Math.abs(to[0] - from[0]), Math.abs(to[1] - from[1]));
  const parts = Math.max(1, Math.ceil(length / LONGEST_SIDE_DEG));
  // Interpolated from the smaller end, so that both neighbours of a shared side get equal bits.
  const backward = from[0] > to[0] || (from[0] === to[0] && from[1] > to[1]);
  const [a, b] = backward ? [to, from] : [from, to];
  const points: Position[] = [];
  for (let k = 1; k < parts; k++) {
    const share = (backward ? parts - k : k) / parts;
    points.push([a[0] + (b[0] - a[0]) * share, a[1] + (b[1] - a[1]) * share]);
  }
  points.push(to);
  return points;
}
