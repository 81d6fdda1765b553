import { mkdtemp, rm, writeFile } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterEach, beforeEach, describe, expect, test } from 'vitest';
import { BasinloomError } from '../../../shared/contract/errors.ts';
import { saturationVapourPressure } from '../../../shared/flux/reference-et/psychrometrics.ts';
import { parseInstant } from '../../../shared/time/calendar.ts';
import { readStations } from '../../../shared/weather/station-csv.ts';

const LIST = 'station,longitude_deg,latitude_deg,elevation_m,wind_height_m,hourly,daily\n';
const HOURLY_HEADER =
  'time_utc,air_temperature_c,relative_humidity_pct,wind_speed_m_s,solar_radiation_w_m2,precipitation_mm\n';
const DAILY_HEADER =
  'date,temperature_max_c,temperature_min_c,relative_humidity_max_pct,relative_humidity_min_pct,wind_speed_m_s,solar_radiation_mj_m2,precipitation_mm\n';

let folder: string;
beforeEach(async () => {
  folder = await mkdtemp(join(tmpdir(), 'stations-'));
  await write('stations.csv', `${LIST}a,12.1,41.9,105,2,a-hourly.csv,a-daily.csv\n`);
  await write(
    'a-hourly.csv',
    `${HOURLY_HEADER}2025-06-01T10:00:00Z,25,50,3,800,0\n2025-06-01T11:00:00Z,26,48,3.2,850,\n`,
  );
  await write('a-daily.csv', `${DAILY_HEADER}2025-06-01,25,18,82,54,2.1,27.5,0\n`);
});
afterEach(() => rm(folder, { recursive: true }));

const write = (name: string, text: string) => writeFile(join(folder, name), text);
const read = () => readStations(join(folder, 'stations.csv'));
const refusal = async () => {
  const error = await read().catch((thrown) => thrown);
  expect(error).toBeInstanceOf(BasinloomError);
  return (error as BasinloomError).message.replaceAll(`${folder}/`, '');
};

describe('a good list', () => {
  test('gives places and records in standard units', async () => {
    const { stations } = await read();
    expect(stations).toHaveLength(1);
    const [{ station, roughnessLengthM, hours, days }] = stations;
    expect(station).toEqual({ id: 'a', longitudeDeg: 12.1, latitudeDeg: 41.9, elevationM: 105, windHeightM: 2 });
    expect(roughnessLengthM).toBe(0.03);
    const hour = hours.get(parseInstant('2025-06-01T10:00:00Z') / 3600);
    expect(hour).toMatchObject({ line: 2, temperatureC: 25, windSpeed: 3, precipitationMm: 0 });
    expect(hour?.vapourPressureKPa).toBeCloseTo(saturationVapourPressure(25) / 2, 12);
    expect(hour?.solarMJ).toBeCloseTo(2.88, 12);
    expect(hours.get(parseInstant('2025-06-01T11:00:00Z') / 3600)?.precipitationMm).toBeNaN();
    // FAO-56 example 5.
    expect(days.get('2025-06-01')?.vapourPressureKPa).toBeCloseTo(1.7, 2);
  });

  test('takes any of the three humidity forms', async () => {
    await write(
      'a-hourly.csv',
      'time_utc,air_temperature_c,dew_point_c,wind_speed_m_s,solar_radiation_w_m2\n2025-06-01T10:00:00Z,25,12,3,800\n',
    );
    await write(
      'a-daily.csv',
      'date,temperature_max_c,temperature_min_c,vapour_pressure_kpa,wind_speed_m_s,solar_radiation_mj_m2\n2025-06-01,25,18,1.44,2,27\n',
    );
    const [{ hours, days }] = (await read()).stations;
    expect([...hours.values()][0].vapourPressureKPa).toBeCloseTo(saturationVapourPressure(12), 12);
    expect(days.get('2025-06-01')).toMatchObject({ vapourPressureKPa: 1.44, precipitationMm: Number.NaN });
  });

  test('bounds sensor drift: humidity a little over 100, radiation a little under 0', async () => {
    await write('a-hourly.csv', `${HOURLY_HEADER}2025-06-01T02:00:00Z,10,103,1,-4,0\n`);
    const [{ hours }] = (await read()).stations;
    expect([...hours.values()][0]).toMatchObject({ solarMJ: 0, vapourPressureKPa: saturationVapourPressure(10) });
  });

  test('needs only one of the two records, allows comments, blank lines, a byte order mark and CRLF', async () => {
    await write(
      'stations.csv',
      `\uFEFF# our stations\r\n${LIST.replace('\n', ',roughness_length_m\r\n')}\r\na,12.1,41.9,105,10,,a-daily.csv,0.1\r\n`,
    );
    const [table] = (await read()).stations;
    expect(table.hours.size).toBe(0);
    expect('hourlyFile' in table).toBe(false);
    expect(table.roughnessLengthM).toBe(0.1);
  });
});

