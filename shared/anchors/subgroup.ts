import type { AnchorRole } from '../contract/calibration.ts';
import { NDVI_BINS, ndviEdge, ndviIndexOf, TEMPERATURE_BINS, temperatureEdge, temperatureIndexOf } from './bins.ts';
import { highestShare, lowestShare, quantilePosition, totalOf } from './histogram.ts';
import type { TileSummary } from './tile-summary.ts';

/** A bin beyond the fences with less than this share of the eligible pixels is taken for contamination. */
const CONTAMINATION_SHARE = 0.0005;
/** Fences lie this many interquartile ranges beyond the quartiles (Tukey 1977, Exploratory Data Analysis). */
const FENCE = 1.5;
/** Interquartile range below which fences would cut into a tight group, K. */
const MIN_IQR_K = 0.5;

/** The subpopulation from which the anchors of one role come. */
export interface AnchorSubgroup {
  readonly eligiblePixels: number;
  /** Edge of the NDVI group: its lower edge for cold, its upper edge for hot anchors. */
  readonly ndviThreshold: number;
  readonly groupPixels: number;
  /** Pixels of the group dropped as contamination. */
  readonly droppedPixels: number;
  /** Upper edge of the temperatures of the cold, lower edge of those of the hot subgroup, K. */
  readonly temperatureThreshold: number;
  readonly subgroupPixels: number;
  /** Median datum temperature of the subgroup, K, linear within its bin of 0.25 K. */
  readonly medianTemperature: number;
  /** First and last NDVI and temperature bin of the subgroup (see bins.ts). */
  readonly ndviBins: readonly [number, number];
  readonly temperatureBins: readonly [number, number];
}

/** Shares of the extreme NDVI group and of its extreme temperatures, 0 to 1. */
export interface SubgroupShares {
  readonly ndviShare: number;
  readonly temperatureShare: number;
}

/**
 * Finds a role's subgroup in the binned counts: the fewest extreme NDVI bins with at least `ndviShare` of the
 * eligible pixels, then, of their temperatures, the fewest extreme bins with at least `temperatureShare`.
 *
 * Before the second step, temperature bins of the group beyond Tukey's fences that hold less than 0.05 % of the
 * eligible pixels (or a single pixel) are dropped: missed cloud and shadow on the cold side, fire and bare rock on
 * the hot side. A populated tail is kept.
 */
export function findSubgroup(summary: TileSummary, role: AnchorRole, shares: SubgroupShares): AnchorSubgroup {
  const ndviCounts = new Float64Array(NDVI_BINS.count);
  for (const [bin, count] of summary.bins) ndviCounts[ndviIndexOf(bin)] += count;
  const eligiblePixels = totalOf(ndviCounts);
  if (eligiblePixels === 0) return NO_SUBGROUP;
  const ndviBins: [number, number] =
    role === 'cold'
      ? [highestShare(ndviCounts, shares.ndviShare), NDVI_BINS.count - 1]
      : [0, lowestShare(ndviCounts, shares.ndviShare)];

  const group = temperaturesOf(summary, ndviBins);
  const groupPixels = totalOf(group);
  const droppedPixels = dropContamination(group, eligiblePixels);
  const temperatureBins: [number, number] =
    role === 'cold'
      ? [group.findIndex((count) => count > 0), lowestShare(group, shares.temperatureShare)]
      : [highestShare(group, shares.temperatureShare), group.findLastIndex((count) => count > 0)];
  const subgroup = group.map((count, i) => (i >= temperatureBins[0] && i <= temperatureBins[1] ? count : 0));
  return {
    eligiblePixels,
    ndviThreshold: role === 'cold' ? ndviEdge(ndviBins[0]) : ndviEdge(ndviBins[1] + 1),
    groupPixels,
    droppedPixels,
    temperatureThreshold:
      role === 'cold' ? temperatureEdge(temperatureBins[1] + 1) : temperatureEdge(temperatureBins[0]),
    subgroupPixels: totalOf(subgroup),
    medianTemperature: temperatureEdge(quantilePosition(subgroup, 0.5)),
    ndviBins,
    temperatureBins,
  };
}

const NO_SUBGROUP: AnchorSubgroup = {
  eligiblePixels: 0,
  ndviThreshold: Number.NaN,
  groupPixels: 0,
  droppedPixels: 0,
  temperatureThreshold: Number.NaN,
  subgroupPixels: 0,
  medianTemperature: Number.NaN,
  ndviBins: [0, -1],
  temperatureBins: [0, -1],
};

function temperaturesOf(summary: TileSummary, [from, to]: readonly [number, number]): Float64Array {
  const counts = new Float64Array(TEMPERATURE_BINS.count);
  for (const [bin, count] of summary.bins) {
    const ndvi = ndviIndexOf(bin);
    if (ndvi >= from && ndvi <= to) counts[temperatureIndexOf(bin)] += count;
  }
  return counts;
}

/** Empties the sparse bins beyond the fences; returns how many pixels that were. */
function dropContamination(counts: Float64Array, eligiblePixels: number): number {
  const lower = quantilePosition(counts, 0.25);
  const upper = quantilePosition(counts, 0.75);
  const reach = FENCE * Math.max(upper - lower, MIN_IQR_K * TEMPERATURE_BINS.perUnit);
  const fewest = Math.max(2, CONTAMINATION_SHARE * eligiblePixels);
  let dropped = 0;
  for (let i = 0; i < counts.length; i += 1) {
    const outside = i + 1 <= lower - reach || i >= upper + reach;
    if (!outside || counts[i] >= fewest) continue;
    dropped += counts[i];
    counts[i] = 0;
  }
  return dropped;
}
