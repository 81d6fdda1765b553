import { BasinloomError } from '../contract/errors.ts';
import type { StationRecord } from '../contract/weather.ts';
import { extraterrestrialDaily } from '../flux/sun/fao-geometry.ts';
import { dayOfYear, solarOffsetHours } from '../time/calendar.ts';
import { hourGeometry, middleOf } from './station-hour.ts';
import type { StationHour } from './station-table.ts';

/*
 * Two slips that spoil every later number and that no single value shows: radiation in another unit, and hours in
 * local time. The sun knows better in both cases.
 */

const RADIANS = Math.PI / 180;
/** Room for the rounding of the geometry and for days that are nearly dark, MJ m-2 d-1. */
const DAILY_TOLERANCE = 1;
/** Fewer whole days than this may have their clouds in one half of the day by chance. */
const LEAST_DAYS = 10;
/** Clouds that prefer a time of day move the centre of the radiation by less than this, h (common practice, no source). */
const LARGEST_SHIFT_HOURS = 1.5;

/**
 * No day brings more radiation to the ground than to the top of the atmosphere (FAO-56 eq. 21).
 *
 * @returns what is wrong with the value, in words; undefined for a sound or missing one
 */
export function dailyRadiationFault(station: StationRecord, date: string, solarMJ: number): string | undefined {
  const limit = extraterrestrialDaily(station.latitudeDeg * RADIANS, dayOfYear(date));
  if (Number.isNaN(solarMJ) || solarMJ <= limit + DAILY_TOLERANCE) return undefined;
  return `${solarMJ} is more than the sun gives above the atmosphere on ${date} (${limit.toFixed(1)}); the unit is MJ m-2 a day`;
}

/**
 * Over many whole days the radiation is centred on solar noon; that of hours given in local time is not. Records with
 * fewer than 10 whole days are not judged.
 *
 * @throws BasinloomError WEATHER_FILE when the centre lies more than 1.5 h from noon
 */
export function checkClock(file: string, station: StationRecord, hours: ReadonlyMap<number, StationHour>): void {
  const whole = wholeDays(station, hours);
  if (whole.length < LEAST_DAYS) return;
  let west = 0;
  let up = 0;
  for (const hour of whole.flat()) {
    const { hourAngle } = hourGeometry(station, middleOf(hour));
    west += hour.solarMJ * Math.sin(hourAngle);
    up += hour.solarMJ * Math.cos(hourAngle);
  }
  const shift = (Math.atan2(west, up) * 12) / Math.PI;
  if (Math.abs(shift) <= LARGEST_SHIFT_HOURS) return;
  const side = shift > 0 ? 'after' : 'before';
  const detail =
    `time_utc: the radiation of ${whole.length} whole days is centred ${Math.abs(shift).toFixed(1)} h ${side} ` +
    `solar noon at longitude ${station.longitudeDeg}; times are UTC`;
  throw new BasinloomError('WEATHER_FILE', { file, line: whole[0][0].line, detail });
}

/** Local solar days with radiation in all 24 hours. */
function wholeDays(station: StationRecord, hours: ReadonlyMap<number, StationHour>): StationHour[][] {
  const offset = solarOffsetHours(station.longitudeDeg);
  const known = [...hours].filter(([, hour]) => !Number.isNaN(hour.solarMJ));
  const byDay = Map.groupBy(known, ([number]) => Math.floor((number + offset) / 24));
  return [...byDay.values()].filter((day) => day.length === 24).map((day) => day.map(([, hour]) => hour));
}
