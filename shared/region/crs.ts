import proj4 from 'proj4';
import type { CrsSpec } from '../contract/grid.ts';

export interface Projection {
  /** WGS 84 longitude, latitude (degrees) to map x, y (m). */
  forward(longitude: number, latitude: number): [x: number, y: number];
  /** The way back, to 3 mm: the series of the equal-area inverse is cut there. */
  inverse(x: number, y: number): [longitude: number, latitude: number];
}

const known = new Map<string, Projection>();

/** The projection of a reference system; made once for each definition. Points that it cannot hold give NaN or throw. */
export function projection({ proj4: definition }: Pick<CrsSpec, 'proj4'>): Projection {
  const found = known.get(definition);
  if (found) return found;
  const converter = proj4(definition);
  const made: Projection = {
    forward: (longitude, latitude) => converter.forward([longitude, latitude]) as [number, number],
    inverse: (x, y) => converter.inverse([x, y]) as [number, number],
  };
  known.set(definition, made);
  return made;
}

/** Step along the meridian for the convergence, degrees: some 11 m, far above rounding, far below curvature. */
const MERIDIAN_STEP = 1e-4;

/**
 * Meridian convergence at a map point, rad: the angle from grid north (+y) to true north, clockwise positive.
 * Found by a small step along the meridian, so it serves every projection.
 */
export function meridianConvergence(crs: CrsSpec, x: number, y: number): number {
  const { forward, inverse } = projection(crs);
  const [longitude, latitude] = inverse(x, y);
  const [x0, y0] = forward(longitude, latitude - MERIDIAN_STEP / 2);
  const [x1, y1] = forward(longitude, latitude + MERIDIAN_STEP / 2);
  return Math.atan2(x1 - x0, y1 - y0);
}
