import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import {
  addDays,
  dayNumber,
  dayOfYear,
  daysBetween,
  formatInstant,
  isoDate,
  localSolarDate,
  parseInstant,
  periodsOf,
  solarOffsetHours,
} from '../../../shared/time/calendar.ts';

const years1600To2600 = fc.integer({ min: -135140, max: 230103 });

describe('dates', () => {
  test('equal the platform calendar on every day asked', () => {
    fc.assert(
      fc.property(years1600To2600, (day) => {
        const platform = new Date(day * 86400e3).toISOString().slice(0, 10);
        expect(isoDate(day)).toBe(platform);
        expect(dayNumber(platform)).toBe(day);
      }),
    );
  });

  test('day of year counts the leap day', () => {
    expect(dayOfYear('2023-01-01')).toBe(1);
    expect(dayOfYear('2023-12-31')).toBe(365);
    expect(dayOfYear('2024-12-31')).toBe(366);
    expect(dayOfYear('1900-12-31')).toBe(365);
    expect(dayOfYear('2000-07-01')).toBe(183);
  });

  test('adding and counting days', () => {
    expect(addDays('2024-02-28', 1)).toBe('2024-02-29');
    expect(addDays('2025-01-01', -1)).toBe('2024-12-31');
    expect(daysBetween('2025-03-01', '2025-02-27')).toBe(-2);
  });

  test.each(['2025-02-29', '2025-13-01', '2025-00-10', '2025-04-31', '25-04-01', '2025-4-1', ''])(
    '%s is refused',
    (text) => {
      expect(() => dayNumber(text)).toThrow(RangeError);
    },
  );
});

describe('instants', () => {
  test('parse keeps the fraction', () => {
    expect(parseInstant('1970-01-01T00:00:00Z')).toBe(0);
    expect(parseInstant('2013-07-07T10:14:59.2820900Z')).toBeCloseTo(1373192099.28209, 5);
    expect(parseInstant('2025-06-01T10:00Z')).toBe(parseInstant('2025-06-01 10:00:00+00:00'));
  });

  test('format and parse undo each other to the millisecond', () => {
    fc.assert(
      fc.property(fc.integer({ min: -11e12, max: 19e12 }), (milliseconds) => {
        const text = formatInstant(milliseconds / 1000);
        expect(Math.round(parseInstant(text) * 1000)).toBe(milliseconds);
        expect(Date.parse(text)).toBe(milliseconds);
      }),
    );
  });

  test.each(['2025-06-01', '2025-06-01T10:00:00+02:00', '2025-06-01T24:00:00Z', '2025-06-01T10:60:00Z', 'noon'])(
    '%s is refused',
    (text) => {
      expect(() => parseInstant(text)).toThrow(RangeError);
    },
  );

  test('the solar date turns with the longitude', () => {
    const lateEvening = parseInstant('2025-06-30T23:30:00Z');
    expect(localSolarDate(lateEvening, 0)).toBe('2025-06-30');
    expect(localSolarDate(lateEvening, 1)).toBe('2025-07-01');
    expect(localSolarDate(parseInstant('2025-07-01T05:00:00Z'), -7)).toBe('2025-06-30');
    expect(solarOffsetHours(-104.8)).toBe(-7);
    expect(Object.is(solarOffsetHours(-3), 0)).toBe(true);
    expect(solarOffsetHours(179)).toBe(12);
  });
});

describe('periods', () => {
  test('months are clipped to the ends', () => {
    expect(periodsOf('2024-01-20', '2024-03-05', 'month')).toEqual([
      { id: '2024-01', from: '2024-01-20', to: '2024-01-31' },
      { id: '2024-02', from: '2024-02-01', to: '2024-02-29' },
      { id: '2024-03', from: '2024-03-01', to: '2024-03-05' },
    ]);
  });

  test('the whole is one period', () => {
    expect(periodsOf('2025-04-01', '2025-09-30', 'whole')).toEqual([
      { id: '2025-04-01_2025-09-30', from: '2025-04-01', to: '2025-09-30' },
    ]);
    expect(() => periodsOf('2025-04-02', '2025-04-01', 'whole')).toThrow(RangeError);
  });

  test('months cover every day once', () => {
    fc.assert(
      fc.property(years1600To2600, fc.integer({ min: 0, max: 900 }), (day, length) => {
        const [from, to] = [isoDate(day), isoDate(day + length)];
        const periods = periodsOf(from, to, 'month');
        expect(periods[0].from).toBe(from);
        expect(periods.at(-1)?.to).toBe(to);
        for (let k = 1; k < periods.length; k++) expect(addDays(periods[k - 1].to, 1)).toBe(periods[k].from);
      }),
    );
  });
});
