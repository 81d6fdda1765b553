import { existsSync, readFileSync } from 'node:fs';
import { parse } from 'csv-parse/sync';
import { describe, expect, test } from 'vitest';
import { parseInstant } from '../../shared/time/calendar.ts';
import { checkClock } from '../../shared/weather/solar-check.ts';
import type { StationHour } from '../../shared/weather/station-table.ts';

// Puechabon (FR-Pue), 2014, FLUXNET2015 (CC-BY-4.0): half hours in local standard time, UTC+1.
const file = new URL('../../../shared/data/flux/FR_Pue_2014_fluxnet2015_HH.csv', import.meta.url);
const STATION = { id: 'FR-Pue', longitudeDeg: 3.5957, latitudeDeg: 43.7413, elevationM: 270, windHeightM: 10 };

/** Hours of radiation of the year; `clockHours` is what the times are moved by. */
function hoursOf(clockHours: number): StationHour[] {
  const rows: Record<string, string>[] = parse(readFileSync(file), { columns: true });
  const sums = new Map<number, number[]>();
  for (const { TIMESTAMP_START: t, SW_IN_F } of rows) {
    const utc = parseInstant(`${t.slice(0, 4)}-${t.slice(4, 6)}-${t.slice(6, 8)}T${t.slice(8, 10)}:00:00Z`) / 3600 - 1;
    const halves = sums.get(utc + clockHours) ?? [];
    sums.set(utc + clockHours, [...halves, Number(SW_IN_F) * 0.0018]);
  }
  const blank = { line: 2, temperatureC: 20, vapourPressureKPa: 1, windSpeed: 2, precipitationMm: 0 };
  return [...sums]
    .filter(([, halves]) => halves.length === 2)
    .map(([number, [a, b]]) => ({ ...blank, start: number * 3600, solarMJ: a + b }));
}

const check = (hours: readonly StationHour[]) => () =>
  checkClock('hourly.csv', STATION, new Map(hours.map((hour) => [hour.start / 3600, hour])));

// Common practice, no source: that radiation is centred on solar noon but for clouds. Measured radiation decides here
// how far clouds can move it.
describe.skipIf(!existsSync(file))('the clock of a real year of radiation', () => {
  test('no twelve days of the year are taken for another clock', () => {
    const hours = hoursOf(0);
    for (let first = 0; first + 12 * 24 <= hours.length; first += 3 * 24) {
      expect(check(hours.slice(first, first + 12 * 24))).not.toThrow();
    }
  });

  test('summer time of central Europe, two hours ahead of UTC, is found', () => {
    expect(check(hoursOf(2))).toThrow(/after solar noon/);
  });
});
