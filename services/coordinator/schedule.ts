import { z } from 'zod';
import { addDays } from '../../shared/time/calendar.ts';

/** Which days a scheduled run covers, seen from the day it fires. */
export const SCHEDULE_PERIODS = {
  'last-month': 'the calendar month before the day it fires',
  'month-to-date': 'the calendar month of the day before it fires, up to that day',
  'last-ten-days': 'the last full third of a month (days 1-10, 11-20, 21-end)',
  'as-written': 'the period in the basin file; for archives that grow',
} as const;

export type SchedulePeriod = keyof typeof SCHEDULE_PERIODS;

/** schedules/<name>.json in the coordinator's home. */
export const scheduleSchema = z.strictObject({
  name: z.string().regex(/^[a-z0-9][a-z0-9-]{0,63}$/, 'must be of lower-case letters, digits and "-"'),
  cron: z.string().min(1).describe('Five cron fields in UTC: minute, hour, day of month, month, day of week'),
  period: z.enum(Object.keys(SCHEDULE_PERIODS) as [SchedulePeriod, ...SchedulePeriod[]]),
  basinFile: z.string().min(1),
  set: z.record(z.string(), z.string()).optional(),
  out: z.string().optional(),
});

export type Schedule = z.output<typeof scheduleSchema>;

export interface ScheduledPeriod {
  /** Equal for every firing that means the same days: such a run is started once. */
  readonly id: string;
  /** What the run changes in its basin file. */
  readonly set: Readonly<Record<string, string>>;
}

/**
 * The days that a schedule means when it fires.
 *
 * @param day YYYY-MM-DD of the firing, UTC
 */
export function scheduledPeriod(period: SchedulePeriod, day: string): ScheduledPeriod {
  if (period === 'as-written') return { id: day, set: {} };
  const [from, to] = daysOf(period, day);
  return { id: `${from}_${to}`, set: { 'period.from': from, 'period.to': to } };
}

function daysOf(period: Exclude<SchedulePeriod, 'as-written'>, day: string): [from: string, to: string] {
  const yesterday = addDays(day, -1);
  switch (period) {
    case 'month-to-date':
      return [`${yesterday.slice(0, 8)}01`, yesterday];
    case 'last-month': {
      const end = addDays(`${day.slice(0, 8)}01`, -1);
      return [`${end.slice(0, 8)}01`, end];
    }
    case 'last-ten-days': {
      const month = day.slice(0, 8);
      const date = Number(day.slice(8));
      if (date > 20) return [`${month}11`, `${month}20`];
      if (date > 10) return [`${month}01`, `${month}10`];
      const end = addDays(`${month}01`, -1);
      return [`${end.slice(0, 8)}21`, end];
    }
  }
}
