import type { MultiPolygon, Polygon } from 'geojson';
import type { GridSpec } from '../../../shared/contract/grid.ts';
import { projection } from '../../../shared/region/crs.ts';
import { pixelToLonLat } from '../../../shared/region/pixel-place.ts';

/** Footprint on the earth (RFC 7946): WGS 84 longitude and latitude, degrees. */
export interface Footprint {
  readonly geometry: Polygon | MultiPolygon;
  /** West, south, east, north; west > east where the region crosses the antimeridian (RFC 7946, 5.2). */
  readonly bbox: readonly [number, number, number, number];
}

type Point = readonly [number, number];

/** Points along each edge of the grid: straight edges on the grid are curves on the earth. */
const POINTS_PER_EDGE = 16;
/** Decimals of a degree that are kept: about a centimetre. */
const DECIMALS = 7;

/**
 * Outline of the grid's full extent on the earth: a closed ring, counter-clockwise, with points along the edges.
 * Where the region crosses the antimeridian the outline is cut there into two polygons (RFC 7946, 3.1.9).
 */
export function gridFootprint(grid: GridSpec): Footprint {
  const { inverse } = projection(grid.crs);
  const corners = gridCorners(grid);
  const centre = pixelToLonLat(grid, grid.rows / 2, grid.columns / 2);
  const ring: Point[] = [];
  for (let edge = 0; edge < 4; edge++) {
    const [x0, y0] = corners[edge];
    const [x1, y1] = corners[(edge + 1) % 4];
    for (let i = 0; i < POINTS_PER_EDGE; i++) {
      const t = i / POINTS_PER_EDGE;
      const [longitude, latitude] = inverse(x0 + (x1 - x0) * t, y0 + (y1 - y0) * t);
      ring.push([nearTo(longitude, centre[0]), latitude]);
    }
  }
  return footprintOf(ring);
}

/** Lower left, lower right, upper right, upper left: counter-clockwise. */
function gridCorners(grid: GridSpec): readonly Point[] {
  const west = grid.originX;
  const east = grid.originX + grid.columns * grid.resolution;
  const north = grid.originY;
  const south = grid.originY - grid.rows * grid.resolution;
  return [
    [west, south],
    [east, south],
    [east, north],
    [west, north],
  ];
}

/** The same meridian, written within half a turn of the centre, so that a ring never jumps. */
function nearTo(longitude: number, centre: number): number {
  return longitude - 360 * Math.round((longitude - centre) / 360);
}

function footprintOf(ring: readonly Point[]): Footprint {
  const longitudes = ring.map(([longitude]) => longitude);
  const latitudes = ring.map(([, latitude]) => latitude);
  const west = Math.min(...longitudes);
  const east = Math.max(...longitudes);
  const south = rounded(Math.min(...latitudes));
  const north = rounded(Math.max(...latitudes));
  const cut = east > 180 ? 180 : west < -180 ? -180 : null;
  if (cut === null) {
    return {
      geometry: { type: 'Polygon', coordinates: [closed(ring)] },
      bbox: [rounded(west), south, rounded(east), north],
    };
  }
  const left = clip(ring, cut, true).map(([x, y]): Point => [cut === -180 ? x + 360 : x, y]);
  const right = clip(ring, cut, false).map(([x, y]): Point => [cut === 180 ? x - 360 : x, y]);
  return {
    geometry: { type: 'MultiPolygon', coordinates: [[closed(left)], [closed(right)]] },
    bbox: [rounded(cut === -180 ? west + 360 : west), south, rounded(cut === 180 ? east - 360 : east), north],
  };
}

/** The part of a ring on one side of a meridian (Sutherland and Hodgman 1974, for one edge). */
function clip(ring: readonly Point[], meridian: number, keepWest: boolean): Point[] {
  const inside = ([x]: Point): boolean => (keepWest ? x <= meridian : x >= meridian);
  const kept: Point[] = [];
  for (let i = 0; i < ring.length; i++) {
    const from = ring[i];
    const to = ring[(i + 1) % ring.length];
    if (inside(from)) kept.push(from);
    if (inside(from) !== inside(to)) {
      const t = (meridian - from[0]) / (to[0] - from[0]);
      kept.push([meridian, from[1] + (to[1] - from[1]) * t]);
    }
  }
  return kept;
}

function closed(ring: readonly Point[]): number[][] {
  const points = ring.map(([x, y]) => [rounded(x), rounded(y)]);
  return [...points, [...points[0]]];
}

function rounded(degrees: number): number {
  return Number(degrees.toFixed(DECIMALS)) + 0;
}
