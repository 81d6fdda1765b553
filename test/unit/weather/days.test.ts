import { describe, expect, test } from 'vitest';
import { hourlyReferenceEt } from '../../../shared/flux/reference-et/asce.ts';
import { extraterrestrialDaily } from '../../../shared/flux/sun/fao-geometry.ts';
import { parseInstant } from '../../../shared/time/calendar.ts';
import { stationDays } from '../../../shared/weather/days.ts';
import { referenceInput } from '../../../shared/weather/station-hour.ts';
import { dailyOf, GREELEY, hoursOf, tableOf } from './make-station.ts';

const DATE = '2000-07-02';
/** Solar time at Greeley is 7 h behind UTC. */
const OFFSET = -7;
const START = '2000-07-02T07:00:00Z';
const only = (table: ReturnType<typeof tableOf>, dates = [DATE]) =>
  stationDays({ file: 'stations.csv', stations: [table] }, dates, OFFSET);

describe('a day from hours', () => {
  test('is the sum over the local solar day, no other hour', () => {
    // The hours just outside the day are absurd on purpose.
    const edges = [parseInstant(START) - 3600, parseInstant(START) + 24 * 3600];
    const hours = hoursOf(GREELEY, '2000-07-01T07:00:00Z', 72, (hour) =>
      edges.includes(hour.start) ? { ...hour, windSpeed: 60, precipitationMm: 100 } : hour,
    );
    const table = tableOf(hours);
    const [day] = only(table);
    let sum = 0;
    let solar = 0;
    for (let k = 0; k < 24; k++) {
      const hour = hours.get(parseInstant(START) / 3600 + k)!;
      sum += hourlyReferenceEt(referenceInput(table, { ...hour, middle: hour.start + 1800 }), 'tall');
      solar += hour.solarMJ;
    }
    expect(day).toMatchObject({ date: DATE, from: 'hourly', precipitationMm: 0 });
    expect(day.referenceTallMm).toBeCloseTo(sum, 10);
    expect(day.referenceTallMm).toBeGreaterThan(5);
    expect(day.referenceShortMm).toBeLessThan(day.referenceTallMm);
    expect(day.transmissivity).toBeCloseTo(0.72, 2);
    expect(day.transmissivity).toBeCloseTo(solar / extraterrestrialDaily((40.41 * Math.PI) / 180, 184), 10);
  });

  test('rain is summed; one hour without gauge leaves it unknown unless the daily record has it', () => {
    const wet = hoursOf(GREELEY, START, 24, (hour) => ({ ...hour, precipitationMm: 0.5 }));
    expect(only(tableOf(wet))[0].precipitationMm).toBeCloseTo(12, 10);
    const broken = hoursOf(GREELEY, START, 24, (hour) =>
      hour.line === 9 ? { ...hour, precipitationMm: Number.NaN } : hour,
    );
    expect('precipitationMm' in only(tableOf(broken))[0]).toBe(false);
    expect(only(tableOf(broken, [dailyOf(DATE, { precipitationMm: 7 })]))[0]).toMatchObject({
      from: 'hourly',
      precipitationMm: 7,
    });
  });
});

describe('a day without all its hours', () => {
  const missingOne = hoursOf(GREELEY, START, 24, (hour) => (hour.line === 12 ? undefined : hour));
  const missingWind = hoursOf(GREELEY, START, 24, (hour) =>
    hour.line === 12 ? { ...hour, windSpeed: Number.NaN } : hour,
  );

  test.each([
    ['an hour is missing', missingOne],
    ['an hour has no wind', missingWind],
  ])('%s: the daily record serves', (_, hours) => {
    const [day] = only(tableOf(hours, [dailyOf(DATE)]));
    expect(day.from).toBe('daily');
    // ASCE-EWRI 2005, appendix C, 2 July.
    expect(Math.abs(day.referenceTallMm - 8.68)).toBeLessThan(0.02);
    expect(Math.abs(day.referenceShortMm - 6.71)).toBeLessThan(0.02);
    expect(day.transmissivity).toBeCloseTo(26.8 / 41.582, 3);
  });

  test('without a daily record the day is absent, never filled', () => {
    expect(only(tableOf(missingOne))).toEqual([]);
    expect(only(tableOf(missingOne, [dailyOf(DATE, { windSpeed: Number.NaN })]))).toEqual([]);
  });

  test('days come date by date, stations in the order of the list', () => {
    const second = tableOf(new Map(), [dailyOf('2000-07-01')], { ...GREELEY, id: 'other' });
    const tables = {
      file: 'stations.csv',
      stations: [tableOf(new Map(), [dailyOf('2000-07-01'), dailyOf(DATE)]), second],
    };
    const days = stationDays(tables, ['2000-07-01', DATE], OFFSET);
    expect(days.map(({ date, station }) => `${date} ${station.id}`)).toEqual([
      '2000-07-01 greeley',
      '2000-07-01 other',
      '2000-07-02 greeley',
    ]);
  });
});

test('in the polar night a day has reference ET and no transmissivity', () => {
  const north = { ...GREELEY, latitudeDeg: 75 };
  const frost = { temperatureMaxC: -20, temperatureMinC: -30, vapourPressureKPa: 0.05, solarMJ: 0 };
  const [day] = only(tableOf(new Map(), [dailyOf('2000-12-21', frost)], north), ['2000-12-21']);
  expect(day.transmissivity).toBe(0);
  expect(day.referenceTallMm).toBeGreaterThanOrEqual(0);
  expect(day.referenceTallMm).toBeLessThan(1);
});

test('a low winter sun: the sky is judged by the whole day', () => {
  const north = { ...GREELEY, latitudeDeg: 62 };
  const clear = hoursOf(north, '2000-12-19T07:00:00Z', 96);
  const dull = hoursOf(north, '2000-12-19T07:00:00Z', 96, (hour) => ({ ...hour, solarMJ: hour.solarMJ / 4 }));
  const input = (hours: typeof clear) => {
    const hour = hours.get(parseInstant('2000-12-21T08:00:00Z') / 3600)!;
    return referenceInput(tableOf(hours, [], north), { ...hour, middle: hour.start + 1800 }).carriedCloudFactor;
  };
  expect(input(clear)).toBeGreaterThan(0.85);
  expect(input(dull)).toBeCloseTo(1.35 * 0.3 - 0.35, 10);
});
