import { describe, expect, test } from 'vitest';
import { BasinloomError } from '../../../shared/contract/errors.ts';
import { checkClock, dailyRadiationFault } from '../../../shared/weather/solar-check.ts';
import { GREELEY, hoursOf } from './make-station.ts';

const HOURS = hoursOf(GREELEY, '2000-07-01T00:00:00Z', 15 * 24);
/** The same weather with the times of another clock. */
const shifted = (by: number) =>
  new Map([...HOURS].map(([number, hour]) => [number + by, { ...hour, start: hour.start + by * 3600 }]));
const refusal = (hours: typeof HOURS) => {
  try {
    checkClock('hourly.csv', GREELEY, hours);
    return undefined;
  } catch (error) {
    expect(error).toBeInstanceOf(BasinloomError);
    return (error as BasinloomError).message;
  }
};

describe('hours against the sun', () => {
  test('hours in UTC pass, and an hour is not told from clouds', () => {
    expect(refusal(HOURS)).toBeUndefined();
    expect(refusal(shifted(1))).toBeUndefined();
    expect(refusal(shifted(-1))).toBeUndefined();
  });

  test('hours in local time do not', () => {
    // Mountain standard time is 7 h behind UTC.
    expect(refusal(shifted(-7))).toMatch(/^hourly\.csv:\d+: time_utc: .* is centred 7\.0 h before solar noon/);
    expect(refusal(shifted(2))).toMatch(/is centred 2\.0 h after solar noon at longitude -104\.78/);
  });

  test('a few hours around an overpass are not judged', () => {
    const mornings = new Map([...HOURS].filter(([number]) => [15, 16, 17].includes(number % 24)));
    expect(refusal(mornings)).toBeUndefined();
    expect(refusal(new Map([...shifted(-7)].slice(0, 9 * 24)))).toBeUndefined();
  });

  test('a day with a gap does not count', () => {
    const everyDayBroken = new Map([...shifted(-7)].filter(([number]) => number % 24 !== 3));
    expect(refusal(everyDayBroken)).toBeUndefined();
  });
});

describe('a day against the sun', () => {
  test('more than the extraterrestrial radiation is named', () => {
    // FAO-56 eq. 21 at 40.41 N on day 184: 41.58 MJ m-2 (regression).
    expect(dailyRadiationFault(GREELEY, '2000-07-02', 26.8)).toBeUndefined();
    expect(dailyRadiationFault(GREELEY, '2000-07-02', 43)).toMatch(/43 is more than .* on 2000-07-02 \(41\.6\)/);
  });

  test('a missing value and a nearly dark day are let through', () => {
    expect(dailyRadiationFault(GREELEY, '2000-07-02', Number.NaN)).toBeUndefined();
    expect(dailyRadiationFault({ ...GREELEY, latitudeDeg: 75 }, '2000-12-21', 0.4)).toBeUndefined();
  });
});
