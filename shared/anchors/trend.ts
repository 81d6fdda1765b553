import type { LinkEvidence } from './link.ts';

/**
 * How the land itself changes. Two dates of one field differ also because crops grow; a chain of overlaps would take
 * that drift for calibration errors and pull the first passes one way and the last the other. The joint solution
 * therefore knows a trend that all land shares: a line with a bend every month. Calibration errors jump from pass to
 * pass and cannot hide in it.
 */
const BEND_DAYS = 32;
/** Prior of the slope between two bends, fraction a day. No published value: a canopy closes in some 40 days, and a
 *  tenth of the land may do so together. */
const SLOPE_SD = 0.004;

export interface Trend {
  /** Prior precision of the slope of each interval. */
  readonly precision: readonly number[];
  /** Days that a link spends in each interval, from its first to its second date: [interval, days]. */
  termsOf(link: LinkEvidence): (readonly [interval: number, days: number])[];
}

/** The trend of a group of links, or null when one of them has no dates. */
export function trendOf(links: readonly LinkEvidence[]): Trend | null {
  const days = links.flatMap((link) => link.days ?? []);
  if (days.length < 2 * links.length || links.length === 0) return null;
  const first = Math.min(...days);
  const intervals = Math.max(1, Math.ceil((Math.max(...days) - first) / BEND_DAYS));
  return {
    precision: new Array<number>(intervals).fill(1 / SLOPE_SD ** 2),
    termsOf({ days: dates }) {
      if (!dates) return [];
      const [from, to] = [Math.min(...dates) - first, Math.max(...dates) - first];
      const sign = dates[0] <= dates[1] ? 1 : -1;
      return Array.from({ length: intervals }, (_, interval) => {
        const start = Math.max(from, interval * BEND_DAYS);
        const end = Math.min(to, (interval + 1) * BEND_DAYS);
        return [interval, sign * Math.max(0, end - start)] as const;
      }).filter(([, spent]) => spent !== 0);
    },
  };
}
