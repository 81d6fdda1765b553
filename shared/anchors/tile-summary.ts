import type { AnchorCandidate } from '../contract/calibration.ts';
import { binOf, stratumOf } from './bins.ts';
import { comparePixels } from './pixel-hash.ts';

/** Candidates kept in each stratum. */
export const CANDIDATES_PER_STRATUM = 3;

/**
 * What a tile tells about its eligible pixels. Merging is addition of counts and the lowest hashes of a union,
 * both exact, so the merged summary of a pass does not know how the pass was cut into tiles.
 */
export interface TileSummary {
  /** Pixels with a usable value (clear sky, sensor data). */
  usable: number;
  /** Pixels that a scene of the pass covers, clouds included. */
  covered: number;
  /** Eligible pixels by bin (see bins.ts); a bin that is absent counts 0. */
  readonly bins: Map<number, number>;
  /** By stratum: the candidates of lowest pixel hash, in the order of `comparePixels`, at most three. */
  readonly strata: Map<number, AnchorCandidate[]>;
}

export const createSummary = (): TileSummary => ({ usable: 0, covered: 0, bins: new Map(), strata: new Map() });

/** True when every value of the candidate is a finite number and its bin exists. */
export const isCandidate = (candidate: AnchorCandidate): boolean =>
  binOf(candidate.ndvi, candidate.datumTemperature) >= 0 &&
  Number.isFinite(
    candidate.red +
      candidate.nir +
      candidate.albedo +
      candidate.lst +
      candidate.elevationM +
      candidate.slopeEast +
      candidate.slopeNorth,
  );

/**
 * Adds one eligible pixel. Its values are rounded to float32, the precision of the planes and of the encoded
 * summary, so a summary survives the codec unchanged. A candidate with a value that is not finite, or outside
 * the bins, is not counted. A pixel must be added once only.
 */
export function addCandidate(summary: TileSummary, candidate: AnchorCandidate): void {
  const kept = toFloat32(candidate);
  if (!isCandidate(kept)) return;
  const bin = binOf(kept.ndvi, kept.datumTemperature);
  summary.bins.set(bin, (summary.bins.get(bin) ?? 0) + 1);
  keepLowest(summary, stratumOf(bin), kept);
}

/**
 * Adds `other` into `into` and returns `into`; `other` stays as it is. Commutative and associative: any order
 * of merges over any tiling gives the same summary.
 */
export function mergeSummaries(into: TileSummary, other: TileSummary): TileSummary {
  into.usable += other.usable;
  into.covered += other.covered;
  for (const [bin, count] of other.bins) into.bins.set(bin, (into.bins.get(bin) ?? 0) + count);
  for (const [stratum, candidates] of other.strata) {
    for (const candidate of candidates) keepLowest(into, stratum, candidate);
  }
  return into;
}

/** Puts a candidate into its stratum if it is among the lowest hashes; returns the stratum's candidates. */
export function keepLowest(
  summary: TileSummary,
  stratum: number,
  candidate: AnchorCandidate,
): readonly AnchorCandidate[] {
  let kept = summary.strata.get(stratum);
  if (kept === undefined) {
    kept = [];
    summary.strata.set(stratum, kept);
  }
  let place = kept.length;
  while (place > 0 && comparePixels(candidate, kept[place - 1]) < 0) place -= 1;
  kept.splice(place, 0, candidate);
  if (kept.length > CANDIDATES_PER_STRATUM) kept.pop();
  return kept;
}

const toFloat32 = (candidate: AnchorCandidate): AnchorCandidate => ({
  row: candidate.row,
  column: candidate.column,
  red: Math.fround(candidate.red),
  nir: Math.fround(candidate.nir),
  ndvi: Math.fround(candidate.ndvi),
  albedo: Math.fround(candidate.albedo),
  lst: Math.fround(candidate.lst),
  datumTemperature: Math.fround(candidate.datumTemperature),
  elevationM: Math.fround(candidate.elevationM),
  slopeEast: Math.fround(candidate.slopeEast),
  slopeNorth: Math.fround(candidate.slopeNorth),
});
