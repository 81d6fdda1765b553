import { existsSync, readFileSync } from 'node:fs';
import { parse } from 'csv-parse/sync';
import { describe, expect, test } from 'vitest';
import type { StationRecord } from '../../shared/contract/weather.ts';
import { saturationVapourPressure } from '../../shared/flux/reference-et/psychrometrics.ts';
import { addDays, localSolarDate, parseInstant } from '../../shared/time/calendar.ts';
import { stationDays } from '../../shared/weather/days.ts';
import type { StationDaily, StationHour } from '../../shared/weather/station-table.ts';

// Puechabon (FR-Pue), 2014, FLUXNET2015 (CC-BY-4.0): half hours in local standard time, UTC+1.
const file = new URL('../../../shared/data/flux/FR_Pue_2014_fluxnet2015_HH.csv', import.meta.url);
const STATION: StationRecord = {
  id: 'FR-Pue',
  longitudeDeg: 3.5957,
  latitudeDeg: 43.7413,
  elevationM: 270,
  windHeightM: 10,
};
const OFFSET = 0;

interface HalfHour {
  readonly start: number;
  readonly temperature: number;
  readonly vapour: number;
  readonly wind: number;
  readonly solar: number;
}

function halfHours(): HalfHour[] {
  const rows: Record<string, string>[] = parse(readFileSync(file), { columns: true });
  return rows.map((row) => {
    const t = row.TIMESTAMP_START;
    const local = `${t.slice(0, 4)}-${t.slice(4, 6)}-${t.slice(6, 8)}T${t.slice(8, 10)}:${t.slice(10, 12)}:00Z`;
    const temperature = Number(row.TA_F);
    return {
      start: parseInstant(local) - 3600,
      temperature,
      vapour: Math.max(0.02, saturationVapourPressure(temperature) - Number(row.VPD_F) / 10),
      wind: Number(row.WS_F),
      solar: Number(row.SW_IN_F),
    };
  });
}

const mean = (values: readonly number[]) => values.reduce((sum, value) => sum + value, 0) / values.length;

function hoursOf(record: readonly HalfHour[]): Map<number, StationHour> {
  const hours = new Map<number, StationHour>();
  for (const [number, pair] of Map.groupBy(record, ({ start }) => Math.floor(start / 3600))) {
    if (pair.length < 2) continue;
    hours.set(number, {
      line: 1,
      start: number * 3600,
      temperatureC: mean(pair.map(({ temperature }) => temperature)),
      vapourPressureKPa: mean(pair.map(({ vapour }) => vapour)),
      windSpeed: mean(pair.map(({ wind }) => wind)),
      solarMJ: mean(pair.map(({ solar }) => solar)) * 0.0036,
      precipitationMm: 0,
    });
  }
  return hours;
}

function daysOf(record: readonly HalfHour[]): Map<string, StationDaily> {
  const days = new Map<string, StationDaily>();
  for (const [date, day] of Map.groupBy(record, ({ start }) => localSolarDate(start, OFFSET))) {
    days.set(date, {
      date,
      temperatureMaxC: Math.max(...day.map(({ temperature }) => temperature)),
      temperatureMinC: Math.min(...day.map(({ temperature }) => temperature)),
      vapourPressureKPa: mean(day.map(({ vapour }) => vapour)),
      windSpeed: mean(day.map(({ wind }) => wind)),
      solarMJ: mean(day.map(({ solar }) => solar)) * 0.0864,
      precipitationMm: 0,
    });
  }
  return days;
}

// Common practice, no source at hand: over a growing season the 24 hourly values and the daily equation of the ASCE
// standard agree within some per cent; the two halves of the standard were fitted to do so.
describe.skipIf(!existsSync(file))('a real season, hour by hour and day by day', () => {
  test('April to September: totals within 7 per cent, days correlate', () => {
    const record = halfHours();
    const dates = Array.from({ length: 183 }, (_, k) => addDays('2014-04-01', k));
    const table = (part: { hours?: Map<number, StationHour>; days?: Map<string, StationDaily> }) => ({
      file: 'stations.csv',
      stations: [{ station: STATION, roughnessLengthM: 0.03, hours: new Map(), days: new Map(), ...part }],
    });
    const hourly = stationDays(table({ hours: hoursOf(record) }), dates, OFFSET);
    const daily = stationDays(table({ days: daysOf(record) }), dates, OFFSET);
    expect(hourly).toHaveLength(dates.length);
    expect(daily).toHaveLength(dates.length);
    for (const surface of ['referenceTallMm', 'referenceShortMm'] as const) {
      const [a, b] = [hourly, daily].map((days) => days.map((day) => day[surface]));
      const ratio = mean(a) / mean(b);
      expect(Math.abs(ratio - 1), `${surface}: ${ratio}`).toBeLessThan(0.07);
      const [ma, mb] = [mean(a), mean(b)];
      const covariance = mean(a.map((value, k) => (value - ma) * (b[k] - mb)));
      const spread = Math.sqrt(mean(a.map((value) => (value - ma) ** 2)) * mean(b.map((value) => (value - mb) ** 2)));
      expect(covariance / spread).toBeGreaterThan(0.95);
    }
    const clearness = hourly.map(({ transmissivity }) => transmissivity);
    // A clear day lets about three quarters through (FAO-56 eq. 37), an overcast one about a quarter (eq. 35).
    expect(Math.max(...clearness)).toBeLessThan(0.82);
    expect(Math.max(...clearness)).toBeGreaterThan(0.7);
    expect(Math.min(...clearness)).toBeLessThan(0.3);
  });
});
