/** Days are counted from the first day of the period; hours from its midnight UTC. */
export const FIRST_DAY = '2025-06-01';
export const PERIOD = { from: FIRST_DAY, to: '2025-07-31', days: 61 } as const;
/** Months of the period as first day and number of days. */
export const MONTHS = [
  { id: '2025-06', firstDay: 0, days: 30 },
  { id: '2025-07', firstDay: 30, days: 31 },
] as const;

/** Solar time of the basin is one hour ahead of UTC: its calendar day begins at 23:00 UTC. */
export const SOLAR_OFFSET_HOURS = 1;

const ORIGIN = Date.UTC(2025, 5, 1);
const DAY_MS = 86_400_000;
/** Julian date of the origin, 2025-06-01T00:00:00 UTC. */
const ORIGIN_JULIAN = ORIGIN / DAY_MS + 2440587.5;

export function dateOf(day: number): string {
  return new Date(ORIGIN + day * DAY_MS).toISOString().slice(0, 10);
}

export function dayOf(date: string): number {
  return Math.round((Date.parse(`${date}T00:00:00Z`) - ORIGIN) / DAY_MS);
}

/** 1 for 1 January. */
export function dayOfYear(day: number): number {
  return Math.round((ORIGIN - Date.UTC(2025, 0, 1)) / DAY_MS) + day + 1;
}

/** ISO 8601 UTC to the millisecond. */
export function instantOf(hours: number): string {
  return new Date(ORIGIN + Math.round(hours * 3_600_000)).toISOString();
}

/** Days since 2000-01-01T12:00:00, the epoch of the almanac formulas. */
export function daysSince2000(hours: number): number {
  return ORIGIN_JULIAN + hours / 24 - 2451545;
}
