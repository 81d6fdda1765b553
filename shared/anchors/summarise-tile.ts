import type { AnchorCandidate } from '../contract/calibration.ts';
import type { PixelWindow } from '../contract/grid.ts';
import { DAY_QUALITY, DAY_UNUSABLE } from '../contract/quality.ts';
import { BIN_COUNT, binOf, STRATUM_COUNT, stratumOf } from './bins.ts';
import { pixelHash } from './pixel-hash.ts';
import { CANDIDATES_PER_STRATUM, createSummary, keepLowest, type TileSummary } from './tile-summary.ts';

/** Planes of one window, row by row, all of the window's size. NaN is nodata. */
export interface SummaryPlanes {
  readonly ndvi: Float32Array;
  /** K. */
  readonly datumTemperature: Float32Array;
  /** 1: may become an anchor (see eligible.ts). */
  readonly eligible: Uint8Array;
  readonly red: Float32Array;
  readonly nir: Float32Array;
  readonly albedo: Float32Array;
  /** K. */
  readonly lst: Float32Array;
  /** m. */
  readonly elevation: Float32Array;
  readonly slopeEast: Float32Array;
  readonly slopeNorth: Float32Array;
  /** Day quality bits; without them a pixel counts as covered and usable when NDVI and temperature are numbers. */
  readonly quality?: Uint16Array;
}

/**
 * Summary of one window, the same as `addCandidate` for each eligible pixel, without an object for each: only a
 * pixel whose hash can still enter its stratum is turned into a candidate.
 *
 * `window` says where the planes lie on the grid: hashes are taken of global addresses.
 */
export function summariseTile(planes: SummaryPlanes, window: PixelWindow): TileSummary {
  const summary = createSummary();
  countCoverage(summary, planes);
  const counts = new Uint32Array(BIN_COUNT);
  // by stratum, the highest hash that can still enter
  const limit = new Float64Array(STRATUM_COUNT).fill(Number.POSITIVE_INFINITY);
  for (let r = 0, at = 0; r < window.rows; r += 1) {
    const row = window.row + r;
    for (let c = 0; c < window.columns; c += 1, at += 1) {
      if (planes.eligible[at] !== 1 || !isComplete(planes, at)) continue;
      const bin = binOf(planes.ndvi[at], planes.datumTemperature[at]);
      if (bin < 0) continue;
      counts[bin] += 1;
      const stratum = stratumOf(bin);
      const column = window.column + c;
      if (pixelHash(row, column) > limit[stratum]) continue;
      const kept = keepLowest(summary, stratum, candidateAt(planes, at, row, column));
      if (kept.length === CANDIDATES_PER_STRATUM) limit[stratum] = pixelHash(kept.at(-1)!.row, kept.at(-1)!.column);
    }
  }
  for (let bin = 0; bin < BIN_COUNT; bin += 1) {
    if (counts[bin] > 0) summary.bins.set(bin, counts[bin]);
  }
  return summary;
}

function countCoverage(summary: TileSummary, planes: SummaryPlanes): void {
  for (let at = 0; at < planes.ndvi.length; at += 1) {
    if (planes.quality === undefined) {
      if (!Number.isFinite(planes.ndvi[at] + planes.datumTemperature[at])) continue;
      summary.covered += 1;
      summary.usable += 1;
      continue;
    }
    const quality = planes.quality[at];
    if ((quality & (DAY_QUALITY.noScene | DAY_QUALITY.fill)) === 0) summary.covered += 1;
    if ((quality & DAY_UNUSABLE) === 0) summary.usable += 1;
  }
}

const isComplete = (planes: SummaryPlanes, at: number): boolean =>
  Number.isFinite(
    planes.red[at] +
      planes.nir[at] +
      planes.albedo[at] +
      planes.lst[at] +
      planes.elevation[at] +
      planes.slopeEast[at] +
      planes.slopeNorth[at],
  );

const candidateAt = (planes: SummaryPlanes, at: number, row: number, column: number): AnchorCandidate => ({
  row,
  column,
  red: planes.red[at],
  nir: planes.nir[at],
  ndvi: planes.ndvi[at],
  albedo: planes.albedo[at],
  lst: planes.lst[at],
  datumTemperature: planes.datumTemperature[at],
  elevationM: planes.elevation[at],
  slopeEast: planes.slopeEast[at],
  slopeNorth: planes.slopeNorth[at],
});
