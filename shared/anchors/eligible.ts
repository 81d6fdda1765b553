import { BasinloomError } from '../contract/errors.ts';
import type { PixelWindow } from '../contract/grid.ts';
import { DAY_QUALITY, DAY_UNUSABLE } from '../contract/quality.ts';

/** Planes of one window, row by row. NaN is nodata. */
export interface EligibilityPlanes {
  readonly ndvi: Float32Array;
  /** Surface temperature, K. Carried to the datum or not: the limits on slope make the difference small. */
  readonly lst: Float32Array;
  /** Day quality bits; `noScene` outside the grid. */
  readonly quality: Uint16Array;
  /** Rise over run. */
  readonly slopeEast: Float32Array;
  readonly slopeNorth: Float32Array;
  /** m. */
  readonly elevation: Float32Array;
  /** 1 where the land-cover class is agricultural; without the plane every class will do. */
  readonly agricultural?: Uint8Array;
}

/** Limits as the basin file gives them (method.anchors), and the datum. */
export interface EligibilityOptions {
  readonly maxNdviSd: number;
  readonly maxTemperatureSdK: number;
  readonly maxSlopeDeg: number;
  readonly maxReliefM: number;
  readonly datumElevationM: number;
  /**
   * Pixels that must be usable around a candidate: 1 is the 3 x 3, 2 the 5 x 5 neighbourhood.
   * @defaultValue 2, as thermal pixels are coarser than the grid and clouds have soft edges
   */
  readonly clearRadius?: 1 | 2;
}

/** Pixels around the inner window that a decision may look at. */
export const ELIGIBILITY_HALO = 2;

/**
 * Which pixels of the inner window may become anchors: 1, else 0.
 *
 * A pixel is eligible when all pixels within `clearRadius` are usable, the 3 x 3 neighbourhood has no water and
 * standard deviations (sample, n - 1) of NDVI and temperature within the limits, NDVI is above 0, and the
 * pixel's slope, height above the datum and land cover fit. Criteria: Allen et al. 2013, J. Am. Water Resour.
 * Assoc. 49:563-576 (flat, near the datum, agricultural, homogeneous, away from clouds); the limits come from the
 * basin file.
 *
 * Every pixel is judged from its own 5 x 5 neighbourhood, so a window gives the crop of the whole.
 *
 * @param outer window of the planes
 * @param inner window to judge, at least `ELIGIBILITY_HALO` pixels inside `outer`
 * @throws INTERNAL when the halo is too small.
 */
export function markEligible(
  planes: EligibilityPlanes,
  outer: PixelWindow,
  inner: PixelWindow,
  options: EligibilityOptions,
): Uint8Array {
  requireHalo(outer, inner, ELIGIBILITY_HALO);
  const { columns } = outer;
  const eligible = new Uint8Array(inner.rows * inner.columns);
  // compared as squared gradients: no arc tangent for each pixel
  const maxGradientSquared =
    options.maxSlopeDeg >= 90 ? Number.POSITIVE_INFINITY : Math.tan((options.maxSlopeDeg * Math.PI) / 180) ** 2;
  const clearRadius = options.clearRadius ?? 2;
  for (let i = 0; i < eligible.length; i += 1) {
    const at = outerIndex(outer, inner, i);
    const fits =
      fitsAlone(planes, at, maxGradientSquared, options) &&
      isClear(planes.quality, at, columns, clearRadius, DAY_UNUSABLE) &&
      isClear(planes.quality, at, columns, 1, DAY_QUALITY.water) &&
      deviation3x3(planes.ndvi, at, columns) <= options.maxNdviSd &&
      deviation3x3(planes.lst, at, columns) <= options.maxTemperatureSdK;
    if (fits) eligible[i] = 1;
  }
  return eligible;
}

function requireHalo(outer: PixelWindow, inner: PixelWindow, halo: number): void {
  const least = Math.min(
    inner.row - outer.row,
    inner.column - outer.column,
    outer.row + outer.rows - inner.row - inner.rows,
    outer.column + outer.columns - inner.column - inner.columns,
  );
  if (least < halo) {
    throw new BasinloomError('INTERNAL', { detail: `a halo of ${halo} pixels is needed, the window has ${least}` });
  }
}

/** Index in the planes of `outer` of the pixel with index `i` in `inner`. */
function outerIndex(outer: PixelWindow, inner: PixelWindow, i: number): number {
  const row = Math.floor(i / inner.columns) + inner.row - outer.row;
  return row * outer.columns + (i % inner.columns) + inner.column - outer.column;
}

/** The tests that need no neighbour. NaN anywhere fails. */
function fitsAlone(
  planes: EligibilityPlanes,
  at: number,
  maxGradientSquared: number,
  options: EligibilityOptions,
): boolean {
  const ndvi = planes.ndvi[at];
  const gradientSquared = planes.slopeEast[at] ** 2 + planes.slopeNorth[at] ** 2;
  return (
    ndvi > 0 &&
    gradientSquared <= maxGradientSquared &&
    Math.abs(planes.elevation[at] - options.datumElevationM) <= options.maxReliefM &&
    (planes.agricultural === undefined || planes.agricultural[at] === 1)
  );
}

function isClear(quality: Uint16Array, centre: number, columns: number, radius: number, bits: number): boolean {
  for (let dr = -radius; dr <= radius; dr += 1) {
    const start = centre + dr * columns;
    for (let at = start - radius; at <= start + radius; at += 1) {
      if ((quality[at] & bits) !== 0) return false;
    }
  }
  return true;
}

/** Sample standard deviation of the 3 x 3 pixels around `centre`; NaN when one of them is NaN. */
function deviation3x3(plane: Float32Array, centre: number, columns: number): number {
  const mean = mean3x3(plane, centre, columns);
  let squares = 0;
  for (let row = centre - columns; row <= centre + columns; row += columns) {
    for (let at = row - 1; at <= row + 1; at += 1) squares += (plane[at] - mean) ** 2;
  }
  return Math.sqrt(squares / 8);
}

function mean3x3(plane: Float32Array, centre: number, columns: number): number {
  let sum = 0;
  for (let row = centre - columns; row <= centre + columns; row += columns) {
    for (let at = row - 1; at <= row + 1; at += 1) sum += plane[at];
  }
  return sum / 9;
}

/**
 * Mean of the 3 x 3 pixels around each pixel of the inner window; NaN when one of them is NaN.
 *
 * Selecting the coldest or hottest share by these means instead of single pixels keeps most of the sensor's
 * noise out of the choice (see select.ts).
 */
export function neighbourhoodMean(plane: Float32Array, outer: PixelWindow, inner: PixelWindow): Float32Array {
  requireHalo(outer, inner, 1);
  const means = new Float32Array(inner.rows * inner.columns);
  for (let i = 0; i < means.length; i += 1) means[i] = mean3x3(plane, outerIndex(outer, inner, i), outer.columns);
  return means;
}
