import { dirname, resolve } from 'node:path';
import type { StationRecord } from '../contract/weather.ts';
import { LIST_COLUMNS } from './columns.ts';
import { type CsvRow, CsvTable } from './csv-table.ts';
import { readDaily } from './daily-csv.ts';
import { readHourly } from './hourly-csv.ts';
import { checkClock } from './solar-check.ts';
import type { StationTable, StationTables } from './station-table.ts';

export type { StationTable, StationTables } from './station-table.ts';

/** Short grass around the mast, the standard exposure of a weather station, m. */
const DEFAULT_ROUGHNESS = 0.03;

/**
 * Reads a station list and the records that it names. Paths in the list are relative to the list. The columns and
 * their units are described in docs/reference/weather.md.
 *
 * @throws BasinloomError WEATHER_FILE (with file and line) or WEATHER_COLUMN at the first fault
 */
export async function readStations(path: string): Promise<StationTables> {
  const list = await CsvTable.read(path);
  const { longitude, latitude, elevation, windHeight } = LIST_COLUMNS;
  for (const name of ['station', longitude.name, latitude.name, elevation.name, windHeight.name]) list.require(name);
  if (!list.has('daily')) list.require('hourly');
  if (list.rows.length === 0) throw list.fault(1, 'the list has no station');
  const stations: StationTable[] = [];
  for (const row of list.rows) {
    const { station, roughnessLengthM } = readStation(list, row);
    if (stations.some((other) => other.station.id === station.id)) {
      throw list.fault(row.line, `station "${station.id}" stands twice`);
    }
    const hourlyFile = recordFile(list, row, 'hourly');
    const dailyFile = recordFile(list, row, 'daily');
    if (hourlyFile === undefined && dailyFile === undefined) {
      throw list.fault(row.line, `station "${station.id}" names neither an hourly nor a daily file`);
    }
    const hours = hourlyFile === undefined ? new Map() : await readHourly(hourlyFile);
    if (hourlyFile !== undefined) checkClock(hourlyFile, station, hours);
    stations.push({
      station,
      roughnessLengthM,
      ...(hourlyFile === undefined ? {} : { hourlyFile }),
      hours,
      ...(dailyFile === undefined ? {} : { dailyFile }),
      days: dailyFile === undefined ? new Map() : await readDaily(dailyFile, station),
    });
  }
  return { file: path, stations };
}

function readStation(list: CsvTable, row: CsvRow): { station: StationRecord; roughnessLengthM: number } {
  const required = (column: (typeof LIST_COLUMNS)[keyof typeof LIST_COLUMNS]) => {
    const value = list.number(row, column);
    if (Number.isNaN(value)) throw list.fault(row.line, `${column.name} is empty`);
    return value;
  };
  const id = list.text(row, 'station');
  if (id === '') throw list.fault(row.line, 'station is empty');
  const station = {
    id,
    longitudeDeg: required(LIST_COLUMNS.longitude),
    latitudeDeg: required(LIST_COLUMNS.latitude),
    elevationM: required(LIST_COLUMNS.elevation),
    windHeightM: required(LIST_COLUMNS.windHeight),
  };
  const given = list.number(row, LIST_COLUMNS.roughness);
  const roughnessLengthM = Number.isNaN(given) ? DEFAULT_ROUGHNESS : given;
  // Nearer to the ground than this the logarithmic wind profile does not hold.
  if (station.windHeightM < 10 * roughnessLengthM) {
    const detail = `wind_height_m ${station.windHeightM} must be at least 10 times roughness_length_m ${roughnessLengthM}`;
    throw list.fault(row.line, detail);
  }
  return { station, roughnessLengthM };
}

function recordFile(list: CsvTable, row: CsvRow, column: string): string | undefined {
  const text = list.text(row, column);
  return text === '' ? undefined : resolve(dirname(list.file), text);
}
