import { vapourPressureFromDewPoint, vapourPressureFromHumidity } from '../flux/reference-et/psychrometrics.ts';
import { parseInstant } from '../time/calendar.ts';
import { HOURLY_COLUMNS } from './columns.ts';
import { type CsvRow, CsvTable } from './csv-table.ts';
import { type HumidityForm, humidityForm } from './humidity.ts';
import type { StationHour } from './station-table.ts';

const TIME = 'time_utc';
/** MJ m-2 of an hour for 1 W m-2. */
const MJ_PER_WATT_HOUR = 0.0036;

/**
 * Reads an hourly record, by number of the hour since 1970 UTC. `time_utc` is the START of the hour; hours ascend.
 *
 * @throws BasinloomError WEATHER_FILE or WEATHER_COLUMN
 */
export async function readHourly(file: string): Promise<ReadonlyMap<number, StationHour>> {
  const table = await CsvTable.read(file);
  const { airTemperature, relativeHumidity, wind, solar } = HOURLY_COLUMNS;
  for (const name of [TIME, airTemperature.name, wind.name, solar.name]) table.require(name);
  const form = humidityForm(table, [relativeHumidity.name]);
  const hours = new Map<number, StationHour>();
  let latest = Number.NEGATIVE_INFINITY;
  for (const row of table.rows) {
    const start = startOfHour(table, row);
    if (hours.has(start / 3600)) throw table.fault(row.line, `the hour ${table.text(row, TIME)} stands twice`);
    if (start < latest) throw table.fault(row.line, `the hour ${table.text(row, TIME)} comes after a later one`);
    latest = start;
    hours.set(start / 3600, readHour(table, row, start, form));
  }
  return hours;
}

function startOfHour(table: CsvTable, row: CsvRow): number {
  const text = table.text(row, TIME);
  let start: number;
  try {
    start = parseInstant(text);
  } catch (cause) {
    throw table.fault(row.line, `${TIME}: ${(cause as Error).message}`, cause);
  }
  if (start % 3600 !== 0) throw table.fault(row.line, `${TIME}: "${text}" is not the start of a whole hour`);
  return start;
}

function readHour(table: CsvTable, row: CsvRow, start: number, form: HumidityForm): StationHour {
  const temperatureC = table.number(row, HOURLY_COLUMNS.airTemperature);
  return {
    line: row.line,
    start,
    temperatureC,
    vapourPressureKPa: vapourPressure(table, row, form, temperatureC),
    windSpeed: table.number(row, HOURLY_COLUMNS.wind),
    // Thermal offset of the pyranometer at night.
    solarMJ: Math.max(0, table.number(row, HOURLY_COLUMNS.solar)) * MJ_PER_WATT_HOUR,
    precipitationMm: table.number(row, HOURLY_COLUMNS.precipitation),
  };
}

function vapourPressure(table: CsvTable, row: CsvRow, form: HumidityForm, temperatureC: number): number {
  switch (form) {
    case 'vapour-pressure':
      return table.number(row, HOURLY_COLUMNS.vapourPressure);
    case 'dew-point':
      return vapourPressureFromDewPoint(table.number(row, HOURLY_COLUMNS.dewPoint));
    case 'relative-humidity':
      return vapourPressureFromHumidity(
        temperatureC,
        Math.min(100, table.number(row, HOURLY_COLUMNS.relativeHumidity)),
      );
  }
}
