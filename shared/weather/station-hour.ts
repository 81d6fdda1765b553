import type { StationRecord } from '../contract/weather.ts';
import { type HourlyWeather, hourlyClearSky, hourlyCloudFactor } from '../flux/reference-et/asce.ts';
import { cloudFactor, relativeRadiation } from '../flux/reference-et/clear-sky.ts';
import { windAtTwoMetres } from '../flux/reference-et/psychrometrics.ts';
import { solarTimeAngle } from '../flux/sun/fao-geometry.ts';
import { dayOfYear, localSolarDate, solarOffsetHours } from '../time/calendar.ts';
import type { StationHour, StationTable } from './station-table.ts';

const RADIANS = Math.PI / 180;
/** How far the record is searched for an hour with a high enough sun, h. */
const SEARCH_HOURS = 24;
/** Ratio to clear-sky radiation where no sun tells it: humid regions at night (FAO-56, chapter 3). */
const UNKNOWN_SKY = 0.5;

/** What of an hour's weather the reference equation takes, besides the place. */
export interface HourValues {
  /** Middle of the hour, seconds since 1970 UTC. */
  readonly middle: number;
  readonly temperatureC: number;
  readonly vapourPressureKPa: number;
  /** At the anemometer's height. */
  readonly windSpeed: number;
  readonly solarMJ: number;
}

/** Names of what an hour lacks, in the words of its columns. */
export function missingIn({
  temperatureC,
  vapourPressureKPa,
  windSpeed,
  solarMJ,
}: Omit<HourValues, 'middle'>): string[] {
  const values = {
    'air temperature': temperatureC,
    humidity: vapourPressureKPa,
    'wind speed': windSpeed,
    'solar radiation': solarMJ,
  };
  return Object.entries(values).flatMap(([name, value]) => (Number.isNaN(value) ? [name] : []));
}

export function middleOf({ start }: StationHour): number {
  return start + 1800;
}

/** Place and sun of the hour around an instant, as the reference equation wants them. */
export function hourGeometry(station: StationRecord, middle: number) {
  const date = localSolarDate(middle, solarOffsetHours(station.longitudeDeg));
  const utcHours = (middle - 86400 * Math.floor(middle / 86400)) / 3600;
  return {
    latitudeRad: station.latitudeDeg * RADIANS,
    elevationM: station.elevationM,
    dayOfYear: dayOfYear(date),
    // Clock time is UTC, whose zone centre is Greenwich; the paper counts longitudes westward.
    hourAngle: solarTimeAngle(utcHours, 0, -station.longitudeDeg, dayOfYear(date)),
  };
}

/** Input of the hourly reference equation. Wind goes to 2 m by the profile of the reference surface. */
export function referenceInput(table: StationTable, hour: HourValues): HourlyWeather {
  const geometry = hourGeometry(table.station, hour.middle);
  return {
    ...geometry,
    temperatureC: hour.temperatureC,
    vapourPressureKPa: hour.vapourPressureKPa,
    wind2m: windAtTwoMetres(hour.windSpeed, table.station.windHeightM),
    solarMJ: hour.solarMJ,
    carriedCloudFactor: carriedCloudFactor(table, Math.floor(hour.middle / 3600)),
  };
}

/**
 * Cloud factor for an hour with a low sun or none (ASCE-EWRI 2005: that of the last hour with the sun above 0.3 rad).
 * Where the day before has none, the first later hour is taken; where the sun stays low, the radiation of the 24 hours
 * against that of a clear sky; in the polar night a half-clouded sky.
 *
 * @param hourNumber hours since 1970 UTC
 */
export function carriedCloudFactor(table: StationTable, hourNumber: number): number {
  for (const step of [-1, 1]) {
    for (let k = 1; k <= SEARCH_HOURS; k++) {
      const factor = ownCloudFactor(table, hourNumber + step * k);
      if (factor !== undefined) return factor;
    }
  }
  let measured = 0;
  let clear = 0;
  for (let k = -SEARCH_HOURS / 2; k < SEARCH_HOURS / 2; k++) {
    const hour = table.hours.get(hourNumber + k);
    if (!hour || Number.isNaN(hour.solarMJ)) continue;
    measured += hour.solarMJ;
    clear += hourlyClearSky(hourGeometry(table.station, middleOf(hour)));
  }
  return cloudFactor(clear > 0 ? relativeRadiation(measured, clear) : UNKNOWN_SKY);
}

function ownCloudFactor(table: StationTable, hourNumber: number): number | undefined {
  const hour = table.hours.get(hourNumber);
  if (!hour || Number.isNaN(hour.solarMJ)) return undefined;
  return hourlyCloudFactor({ ...hourGeometry(table.station, middleOf(hour)), solarMJ: hour.solarMJ });
}
