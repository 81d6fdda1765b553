import { describe, expect, it } from 'vitest';
import { scheduledPeriod, scheduleSchema } from '../../../services/coordinator/schedule.ts';

const days = (period: Parameters<typeof scheduledPeriod>[0], day: string) => {
  const { set } = scheduledPeriod(period, day);
  return [set['period.from'], set['period.to']];
};

// Calendar facts: common practice, no source.
describe('the days that a schedule means', () => {
  it('last-month is the calendar month before, whatever the day and the leap year', () => {
    expect(days('last-month', '2025-07-03')).toEqual(['2025-06-01', '2025-06-30']);
    expect(days('last-month', '2025-07-31')).toEqual(['2025-06-01', '2025-06-30']);
    expect(days('last-month', '2025-01-01')).toEqual(['2024-12-01', '2024-12-31']);
    expect(days('last-month', '2024-03-15')).toEqual(['2024-02-01', '2024-02-29']);
  });

  it('month-to-date ends the day before, and is the whole month before on the first', () => {
    expect(days('month-to-date', '2025-07-03')).toEqual(['2025-07-01', '2025-07-02']);
    expect(days('month-to-date', '2025-07-01')).toEqual(['2025-06-01', '2025-06-30']);
  });

  it('last-ten-days is the last full third of a month', () => {
    expect(days('last-ten-days', '2025-07-21')).toEqual(['2025-07-11', '2025-07-20']);
    expect(days('last-ten-days', '2025-07-20')).toEqual(['2025-07-01', '2025-07-10']);
    expect(days('last-ten-days', '2025-07-11')).toEqual(['2025-07-01', '2025-07-10']);
    expect(days('last-ten-days', '2025-03-10')).toEqual(['2025-02-21', '2025-02-28']);
  });

  it('has one id for every firing that means the same days', () => {
    expect(scheduledPeriod('last-month', '2025-07-03').id).toBe(scheduledPeriod('last-month', '2025-07-30').id);
    expect(scheduledPeriod('last-month', '2025-07-03').id).not.toBe(scheduledPeriod('last-month', '2025-08-01').id);
    expect(scheduledPeriod('as-written', '2025-07-03')).toEqual({ id: '2025-07-03', set: {} });
  });

  it('refuses names that are no file names', () => {
    const good = { name: 'monthly', cron: '0 6 3 * *', period: 'last-month', basinFile: '/b.yaml' };
    expect(scheduleSchema.safeParse(good).success).toBe(true);
    for (const name of ['', '../up', 'A', 'a/b', 'a:b']) {
      expect(scheduleSchema.safeParse({ ...good, name }).success, name).toBe(false);
    }
  });
});
