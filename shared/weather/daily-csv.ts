import type { StationRecord } from '../contract/weather.ts';
import { vapourPressureFromDewPoint, vapourPressureFromHumidityRange } from '../flux/reference-et/psychrometrics.ts';
import { dayNumber } from '../time/calendar.ts';
import { DAILY_COLUMNS } from './columns.ts';
import { type CsvRow, CsvTable } from './csv-table.ts';
import { type HumidityForm, humidityForm } from './humidity.ts';
import { dailyRadiationFault } from './solar-check.ts';
import type { StationDaily } from './station-table.ts';

const DATE = 'date';

/**
 * Reads the daily record of a station, by date. Days are the station's own local days; they ascend.
 *
 * @throws BasinloomError WEATHER_FILE or WEATHER_COLUMN
 */
export async function readDaily(file: string, station: StationRecord): Promise<ReadonlyMap<string, StationDaily>> {
  const table = await CsvTable.read(file);
  const { temperatureMax, temperatureMin, relativeHumidityMax, relativeHumidityMin, wind, solar } = DAILY_COLUMNS;
  for (const name of [DATE, temperatureMax.name, temperatureMin.name, wind.name, solar.name]) table.require(name);
  const form = humidityForm(table, [relativeHumidityMax.name, relativeHumidityMin.name]);
  const days = new Map<string, StationDaily>();
  let latest = '';
  for (const row of table.rows) {
    const day = readDay(table, row, form);
    if (days.has(day.date)) throw table.fault(row.line, `the day ${day.date} stands twice`);
    if (day.date < latest) throw table.fault(row.line, `the day ${day.date} comes after a later one`);
    latest = day.date;
    const fault = dailyRadiationFault(station, day.date, day.solarMJ);
    if (fault !== undefined) throw table.fault(row.line, `${solar.name}: ${fault}`);
    days.set(day.date, day);
  }
  return days;
}

function readDay(table: CsvTable, row: CsvRow, form: HumidityForm): StationDaily {
  const date = table.text(row, DATE);
  try {
    dayNumber(date);
  } catch (cause) {
    throw table.fault(row.line, `${DATE}: ${(cause as Error).message}`, cause);
  }
  const temperatureMaxC = table.number(row, DAILY_COLUMNS.temperatureMax);
  const temperatureMinC = table.number(row, DAILY_COLUMNS.temperatureMin);
  if (temperatureMaxC < temperatureMinC) {
    throw table.fault(row.line, `temperature_max_c ${temperatureMaxC} is below temperature_min_c ${temperatureMinC}`);
  }
  return {
    date,
    temperatureMaxC,
    temperatureMinC,
    vapourPressureKPa: vapourPressure(table, row, form, temperatureMaxC, temperatureMinC),
    windSpeed: table.number(row, DAILY_COLUMNS.wind),
    solarMJ: table.number(row, DAILY_COLUMNS.solar),
    precipitationMm: table.number(row, DAILY_COLUMNS.precipitation),
  };
}

function vapourPressure(table: CsvTable, row: CsvRow, form: HumidityForm, maxC: number, minC: number): number {
  switch (form) {
    case 'vapour-pressure':
      return table.number(row, DAILY_COLUMNS.vapourPressure);
    case 'dew-point':
      return vapourPressureFromDewPoint(table.number(row, DAILY_COLUMNS.dewPoint));
    case 'relative-humidity': {
      const wettest = Math.min(100, table.number(row, DAILY_COLUMNS.relativeHumidityMax));
      const driest = Math.min(100, table.number(row, DAILY_COLUMNS.relativeHumidityMin));
      if (wettest < driest) {
        throw table.fault(
          row.line,
          `relative_humidity_max_pct ${wettest} is below relative_humidity_min_pct ${driest}`,
        );
      }
      return vapourPressureFromHumidityRange(maxC, minC, wettest, driest);
    }
  }
}
