import type { Period } from '../../../shared/contract/plan.ts';

/** When an item's data hold, UTC. An interval includes both ends. */
export type ItemTime = { readonly datetime: string } | { readonly start: string; readonly end: string };

const HOUR_MS = 3_600_000;

/** The moment of a day's overpasses: one datetime, or the interval from the first to the last. */
export function overpassTime(acquired: readonly string[]): ItemTime {
  const sorted = [...acquired].sort();
  const first = sorted[0];
  const last = sorted[sorted.length - 1];
  return first === last ? { datetime: first } : { start: first, end: last };
}

/**
 * The interval of an accounting period, from the start of its first to the end of its last solar day.
 *
 * @param solarOffsetHours hours that the region's solar calendar day is ahead of UTC
 */
export function periodTime(period: Period, solarOffsetHours: number): ItemTime {
  const shift = solarOffsetHours * HOUR_MS;
  const start = Date.parse(`${period.from}T00:00:00Z`) - shift;
  const end = Date.parse(`${period.to}T00:00:00Z`) + 24 * HOUR_MS - 1000 - shift;
  return { start: rfc3339(start), end: rfc3339(end) };
}

/** The properties that STAC 1.1 asks for: `datetime` is null when an interval stands in its place. */
export function timeProperties(time: ItemTime): Record<string, string | null> {
  if ('datetime' in time) return { datetime: time.datetime };
  return { datetime: null, start_datetime: time.start, end_datetime: time.end };
}

function rfc3339(milliseconds: number): string {
  return `${new Date(Math.round(milliseconds / 1000) * 1000).toISOString().slice(0, 19)}Z`;
}
