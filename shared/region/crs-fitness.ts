import { BasinloomError } from '../contract/errors.ts';
import type { CrsSpec } from '../contract/grid.ts';
import { projection } from './crs.ts';
import { type Boundary, extentOf } from './geometry.ts';

/**
 * True when the shift between WGS 84 and the datum of a proj4 text is given, or is a metre or two at most (systems on
 * the GRS 80 ellipsoid). Grid files are not at hand; without one, NAD27 or OSGB36 would be tens of metres off, unseen.
 */
export function datumShiftKnown(definition: string): boolean {
  if (/\+nadgrids=/.test(definition)) return false;
  return /\+towgs84=|\+datum=(WGS84|NAD83)\b|\+ellps=(WGS84|GRS80)\b/.test(definition);
}

/** Largest error of the area of a pixel, as a share. UTM stays below 0.003 in its zone, national grids too. */
const LARGEST_AREA_ERROR = 0.01;
/** Largest way that a point may move there and back, degrees (1 cm). */
const LARGEST_RETURN_DEG = 1e-7;
/** The test points are this many on a side over the bounding box. */
const SIDE = 5;

/**
 * Refuses a system that cannot be computed at the boundary or whose areas are wrong there by more than 1 %: every
 * area and volume of the tables is a count of pixels.
 *
 * @throws BasinloomError CRS_UNKNOWN, CRS_NOT_METRIC
 */
export function checkFitness(crs: CrsSpec, boundary: Boundary): void {
  const { west, south, east, north } = extentOf(boundary);
  for (let i = 0; i < SIDE; i++) {
    for (let j = 0; j < SIDE; j++) {
      const longitude = west + ((east - west) * i) / (SIDE - 1);
      const latitude = south + ((north - south) * j) / (SIDE - 1);
      checkPoint(crs, longitude > 180 ? longitude - 360 : longitude, latitude);
    }
  }
}

function checkPoint(crs: CrsSpec, longitude: number, latitude: number): void {
  const place = `at longitude ${longitude.toFixed(2)}, latitude ${latitude.toFixed(2)}`;
  const scale = returns(crs, longitude, latitude) ? arealScale(crs, longitude, latitude) : Number.NaN;
  if (!Number.isFinite(scale)) {
    throw new BasinloomError('CRS_UNKNOWN', { crs: `${crs.code} (it cannot be computed ${place})` });
  }
  if (Math.abs(scale - 1) > LARGEST_AREA_ERROR) {
    const percent = ((scale - 1) * 100).toFixed(0);
    throw new BasinloomError('CRS_NOT_METRIC', { crs: `${crs.code} (its areas are wrong by ${percent} % ${place})` });
  }
}

function returns(crs: CrsSpec, longitude: number, latitude: number): boolean {
  try {
    const { forward, inverse } = projection(crs);
    const [backLongitude, backLatitude] = inverse(...forward(longitude, latitude));
    const turned = Math.abs(backLongitude - longitude) % 360;
    const east = Math.min(turned, 360 - turned) * Math.cos((latitude * Math.PI) / 180);
    return Math.hypot(east, backLatitude - latitude) < LARGEST_RETURN_DEG;
  } catch {
    // proj4 throws for methods that it does not know and for points outside their domain.
    return false;
  }
}

const WGS84_A = 6378137;
const WGS84_E2 = 0.0066943799901413165;
const STEP_DEG = 1e-3;

/** Area on the map over area on the WGS 84 ellipsoid, by central differences. */
function arealScale(crs: CrsSpec, longitude: number, latitude: number): number {
  const { forward } = projection(crs);
  // At a pole the meridians meet; a little beside it the ratio is the same.
  const phi = Math.min(89.9, Math.max(-89.9, latitude));
  const [westX, westY] = forward(longitude - STEP_DEG, phi);
  const [eastX, eastY] = forward(longitude + STEP_DEG, phi);
  const [southX, southY] = forward(longitude, phi - STEP_DEG);
  const [northX, northY] = forward(longitude, phi + STEP_DEG);
  const map = (eastX - westX) * (northY - southY) - (northX - southX) * (eastY - westY);
  const step = (2 * STEP_DEG * Math.PI) / 180;
  const sine = Math.sin((phi * Math.PI) / 180);
  const cosine = Math.cos((phi * Math.PI) / 180);
  // Radii of curvature in the meridian and in the prime vertical (Snyder 1987, USGS PP 1395, eqs. 4-18 to 4-21).
  const inside = 1 - WGS84_E2 * sine * sine;
  const ground = ((WGS84_A * WGS84_A * (1 - WGS84_E2)) / (inside * inside)) * cosine * step * step;
  return map / ground;
}
