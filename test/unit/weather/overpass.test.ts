import { describe, expect, test } from 'vitest';
import { hourlyReferenceEt } from '../../../shared/flux/reference-et/asce.ts';
import { parseInstant } from '../../../shared/time/calendar.ts';
import { stationOverpass } from '../../../shared/weather/overpass.ts';
import { referenceInput } from '../../../shared/weather/station-hour.ts';
import { extraterrestrialHour, GREELEY, hoursOf, tableOf } from './make-station.ts';

const FIRST = '2000-07-01T07:00:00Z';
const hours = hoursOf(GREELEY, FIRST, 72);
const at = (table: ReturnType<typeof tableOf>, instant: string) =>
  stationOverpass({ file: 'stations.csv', stations: [table] }, parseInstant(instant));

describe('weather at an instant', () => {
  test('at the middle of an hour it is that hour', () => {
    const { overpass, problems } = at(tableOf(hours), '2000-07-02T17:30:00Z');
    const hour = hours.get(parseInstant('2000-07-02T17:00:00Z') / 3600)!;
    expect(problems).toEqual([]);
    expect(overpass[0].airTemperatureK).toBeCloseTo(hour.temperatureC + 273.15, 10);
    const reference = hourlyReferenceEt(referenceInput(tableOf(hours), { ...hour, middle: hour.start + 1800 }), 'tall');
    expect(overpass[0].referenceTallMmPerHour).toBeCloseTo(reference, 10);
    expect(reference).toBeGreaterThan(0.5);
  });

  test('between two middles it lies on the straight line', () => {
    const { overpass } = at(tableOf(hours), '2000-07-02T17:45:00Z');
    const [a, b] = [17, 18].map((h) => hours.get(parseInstant(`2000-07-02T${h}:00:00Z`) / 3600)!);
    expect(overpass[0].airTemperatureK - 273.15).toBeCloseTo(0.75 * a.temperatureC + 0.25 * b.temperatureC, 10);
    const wind = 0.75 * a.windSpeed + 0.25 * b.windSpeed;
    expect(overpass[0].wind200).toBeCloseTo((wind * Math.log(200 / 0.03)) / Math.log(3 / 0.03), 10);
  });

  test('a constant clearness stays constant between the hours', () => {
    const instant = parseInstant('2000-07-02T17:55:00Z');
    const { overpass } = at(tableOf(hours), '2000-07-02T17:55:00Z');
    const [a, b] = [17, 18].map((h) => hours.get(parseInstant(`2000-07-02T${h}:00:00Z`) / 3600)!);
    const t = 25 / 60;
    const expected = hourlyReferenceEt(
      referenceInput(tableOf(hours), {
        middle: instant,
        temperatureC: a.temperatureC + t * (b.temperatureC - a.temperatureC),
        vapourPressureKPa: 1.2,
        windSpeed: a.windSpeed + t * (b.windSpeed - a.windSpeed),
        solarMJ: 0.72 * extraterrestrialHour(GREELEY, instant - 1800),
      }),
      'tall',
    );
    expect(overpass[0].referenceTallMmPerHour).toBeCloseTo(expected, 9);
  });

  test('calm air is computed with the least wind', () => {
    const calm = hoursOf(GREELEY, FIRST, 72, (hour) => ({ ...hour, windSpeed: 0 }));
    const { overpass } = at(tableOf(calm), '2000-07-02T17:45:00Z');
    expect(overpass[0].wind200).toBeCloseTo((0.5 * Math.log(200 / 0.03)) / Math.log(3 / 0.03), 10);
  });
});

describe('a station that cannot tell', () => {
  test('lacks one of the two hours', () => {
    const gap = hoursOf(GREELEY, FIRST, 72, (hour) =>
      hour.start === parseInstant('2000-07-02T18:00:00Z') ? undefined : hour,
    );
    const { overpass, problems } = at(tableOf(gap), '2000-07-02T17:45:00Z');
    expect(overpass).toEqual([]);
    expect(problems[0].code).toBe('WEATHER_FILE');
    expect(problems[0].message).toMatch(/greeley has no record in the hour from 2000-07-02T18:00:00Z/);
    expect(at(tableOf(gap), '2000-07-02T17:15:00Z').overpass).toHaveLength(1);
  });

  test('lacks wind, which is never guessed', () => {
    const noWind = hoursOf(GREELEY, FIRST, 72, (hour) => ({ ...hour, windSpeed: Number.NaN }));
    const { overpass, problems } = at(tableOf(noWind), '2000-07-02T17:45:00Z');
    expect(overpass).toEqual([]);
    expect(problems[0].code).toBe('WEATHER_NO_WIND');
    expect(problems[0].message).toBe(
      'hourly.csv: station greeley has no wind speed in the hour from 2000-07-02T17:00:00Z',
    );
  });

  test('lacks another value: file and line are named', () => {
    const dry = hoursOf(GREELEY, FIRST, 72, (hour) =>
      hour.line === 37 ? { ...hour, vapourPressureKPa: Number.NaN } : hour,
    );
    const { problems } = at(tableOf(dry), '2000-07-02T18:15:00Z');
    expect(problems[0].message).toMatch(/^hourly\.csv:37: station greeley has no humidity/);
  });

  test('does not silence the others', () => {
    const other = tableOf(hours, [], { ...GREELEY, id: 'other' });
    const tables = { file: 'stations.csv', stations: [tableOf(new Map()), other] };
    const { overpass, problems } = stationOverpass(tables, parseInstant('2000-07-02T17:45:00Z'));
    expect(overpass.map(({ station }) => station.id)).toEqual(['other']);
    expect(problems).toHaveLength(1);
  });
});
