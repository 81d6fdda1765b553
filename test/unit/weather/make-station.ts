import type { StationRecord } from '../../../shared/contract/weather.ts';
import { extraterrestrialInterval, solarTimeAngle } from '../../../shared/flux/sun/fao-geometry.ts';
import { dayOfYear, isoDate, parseInstant } from '../../../shared/time/calendar.ts';
import type { StationDaily, StationHour, StationTable } from '../../../shared/weather/station-table.ts';

export const GREELEY: StationRecord = {
  id: 'greeley',
  longitudeDeg: -104.78,
  latitudeDeg: 40.41,
  elevationM: 1462.4,
  windHeightM: 3,
};

/** Extraterrestrial radiation of an hour at a station, MJ m-2. */
export function extraterrestrialHour(station: StationRecord, start: number): number {
  const doy = dayOfYear(isoDate(Math.floor((start - 7 * 3600) / 86400)));
  const clock = ((start + 1800) % 86400) / 3600;
  const middle = solarTimeAngle(clock, 0, -station.longitudeDeg, doy);
  const latitude = (station.latitudeDeg * Math.PI) / 180;
  return extraterrestrialInterval(latitude, doy, middle - Math.PI / 24, middle + Math.PI / 24);
}

/** Hours of weather with a plain daily course and a sky of constant clearness; `change` alters or drops an hour. */
export function hoursOf(
  station: StationRecord,
  from: string,
  count: number,
  change: (hour: StationHour) => StationHour | undefined = (hour) => hour,
): Map<number, StationHour> {
  const first = parseInstant(from);
  const hours = new Map<number, StationHour>();
  for (let k = 0; k < count; k++) {
    const start = first + k * 3600;
    const course = Math.cos(((start / 3600 - 22) / 12) * Math.PI);
    const hour = change({
      line: k + 2,
      start,
      temperatureC: 22 + 9 * course,
      vapourPressureKPa: 1.2,
      windSpeed: 2 + course,
      solarMJ: 0.72 * extraterrestrialHour(station, start),
      precipitationMm: 0,
    });
    if (hour) hours.set(start / 3600, hour);
  }
  return hours;
}

export function dailyOf(date: string, change: Partial<StationDaily> = {}): StationDaily {
  return {
    date,
    temperatureMaxC: 33.6,
    temperatureMinC: 12.2,
    vapourPressureKPa: 1.19,
    windSpeed: 2.14,
    solarMJ: 26.8,
    precipitationMm: 0,
    ...change,
  };
}

export function tableOf(
  hours: ReadonlyMap<number, StationHour>,
  daily: readonly StationDaily[] = [],
  station: StationRecord = GREELEY,
): StationTable {
  return {
    station,
    roughnessLengthM: 0.03,
    hourlyFile: 'hourly.csv',
    hours,
    dailyFile: 'daily.csv',
    days: new Map(daily.map((day) => [day.date, day])),
  };
}