describe('faults name file and line', () => {
  const hourly = (row: string) => write('a-hourly.csv', `${HOURLY_HEADER}2025-06-01T10:00:00Z,25,50,3,800,0\n${row}\n`);
  test.each([
    ['2025-06-01T11:00:00Z,77,50,3,800,0', /^a-hourly\.csv:3: air_temperature_c: 77 is outside -90 to 60/],
    ['2025-06-01T11:00:00Z,25,50,-999,800,0', /^a-hourly\.csv:3: wind_speed_m_s: -999 is outside 0 to 75/],
    ['2025-06-01T11:00:00Z,n/a,50,3,800,0', /^a-hourly\.csv:3: air_temperature_c: "n\/a" is not a number/],
    ['2025-06-01T11:00:00+02:00,25,50,3,800,0', /^a-hourly\.csv:3: time_utc: .*not a UTC instant/],
    ['2025-06-01T11:30:00Z,25,50,3,800,0', /^a-hourly\.csv:3: time_utc: .*not the start of a whole hour/],
    ['2025-06-01T10:00:00Z,25,50,3,800,0', /^a-hourly\.csv:3: the hour .* stands twice/],
    ['2025-06-01T09:00:00Z,25,50,3,800,0', /^a-hourly\.csv:3: the hour .* comes after a later one/],
    ['2025-06-01T11:00:00Z,25,50,3', /^a-hourly\.csv:3: .*[Rr]ecord/],
  ])('hour %s', async (row, message) => {
    await hourly(row);
    expect(await refusal()).toMatch(message);
  });

  test.each([
    ['2025-02-30,25,18,82,54,2.1,27.5,0', /^a-daily\.csv:2: date: .*not a date of the calendar/],
    ['2025-06-01,15,18,82,54,2.1,27.5,0', /^a-daily\.csv:2: temperature_max_c 15 is below temperature_min_c 18/],
    ['2025-06-01,25,18,50,54,2.1,27.5,0', /^a-daily\.csv:2: relative_humidity_max_pct 50 is below/],
    ['2025-06-02,25,18,82,54,2.1,27,0\n2025-06-01,25,18,82,54,2.1,27,0', /^a-daily\.csv:3: the day .* comes after/],
    // Extraterrestrial radiation at 41.9 N on 1 June is 41.4 MJ m-2.
    ['2025-06-01,25,18,82,54,2.1,43,0', /^a-daily\.csv:2: solar_radiation_mj_m2: 43 is more than the sun gives/],
    ['2025-06-01,25,18,82,54,2.1,318,0', /^a-daily\.csv:2: solar_radiation_mj_m2: 318 is outside/],
  ])('day %s', async (row, message) => {
    await write('a-daily.csv', `${DAILY_HEADER}${row}\n`);
    expect(await refusal()).toMatch(message);
  });

  test.each([
    ['', /^stations\.csv:1: the list has no station/],
    ['a,12.1,91,105,2,a-hourly.csv,', /^stations\.csv:2: latitude_deg: 91 is outside/],
    ['a,12.1,41.9,,2,a-hourly.csv,', /^stations\.csv:2: elevation_m is empty/],
    ['a,12.1,41.9,105,2,,', /^stations\.csv:2: station "a" names neither/],
    ['a,12.1,41.9,105,2,gone.csv,', /^gone\.csv:1: cannot be read/],
    ['a,12.1,41.9,105,2,a-hourly.csv,\na,13,42,105,2,a-hourly.csv,', /^stations\.csv:3: station "a" stands twice/],
  ])('list %s', async (row, message) => {
    await write('stations.csv', `${LIST}${row}\n`);
    expect(await refusal()).toMatch(message);
  });

  test('a mast in the roughness of its own ground', async () => {
    await write('stations.csv', `${LIST.replace('\n', ',roughness_length_m\n')}a,12.1,41.9,105,2,a-hourly.csv,,0.5\n`);
    expect(await refusal()).toMatch(/at least 10 times roughness_length_m/);
  });
});

describe('columns', () => {
  test.each([
    ['wind_speed_m_s', 'wind_speed', /column "wind_speed_m_s" is missing; is "wind_speed" meant to be it\?/],
    ['wind_speed_m_s', 'wnd', /column "wind_speed_m_s" is missing$/],
    [
      'relative_humidity_pct',
      'relative_humidity',
      /column "relative_humidity_pct" is missing; is "relative_humidity" meant/,
    ],
    ['relative_humidity_pct', 'dewpoint_c', /column "dew_point_c" is missing; is "dewpoint_c" meant/],
    ['time_utc', 'time', /column "time_utc" is missing$/],
  ])('%s written %s', async (name, written, message) => {
    await write('a-hourly.csv', `${HOURLY_HEADER.replace(name, written)}2025-06-01T10:00:00Z,25,50,3,800,0\n`);
    expect(await refusal()).toMatch(message);
  });

  test('a column that stands twice', async () => {
    await write(
      'a-hourly.csv',
      `${HOURLY_HEADER.replace('precipitation_mm', 'wind_speed_m_s')}2025-06-01T10:00:00Z,25,50,3,800,0\n`,
    );
    expect(await refusal()).toMatch(/^a-hourly\.csv:1: column "wind_speed_m_s" stands twice/);
  });

  test('an empty file', async () => {
    await write('a-hourly.csv', '');
    expect(await refusal()).toMatch(/^a-hourly\.csv:1: the file is empty/);
  });
});
