import { PERIOD_QUALITY } from '../contract/quality.ts';

/** What `integrate` fills for one pixel. */
export interface PeriodResult {
  /** mm; NaN where the rules below allow no value. */
  et: number;
  /** Usable observation days inside the period. */
  observations: number;
  /** Longest run of days of the period without an overpass. */
  longestGapDays: number;
  /** PERIOD_QUALITY bits. */
  quality: number;
}

/**
 * ET of a period from the fractions seen on a few days and the daily reference ET of all days:
 * sum over the days from..to of f(day) ETr(day). f is linear between usable observations and held constant before the
 * first and after the last one (constant reference-ET fraction between overpasses: Allen, Tasumi & Trezza 2007,
 * J. Irrig. Drain. Eng. 133:380-394). ET itself is never interpolated.
 *
 * A linear f needs only two prefix sums at the days where it bends, so a pixel costs as many steps as it has
 * observations, however long the period is.
 */
export class PeriodIntegrator {
  /**
   * Days at which prefix sums are needed, ascending: the first day, the day after the last, and the observation days
   * moved into that range.
   */
  readonly boundaryDays: readonly number[];
  readonly #days: Int32Array;
  /** Index into boundaryDays of each observation day. */
  readonly #boundaryOf: Int32Array;
  readonly #from: number;
  readonly #to: number;
  readonly #maxGapDays: number;
  readonly #maxHoldDays: number;

  /**
   * @param observationDays day numbers, strictly ascending; days outside the period serve as neighbours
   * @param from first day number of the period
   * @param to last day number, included
   * @param maxGapDays longest time between two usable observations that is interpolated
   * @param maxHoldDays longest time to an observation for which its fraction is held
   */
  constructor(observationDays: readonly number[], from: number, to: number, maxGapDays: number, maxHoldDays: number) {
    if (to < from) throw new RangeError('the period ends before it begins');
    if (observationDays.some((day, k) => k > 0 && day <= observationDays[k - 1])) {
      throw new RangeError('observation days must ascend');
    }
    const clamped = observationDays.map((day) => Math.min(Math.max(day, from), to + 1));
    this.boundaryDays = [...new Set([from, ...clamped, to + 1])].sort((a, b) => a - b);
    this.#days = Int32Array.from(observationDays);
    this.#boundaryOf = Int32Array.from(clamped, (day) => this.boundaryDays.indexOf(day));
    this.#from = from;
    this.#to = to;
    this.#maxGapDays = maxGapDays;
    this.#maxHoldDays = maxHoldDays;
  }

  /**
   * One pixel.
   *
   * @param fractions one for each observation day, NaN where the day is not usable
   * @param c sum of ETr over the days from..boundary-1, one for each boundary day, mm
   * @param d sum of (day - from) ETr over the same days
   * @param out overwritten
   */
  integrate(fractions: Float64Array, c: Float64Array, d: Float64Array, out: PeriodResult): void {
    const from = this.#from;
    const to = this.#to;
    const days = this.#days;
    const end = this.boundaryDays.length - 1;
    let et = 0;
    let quality = 0;
    let observations = 0;
    let longestGap = 0;
    // Observations whose fraction some day of the period uses.
    let used = 0;
    let previous = -1;
    for (let k = 0; k < days.length; k++) {
      const fraction = fractions[k];
      if (Number.isNaN(fraction)) continue;
      const day = days[k];
      if (day >= from && day <= to) observations++;
      if (previous < 0) {
        if (day > from) {
          // Held from the first day up to the day before this observation.
          quality |= PERIOD_QUALITY.heldAtStart;
          if (day - from > this.#maxHoldDays) quality |= PERIOD_QUALITY.gapTooLong;
          et += fraction * c[this.#boundaryOf[k]];
          longestGap = Math.min(day, to + 1) - from;
          used = 1;
        }
      } else if (day > from && days[previous] <= to) {
        const start = days[previous];
        const a = this.#boundaryOf[previous];
        const b = this.#boundaryOf[k];
        const reference = c[b] - c[a];
        et += fractions[previous] * reference;
        used = Math.max(used, 1);
        // On an observation day itself the line has the value of that observation alone.
        const between = Math.min(day, to + 1) - Math.max(start + 1, from);
        if (between > 0) {
          if (day - start > this.#maxGapDays) quality |= PERIOD_QUALITY.gapTooLong;
          const slope = (fraction - fractions[previous]) / (day - start);
          et += slope * (d[b] - d[a] - (start - from) * reference);
          longestGap = Math.max(longestGap, between);
        }
        if (between > 0 || day <= to) used++;
      }
      previous = k;
    }
    if (previous < 0) {
      out.et = Number.NaN;
      out.observations = 0;
      out.longestGapDays = to - from + 1;
      out.quality = PERIOD_QUALITY.noObservation;
      return;
    }
    const last = days[previous];
    if (last <= to) {
      // The last observation's own day, and the days after it, held.
      const at = this.#boundaryOf[previous];
      et += fractions[previous] * (c[end] - c[at]);
      used = Math.max(used, 1);
      if (last < to) {
        quality |= PERIOD_QUALITY.heldAtEnd;
        if (to - last > this.#maxHoldDays) quality |= PERIOD_QUALITY.gapTooLong;
        longestGap = Math.max(longestGap, to - Math.max(last, from - 1));
      }
    }
    if (used === 1) quality |= PERIOD_QUALITY.singleObservation;
    out.et = quality & PERIOD_QUALITY.gapTooLong ? Number.NaN : et;
    out.observations = observations;
    out.longestGapDays = longestGap;
    out.quality = quality;
  }
}
