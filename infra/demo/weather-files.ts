import { mkdir, writeFile } from 'node:fs/promises';
import { join } from 'node:path';
import { windAtHeight } from './air.ts';
import { dateOf, instantOf, SOLAR_OFFSET_HOURS } from './calendar.ts';
import { toDegrees } from './plane.ts';
import { relativeHumidity, type Site } from './weather.ts';
import { RECORD, type World } from './world.ts';

/** Stations by place (in half sizes of the basin) and height of the anemometer. */
const STATIONS = [
  { id: 'mill-reach', u: 0.06, v: 0.14, windHeight: 2 },
  { id: 'long-acre', u: -0.34, v: -0.26, windHeight: 2 },
  { id: 'fell-gate', u: -0.62, v: 0.4, windHeight: 2 },
  { id: 'holm-ridge', u: 0.6, v: 0.62, windHeight: 10 },
] as const;

/** Hourly records begin here, a little before the first overpass; daily ones with the world's record. */
const HOURLY_FROM = -8;

const HOURLY_HEADER =
  'time_utc,air_temperature_c,relative_humidity_pct,wind_speed_m_s,solar_radiation_w_m2,precipitation_mm';
const DAILY_HEADER =
  'date,temperature_max_c,temperature_min_c,relative_humidity_max_pct,relative_humidity_min_pct,' +
  'wind_speed_m_s,solar_radiation_mj_m2,precipitation_mm';
const LIST_HEADER = 'station,longitude_deg,latitude_deg,elevation_m,wind_height_m,hourly,daily';

/** Writes the station list with the hourly and daily records that the stations would have kept. */
export async function writeWeather(folder: string, world: World): Promise<void> {
  await mkdir(folder, { recursive: true });
  const list = [LIST_HEADER];
  for (const { id, u, v, windHeight } of STATIONS) {
    const [x, y] = [u * world.scale.halfWidth, v * world.scale.halfHeight];
    const site = { x, y, elevation: Math.round(world.terrain.elevation(x, y)) };
    const [longitude, latitude] = toDegrees(x, y);
    const [hourly, daily] = [`${id}-hourly.csv`, `${id}-daily.csv`];
    list.push([id, longitude.toFixed(6), latitude.toFixed(6), site.elevation, windHeight, hourly, daily].join(','));
    await writeFile(join(folder, hourly), text(HOURLY_HEADER, hourlyRows(world, site, windHeight)));
    await writeFile(join(folder, daily), text(DAILY_HEADER, dailyRows(world, site, windHeight)));
  }
  await writeFile(join(folder, 'stations.csv'), text(list[0], list.slice(1)));
}

const text = (header: string, rows: readonly string[]): string => `${[header, ...rows].join('\n')}\n`;

/** The rain of a day falls in the six hours before its last. */
const RAIN_HOURS = { from: 17, count: 6 };

function hourlyRows({ weather }: World, site: Site, windHeight: number): string[] {
  const rows: string[] = [];
  for (let hour = HOURLY_FROM * 24; hour < (RECORD.to + 1) * 24; hour++) {
    const air = weather.hourFrom(hour, site);
    const solarHour = hour + SOLAR_OFFSET_HOURS;
    const day = Math.floor(solarHour / 24);
    const inDay = solarHour - day * 24;
    const rains = inDay >= RAIN_HOURS.from && inDay < RAIN_HOURS.from + RAIN_HOURS.count;
    rows.push(
      [
        `${instantOf(hour).slice(0, 16)}Z`,
        air.celsius.toFixed(2),
        relativeHumidity(air).toFixed(2),
        windAtHeight(air.wind200, windHeight).toFixed(2),
        air.shortwave.toFixed(1),
        (rains ? weather.rainOf(day) / RAIN_HOURS.count : 0).toFixed(2),
      ].join(','),
    );
  }
  return rows;
}

/** Minutes between the readings whose extremes a station keeps. */
const READINGS_PER_DAY = 144;

function dailyRows({ weather }: World, site: Site, windHeight: number): string[] {
  const rows: string[] = [];
  for (let day = RECORD.from; day <= RECORD.to; day++) {
    const first = day * 24 - SOLAR_OFFSET_HOURS;
    const readings = Array.from({ length: READINGS_PER_DAY }, (_, k) =>
      weather.airAt(first + ((k + 0.5) * 24) / READINGS_PER_DAY, site),
    );
    const temperatures = readings.map(({ celsius }) => celsius);
    const humidities = readings.map(relativeHumidity);
    const winds = readings.map(({ wind200 }) => windAtHeight(wind200, windHeight));
    const hours = Array.from({ length: 24 }, (_, k) => weather.hourFrom(first + k, site));
    rows.push(
      [
        dateOf(day),
        Math.max(...temperatures).toFixed(2),
        Math.min(...temperatures).toFixed(2),
        Math.max(...humidities).toFixed(2),
        Math.min(...humidities).toFixed(2),
        (winds.reduce((sum, wind) => sum + wind, 0) / winds.length).toFixed(2),
        hours.reduce((sum, { shortwave }) => sum + shortwave * 0.0036, 0).toFixed(3),
        weather.rainOf(day).toFixed(1),
      ].join(','),
    );
  }
  return rows;
}
