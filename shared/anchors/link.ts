import type { BasinFile } from '../contract/basin-file.ts';
import type { OverlapStats } from './overlap.ts';

/** One overlap between two passes, as the adjustment gets it. */
export interface AdjustmentLink {
  readonly first: string;
  readonly second: string;
  readonly stats: OverlapStats;
  readonly daysApart: number;
  /** Day numbers of both passes; without them the land is taken as unchanged between the dates. */
  readonly days?: readonly [first: number, second: number];
  /** Rain between the two dates, mm. NaN (not known) cuts the link. */
  readonly rainMm: number;
}

/** What a link says, and how sure it is. */
export interface LinkEvidence {
  readonly first: string;
  readonly second: string;
  readonly pixels: number;
  /** Levels to be made equal: the pair's mean plus and minus half the median difference. */
  readonly levelFirst: number;
  readonly levelSecond: number;
  /** Standard deviations along the line that maps one pass onto the other; 0 when no line can be told. */
  readonly spreadFirst: number;
  readonly spreadSecond: number;
  /** Standard deviation of the difference of the levels. */
  readonly sigma: number;
  readonly days?: readonly [first: number, second: number];
}

/*
 * How sure a link is. No published values: chosen so that a link is several times surer than an anchor pair
 * (5 %), and a huge overlap not without limit.
 */
/** Neighbouring pixels say the same: so many count as one (a field of about 2 ha at 30 m). */
const PIXELS_PER_SAMPLE = 25;
/** Beyond this number of samples more pixels add nothing: what is left is common to the whole overlap. */
const MAX_SAMPLES = 1000;
/** Standard deviation of differences below which pixels are not believed to agree. */
const MIN_PIXEL_SD = 0.02;
/** Change common to an overlap: at once, and for each day between the passes. */
const COMMON_SD = 0.005;
const COMMON_SD_PER_DAY = 0.001;

/** Correlation and spread below which two passes tell a difference of level, but not of gain. */
const MIN_CORRELATION = 0.5;
const MIN_SPREAD = 0.05;

/** Why a link is not used, in words; undefined when it is. */
export function cutReason(
  { first, second, stats, daysApart, rainMm }: AdjustmentLink,
  passes: readonly string[],
  options: BasinFile['method']['adjust'],
): string | undefined {
  if (!options.use) return 'adjustment is switched off';
  for (const pass of [first, second]) {
    if (!passes.includes(pass)) return `pass ${pass} is not part of the adjustment`;
  }
  if (first === second) return 'a pass is not compared with itself';
  if (!(daysApart <= options.maxGapDays)) return `${daysApart} days apart, more than ${options.maxGapDays}`;
  if (Number.isNaN(rainMm)) return 'rain between the dates is not known';
  if (rainMm > options.maxRainMm) return `${rainMm.toFixed(1)} mm of rain between, more than ${options.maxRainMm} mm`;
  if (stats.n < options.minPixels) return `${stats.n} pixels, fewer than ${options.minPixels}`;
  return undefined;
}

/**
 * Turns overlap statistics into evidence. The standard deviation of a level difference has the sampling part
 * sd / sqrt(N_eff), where N_eff counts groups of correlated pixels and is capped, and a part common to the
 * overlap that grows with the days between.
 *
 * The line between two passes goes through both means along the standard deviations (reduced major axis): it
 * treats them alike, as neither is the truth.
 */
export function weighLink({ first, second, stats, daysApart, days }: AdjustmentLink): LinkEvidence {
  const samples = Math.min(Math.max(stats.n / PIXELS_PER_SAMPLE, 1), MAX_SAMPLES);
  const pixelSd = Math.max(stats.robustSdDifference, MIN_PIXEL_SD);
  const commonSd = COMMON_SD + COMMON_SD_PER_DAY * daysApart;
  const level = (stats.meanFirst + stats.meanSecond) / 2;
  const { sdFirst, sdSecond, medianDifference } = stats;
  const hasLine = Math.min(sdFirst, sdSecond) >= MIN_SPREAD && stats.correlation >= MIN_CORRELATION;
  return {
    first,
    second,
    pixels: stats.n,
    levelFirst: level + medianDifference / 2,
    levelSecond: level - medianDifference / 2,
    spreadFirst: hasLine ? sdFirst : 0,
    spreadSecond: hasLine ? sdSecond : 0,
    sigma: Math.sqrt(pixelSd ** 2 / samples + commonSd ** 2),
    ...(days && { days }),
  };
}
