import type { StationDay } from '../contract/weather.ts';
import { type DailyWeather, dailyReferenceEt, hourlyReferenceEt } from '../flux/reference-et/asce.ts';
import { windAtTwoMetres } from '../flux/reference-et/psychrometrics.ts';
import { extraterrestrialDaily } from '../flux/sun/fao-geometry.ts';
import { dayNumber, dayOfYear } from '../time/calendar.ts';
import { middleOf, missingIn, referenceInput } from './station-hour.ts';
import type { StationHour, StationTable, StationTables } from './station-table.ts';

const RADIANS = Math.PI / 180;

/**
 * Reference ET, radiation and rain of every station on every date. The sum of 24 hourly values is taken where the
 * hourly record has the whole day, else the daily equation on the daily record. A day that a station cannot give is
 * absent: nothing is filled in.
 *
 * @param dates YYYY-MM-DD, local solar days
 * @param solarOffsetHours whole hours that the local solar clock is ahead of UTC
 * @returns date by date, stations in the order of the list
 */
export function stationDays(tables: StationTables, dates: readonly string[], solarOffsetHours: number): StationDay[] {
  return dates.flatMap((date) =>
    tables.stations.flatMap((table) => {
      const hours = wholeDay(table, date, solarOffsetHours);
      const day = hours ? fromHours(table, date, hours) : fromDaily(table, date);
      return day ?? [];
    }),
  );
}

/** The 24 hours of a local solar day; undefined when one is missing or incomplete. */
function wholeDay(table: StationTable, date: string, solarOffsetHours: number): StationHour[] | undefined {
  const first = dayNumber(date) * 24 - solarOffsetHours;
  const hours: StationHour[] = [];
  for (let k = 0; k < 24; k++) {
    const hour = table.hours.get(first + k);
    if (!hour || missingIn(hour).length > 0) return undefined;
    hours.push(hour);
  }
  return hours;
}

function fromHours(table: StationTable, date: string, hours: readonly StationHour[]): StationDay {
  const inputs = hours.map((hour) => referenceInput(table, { ...hour, middle: middleOf(hour) }));
  const total = (values: readonly number[]) => values.reduce((sum, value) => sum + value, 0);
  const ownRain = total(hours.map(({ precipitationMm }) => precipitationMm));
  const rain = Number.isNaN(ownRain) ? table.days.get(date)?.precipitationMm : ownRain;
  return {
    station: table.station,
    date,
    // The slightly negative hours of the night stay in the sum; a day as a whole does not evaporate less than nothing.
    referenceTallMm: Math.max(0, total(inputs.map((input) => hourlyReferenceEt(input, 'tall')))),
    referenceShortMm: Math.max(0, total(inputs.map((input) => hourlyReferenceEt(input, 'short')))),
    transmissivity: transmissivityOf(table, date, total(hours.map(({ solarMJ }) => solarMJ))),
    ...known(rain),
    from: 'hourly',
  };
}

function fromDaily(table: StationTable, date: string): StationDay | undefined {
  const day = table.days.get(date);
  if (!day) return undefined;
  const { temperatureMaxC, temperatureMinC, vapourPressureKPa, windSpeed, solarMJ } = day;
  const needed = [temperatureMaxC, temperatureMinC, vapourPressureKPa, windSpeed, solarMJ];
  if (needed.some(Number.isNaN)) return undefined;
  const { station } = table;
  const weather: DailyWeather = {
    temperatureMaxC,
    temperatureMinC,
    vapourPressureKPa,
    solarMJ,
    wind2m: windAtTwoMetres(windSpeed, station.windHeightM),
    latitudeRad: station.latitudeDeg * RADIANS,
    elevationM: station.elevationM,
    dayOfYear: dayOfYear(date),
  };
  return {
    station,
    date,
    referenceTallMm: Math.max(0, dailyReferenceEt(weather, 'tall')),
    referenceShortMm: Math.max(0, dailyReferenceEt(weather, 'short')),
    transmissivity: transmissivityOf(table, date, solarMJ),
    ...known(day.precipitationMm),
    from: 'daily',
  };
}

/** Measured over extraterrestrial radiation, not above 1; 0 in the polar night. */
function transmissivityOf({ station }: StationTable, date: string, solarMJ: number): number {
  const extraterrestrial = extraterrestrialDaily(station.latitudeDeg * RADIANS, dayOfYear(date));
  return extraterrestrial > 0 ? Math.min(1, solarMJ / extraterrestrial) : 0;
}

function known(precipitationMm: number | undefined): { precipitationMm?: number } {
  return precipitationMm === undefined || Number.isNaN(precipitationMm) ? {} : { precipitationMm };
}
