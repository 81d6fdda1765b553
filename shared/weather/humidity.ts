import { HOURLY_COLUMNS } from './columns.ts';
import type { CsvTable } from './csv-table.ts';

export type HumidityForm = 'vapour-pressure' | 'dew-point' | 'relative-humidity';

/**
 * Which of the humidity forms a table has; the most direct one where it has several.
 *
 * @param relative the columns of the relative form, all of them needed
 * @throws BasinloomError WEATHER_COLUMN when it has none
 */
export function humidityForm(table: CsvTable, relative: readonly string[]): HumidityForm {
  const { vapourPressure, dewPoint } = HOURLY_COLUMNS;
  if (table.has(vapourPressure.name)) return 'vapour-pressure';
  if (table.has(dewPoint.name)) return 'dew-point';
  if (relative.every((name) => table.has(name))) return 'relative-humidity';
  // Report the form that the header comes nearest to.
  const meant = [...relative, vapourPressure.name, dewPoint.name];
  const missing = meant.filter((name) => !table.has(name));
  table.require(missing.find((name) => table.similarTo(name) !== undefined) ?? missing[0]);
  throw new Error('unreachable: the column is missing');
}
