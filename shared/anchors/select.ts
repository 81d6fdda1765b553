import type { BasinFile } from '../contract/basin-file.ts';
import type { AnchorCandidate, AnchorRole } from '../contract/calibration.ts';
import { BasinloomError } from '../contract/errors.ts';
import { BINS_PER_STRATUM, binOf, ndviIndexOf, temperatureIndexOf } from './bins.ts';
import { comparePixels } from './pixel-hash.ts';
import { type AnchorSubgroup, findSubgroup } from './subgroup.ts';
import type { TileSummary } from './tile-summary.ts';

/** Most anchors of one role; more would only repeat what these say. */
export const MAX_ANCHORS = 60;

/** Anchors asked for before a wider distance to the median is accepted: few near ones beat many far ones. */
const FEWEST_ANCHORS = 5;

/** Anchors lie within this of the subgroup's median temperature, K (Allen et al. 2013). */
const NEAR_K = 0.2;
/** Step by which that distance grows while too few stored candidates lie within it, K. */
const WIDEN_K = 0.1;

export interface SelectedAnchor extends AnchorCandidate {
  /** Why this pixel: the thresholds that it passed, in words. */
  readonly reason: string;
}

export interface RoleDiagnostics extends AnchorSubgroup {
  /** Stored candidates inside the thresholds. */
  readonly candidates: number;
  /** Anchors kept. */
  readonly anchors: number;
  /** Largest distance to the subgroup's median temperature that was allowed, K. */
  readonly withinK: number;
}

export interface AnchorSelection {
  readonly cold: SelectedAnchor[];
  readonly hot: SelectedAnchor[];
  readonly diagnostics: {
    readonly covered: number;
    readonly usable: number;
    /** Pixels that passed the eligibility tests. */
    readonly eligible: number;
    readonly cold: RoleDiagnostics;
    readonly hot: RoleDiagnostics;
  };
}

export type SelectionOptions = Pick<
  BasinFile['method']['anchors'],
  | 'coldNdviPercentile'
  | 'coldTemperaturePercentile'
  | 'hotNdviPercentile'
  | 'hotTemperaturePercentile'
  | 'minCandidates'
> &
  Partial<Pick<BasinFile['method']['anchors'], 'minColdNdvi'>>;

/**
 * Chooses the anchors of a pass from its merged summary.
 *
 * Allen et al. 2013 (J. Am. Water Resour. Assoc. 49:563-576): cold anchors from the pixels of highest NDVI, the
 * coldest share of those; hot anchors from the pixels of lowest NDVI, the hottest share of those. Thresholds are
 * found in the binned counts of all eligible pixels (see subgroup.ts); anchors are the stored candidates inside
 * the thresholds near the subgroup's median temperature, those of lowest pixel hash first.
 *
 * On bias: the coldest share of pixels whose temperatures carry noise of standard deviation s holds more of the
 * negative noise; its median lies 1.28 s below the truth for the coldest 20 % of equal fields. Three things keep
 * this small: candidates are homogeneous in 3 x 3 pixels, the anchors lie around the subgroup's median and not
 * at its extreme, and a caller may summarise 3 x 3 means (`neighbourhoodMean`), which divides s by up to 3.
 *
 * @throws PASS_NO_ANCHORS when a role has fewer eligible pixels inside its thresholds than `minCandidates`.
 * @throws PASS_SPARSE when the mean NDVI of the cold anchors is below `minColdNdvi`.
 * @throws PASS_CALIBRATION when the hot subgroup is not warmer than the cold one.
 * Neither knows the pass: the caller adds it.
 */
