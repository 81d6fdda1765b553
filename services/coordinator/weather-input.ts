import type { BasinFile } from '../../shared/contract/basin-file.ts';
import { BasinloomError } from '../../shared/contract/errors.ts';
import type { LeftOut, Period } from '../../shared/contract/plan.ts';
import type { PassWeather, StationDay } from '../../shared/contract/weather.ts';
import { bareSoilFraction } from '../../shared/flux/reference-et/bare-soil.ts';
import { addDays, daysBetween, parseInstant } from '../../shared/time/calendar.ts';
import { stationDays } from '../../shared/weather/days.ts';
import { stationOverpass } from '../../shared/weather/overpass.ts';
import { readStations } from '../../shared/weather/station-csv.ts';
import type { SurveyedPass } from './survey.ts';

/** Days of rain record that the bare-soil balance looks back, and the least it is content with. */
const RAIN_DAYS = 60;
const LEAST_RAIN_DAYS = 10;

export interface WeatherInput {
  /** In the order of the passes asked for; null where a pass has no usable weather. */
  readonly ofPass: readonly (PassWeather | null)[];
  readonly days: readonly StationDay[];
  readonly leftOut: readonly LeftOut[];
}

/**
 * Weather of every pass and every day that the periods need.
 *
 * @throws BasinloomError WEATHER_DAYS_MISSING when a day of a period has no reference ET at any station
 */
export async function readWeather(
  basin: BasinFile,
  passes: readonly SurveyedPass[],
  periods: readonly Period[],
  solarOffsetHours: number,
): Promise<WeatherInput> {
  const tables = await readStations(basin.weather[0].path);
  const passDates = passes.map(({ pass }) => pass.date);
  const allDates = new Set(periods.flatMap(({ from, to }) => datesBetween(from, to)));
  for (const date of passDates) for (const day of datesBetween(addDays(date, -RAIN_DAYS), date)) allDates.add(day);
  const record = stationDays(tables, [...allDates].sort(), solarOffsetHours);
  const byDate = Map.groupBy(record, (entry) => entry.date);
  requireDays(periods, byDate);

  const leftOut: LeftOut[] = [];
  const ofPass = passes.map(({ pass }) => {
    const { overpass, problems } = stationOverpass(tables, parseInstant(pass.acquired));
    const day = byDate.get(pass.date) ?? [];
    if (overpass.length > 0 && day.length > 0) return { overpass, day, ...bareSoil(basin, byDate, pass.date) };
    const reasons = problems.map((problem) => problem.message);
    if (day.length === 0) reasons.push(`no station has the whole day ${pass.date}`);
    const error = new BasinloomError('PASS_NO_WEATHER', { pass: pass.id, detail: reasons.join('; ') }).toRecord();
    leftOut.push({ kind: 'pass', id: pass.id, gap: true, error });
    return null;
  });
  const needed = new Set([...periods.flatMap(({ from, to }) => datesBetween(from, to)), ...passDates]);
  return { ofPass, days: record.filter(({ date }) => needed.has(date)), leftOut };
}

/** Rain between two dates (the first excluded), mm: mean of the stations that have it; 0 where none has. */
export function rainBetween(days: readonly StationDay[], first: string, second: string): number {
  const [from, to] = first <= second ? [first, second] : [second, first];
  const byStation = Map.groupBy(
    days.filter(({ date }) => date > from && date <= to),
    ({ station }) => station.id,
  );
  const totals = [...byStation.values()].map((entries) =>
    entries.reduce((sum, entry) => sum + (entry.precipitationMm ?? 0), 0),
  );
  return totals.length === 0 ? 0 : totals.reduce((sum, total) => sum + total, 0) / totals.length;
}

/** Mean over the stations of what the surface water balance leaves to bare soil on the date. */
function bareSoil(
  basin: BasinFile,
  byDate: ReadonlyMap<string, readonly StationDay[]>,
  date: string,
): Pick<PassWeather, 'bareSoilFraction' | 'bareSoilFrom'> {
  const record = datesBetween(addDays(date, -RAIN_DAYS), date).flatMap((day) => byDate.get(day) ?? []);
  const fractions: number[] = [];
  for (const days of Map.groupBy(record, (entry) => entry.station.id).values()) {
    // Only an unbroken record with rain gauged every day can run a balance.
    const known = days.filter(({ precipitationMm }) => precipitationMm !== undefined);
    const unbroken = known.length === days.length && daysBetween(days[0].date, date) === days.length - 1;
    if (!unbroken || days.length < LEAST_RAIN_DAYS) continue;
    fractions.push(
      bareSoilFraction(
        days.map((entry) => ({ referenceTallMm: entry.referenceTallMm, precipitationMm: entry.precipitationMm ?? 0 })),
        basin.method.bareSoil,
      ),
    );
  }
  if (fractions.length === 0) return { bareSoilFraction: 0, bareSoilFrom: 'assumed-dry' };
  return { bareSoilFraction: fractions.reduce((sum, f) => sum + f, 0) / fractions.length, bareSoilFrom: 'rain-record' };
}

function requireDays(periods: readonly Period[], byDate: ReadonlyMap<string, readonly StationDay[]>): void {
  const missing = periods.flatMap(({ from, to }) => datesBetween(from, to)).filter((date) => !byDate.get(date)?.length);
  if (missing.length === 0) return;
  const days =
    missing.length > 5 ? `${missing.slice(0, 5).join(', ')} and ${missing.length - 5} more` : missing.join(', ');
  throw new BasinloomError('WEATHER_DAYS_MISSING', { days });
}

function datesBetween(from: string, to: string): string[] {
  return Array.from({ length: daysBetween(from, to) + 1 }, (_, k) => addDays(from, k));
}
