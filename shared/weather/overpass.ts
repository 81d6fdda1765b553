import { BasinloomError, type ErrorRecord } from '../contract/errors.ts';
import type { StationOverpass } from '../contract/weather.ts';
import { BLENDING_HEIGHT, ZERO_CELSIUS } from '../flux/constants.ts';
import { hourlyClearSky, hourlyReferenceEt } from '../flux/reference-et/asce.ts';
import { formatInstant } from '../time/calendar.ts';
import { type HourValues, hourGeometry, middleOf, missingIn, referenceInput } from './station-hour.ts';
import type { StationHour, StationTable, StationTables } from './station-table.ts';

/**
 * Least wind at the anemometer that the overpass is computed with, m/s: the lower limit that ASCE-EWRI 2005 names
 * for calm air. The stability correction has no meaning without any wind.
 */
const LEAST_WIND = 0.5;

/**
 * Weather of every station at an instant, straight lines between the middles of the two hours around it. A station
 * without both hours gives none, and a record that says why.
 *
 * @param instantSeconds seconds since 1970-01-01T00:00:00 UTC
 */
export function stationOverpass(
  tables: StationTables,
  instantSeconds: number,
): { overpass: StationOverpass[]; problems: ErrorRecord[] } {
  const overpass: StationOverpass[] = [];
  const problems: ErrorRecord[] = [];
  for (const table of tables.stations) {
    const before = Math.floor((instantSeconds - 1800) / 3600);
    const problem = problemWith(tables, table, [before, before + 1]);
    if (problem) problems.push(problem.toRecord());
    else overpass.push(overpassOf(table, before, instantSeconds));
  }
  return { overpass, problems };
}

function overpassOf(table: StationTable, before: number, instant: number): StationOverpass {
  const { station, roughnessLengthM } = table;
  const hour = between(table, table.hours.get(before)!, table.hours.get(before + 1)!, instant);
  const profile = Math.log(BLENDING_HEIGHT / roughnessLengthM) / Math.log(station.windHeightM / roughnessLengthM);
  return {
    station,
    airTemperatureK: hour.temperatureC + ZERO_CELSIUS,
    vapourPressureKPa: hour.vapourPressureKPa,
    wind200: Math.max(LEAST_WIND, hour.windSpeed) * profile,
    referenceTallMmPerHour: hourlyReferenceEt(referenceInput(table, hour), 'tall'),
  };
}

/** Weather of the hour centred at the instant. */
function between(table: StationTable, a: StationHour, b: StationHour, middle: number): HourValues {
  const t = (middle - middleOf(a)) / 3600;
  const mix = (first: number, second: number) => first + t * (second - first);
  const [clearA, clearB, clear] = [middleOf(a), middleOf(b), middle].map((at) =>
    hourlyClearSky(hourGeometry(table.station, at)),
  );
  return {
    middle,
    temperatureC: mix(a.temperatureC, b.temperatureC),
    vapourPressureKPa: mix(a.vapourPressureKPa, b.vapourPressureKPa),
    windSpeed: mix(a.windSpeed, b.windSpeed),
    // The clearness of the sky is interpolated, not the radiation, which bends with the sun.
    solarMJ: clearA > 0 && clearB > 0 ? clear * mix(a.solarMJ / clearA, b.solarMJ / clearB) : mix(a.solarMJ, b.solarMJ),
  };
}

function problemWith(tables: StationTables, table: StationTable, hours: readonly number[]): BasinloomError | undefined {
  const { station, hourlyFile } = table;
  if (hourlyFile === undefined) {
    const detail = `station ${station.id} has no hourly record`;
    return new BasinloomError('WEATHER_FILE', { file: tables.file, line: 1, detail });
  }
  for (const number of hours) {
    const when = `in the hour from ${formatInstant(number * 3600)}`;
    const hour = table.hours.get(number);
    if (!hour) {
      const detail = `station ${station.id} has no record ${when}`;
      return new BasinloomError('WEATHER_FILE', { file: hourlyFile, line: 1, detail });
    }
    const missing = missingIn(hour);
    if (missing.includes('wind speed')) {
      return new BasinloomError('WEATHER_NO_WIND', { file: hourlyFile, station: station.id, when });
    }
    if (missing.length > 0) {
      const detail = `station ${station.id} has no ${missing.join(', no ')} ${when}`;
      return new BasinloomError('WEATHER_FILE', { file: hourlyFile, line: hour.line, detail });
    }
  }
  return undefined;
}