export function selectAnchors(summary: TileSummary, options: SelectionOptions): AnchorSelection {
  const groups = {
    cold: findSubgroup(summary, 'cold', {
      ndviShare: (100 - options.coldNdviPercentile) / 100,
      temperatureShare: options.coldTemperaturePercentile / 100,
    }),
    hot: findSubgroup(summary, 'hot', {
      ndviShare: options.hotNdviPercentile / 100,
      temperatureShare: (100 - options.hotTemperaturePercentile) / 100,
    }),
  };
  for (const role of ['cold', 'hot'] as const) {
    const found = groups[role].subgroupPixels;
    if (found < options.minCandidates) {
      throw new BasinloomError('PASS_NO_ANCHORS', { role, found, needed: options.minCandidates });
    }
  }
  if (!(groups.hot.medianTemperature > groups.cold.medianTemperature)) {
    const detail = `the hot subgroup (${kelvin(groups.hot.medianTemperature)}) is not warmer than the cold one (${kelvin(groups.cold.medianTemperature)})`;
    throw new BasinloomError('PASS_CALIBRATION', { detail });
  }
  const cold = takeAnchors(summary, groups.cold, 'cold');
  const hot = takeAnchors(summary, groups.hot, 'hot');
  requireFullCover(cold.anchors, options.minColdNdvi ?? 0);
  const { covered, usable } = summary;
  const eligible = groups.cold.eligiblePixels;
  return {
    cold: cold.anchors,
    hot: hot.anchors,
    diagnostics: { covered, usable, eligible, cold: cold.diagnostics, hot: hot.diagnostics },
  };
}

/** Half-covered land is no cold end: with the fraction of a full cover it would lift the whole pass. */
function requireFullCover(cold: readonly AnchorCandidate[], needed: number): void {
  const mean = cold.reduce((sum, { ndvi }) => sum + ndvi, 0) / cold.length;
  if (mean < needed) throw new BasinloomError('PASS_SPARSE', { found: mean.toFixed(2), needed });
}

function takeAnchors(
  summary: TileSummary,
  group: AnchorSubgroup,
  role: AnchorRole,
): { anchors: SelectedAnchor[]; diagnostics: RoleDiagnostics } {
  const candidates = candidatesOf(summary, group);
  const distance = (candidate: AnchorCandidate) => Math.abs(candidate.datumTemperature - group.medianTemperature);
  const enough = Math.min(FEWEST_ANCHORS, candidates.length);
  let steps = 0;
  let near: AnchorCandidate[] = [];
  do {
    const within = NEAR_K + steps * WIDEN_K;
    near = candidates.filter((candidate) => distance(candidate) <= within);
    steps += 1;
  } while (near.length < enough);
  const withinK = NEAR_K + (steps - 1) * WIDEN_K;
  const reason = describe(role, group, withinK);
  const anchors = near
    .sort(comparePixels)
    .slice(0, MAX_ANCHORS)
    .map((candidate) => ({ ...candidate, reason }));
  return { anchors, diagnostics: { ...group, candidates: candidates.length, anchors: anchors.length, withinK } };
}

/**
 * The stored candidates in the bins of the subgroup. A stratum is coarser than a bin, so the few that it stores
 * may all miss a thin subgroup: then those of the strata that touch it.
 */
function candidatesOf(summary: TileSummary, group: AnchorSubgroup): AnchorCandidate[] {
  const stored = [...summary.strata.values()].flat();
  const inside = stored.filter((candidate) => liesIn(candidate, group, 1));
  return inside.length > 0 ? inside : stored.filter((candidate) => liesIn(candidate, group, BINS_PER_STRATUM));
}

/** Whether the cell of `size` bins that holds a candidate overlaps the subgroup. */
function liesIn(candidate: AnchorCandidate, group: AnchorSubgroup, size: number): boolean {
  const bin = binOf(candidate.ndvi, candidate.datumTemperature);
  const touches = (index: number, [from, to]: readonly [number, number]) => {
    const cell = Math.floor(index / size) * size;
    return cell + size - 1 >= from && cell <= to;
  };
  return touches(ndviIndexOf(bin), group.ndviBins) && touches(temperatureIndexOf(bin), group.temperatureBins);
}

const kelvin = (value: number): string => `${value.toFixed(2)} K`;

function describe(role: AnchorRole, group: AnchorSubgroup, withinK: number): string {
  const [ndviRule, temperatureRule] = role === 'cold' ? ['at least', 'at most'] : ['at most', 'at least'];
  return (
    `NDVI ${ndviRule} ${group.ndviThreshold.toFixed(2)} (${group.groupPixels} of ${group.eligiblePixels} eligible pixels), ` +
    `datum temperature ${temperatureRule} ${kelvin(group.temperatureThreshold)} (${group.subgroupPixels} of those), ` +
    `within ${withinK.toFixed(1)} K of their median ${kelvin(group.medianTemperature)}`
  );
}
