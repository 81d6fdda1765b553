import type { Period } from '../contract/plan.ts';

/*
 * Calendar arithmetic of the proleptic Gregorian calendar on plain numbers and text: no clock, no time zone data, no
 * locale. Days are counted from 1970-01-01 = 0. The day count follows the well-known civil-from-days scheme: years
 * begin on 1 March, so that the leap day is the last day of a year.
 */
const DAYS_PER_ERA = 146097;
/** Days from 0000-03-01 to 1970-01-01. */
const EPOCH_SHIFT = 719468;
const SECONDS_PER_DAY = 86400;

const DATE = /^(\d{4})-(\d{2})-(\d{2})$/;
const INSTANT = /^(\d{4}-\d{2}-\d{2})[T ](\d{2}):(\d{2})(?::(\d{2}(?:\.\d+)?))?(?:Z|\+00:?00)?$/;

/** Whole days from 1970-01-01 to the date. @throws RangeError when the text is not a date of the calendar */
export function dayNumber(iso: string): number {
  const parts = DATE.exec(iso);
  if (!parts) throw new RangeError(`"${iso}" is not a date YYYY-MM-DD`);
  const [year, month, day] = [Number(parts[1]), Number(parts[2]), Number(parts[3])];
  if (month < 1 || month > 12 || day < 1 || day > daysInMonth(year, month)) {
    throw new RangeError(`"${iso}" is not a date of the calendar`);
  }
  return civilToDays(year, month, day);
}

/** The date of a day number, YYYY-MM-DD. */
export function isoDate(day: number): string {
  const { year, month, dayOfMonth } = daysToCivil(day);
  return `${padded(year, 4)}-${padded(month, 2)}-${padded(dayOfMonth, 2)}`;
}

/** 1 for 1 January .. 365 or 366. */
export function dayOfYear(iso: string): number {
  return dayNumber(iso) - civilToDays(Number(iso.slice(0, 4)), 1, 1) + 1;
}

export function addDays(iso: string, days: number): string {
  return isoDate(dayNumber(iso) + days);
}

/** Days from a to b: negative when b is before a. */
export function daysBetween(a: string, b: string): number {
  return dayNumber(b) - dayNumber(a);
}

/**
 * Seconds since 1970-01-01T00:00:00 UTC, fraction kept, leap seconds not counted. The text is UTC: "Z", "+00:00" or
 * no zone at all.
 *
 * @throws RangeError for any other text, other zones included
 */
export function parseInstant(iso: string): number {
  const parts = INSTANT.exec(iso);
  if (!parts) throw new RangeError(`"${iso}" is not a UTC instant YYYY-MM-DDThh:mm:ssZ`);
  const [hours, minutes, seconds] = [Number(parts[2]), Number(parts[3]), Number(parts[4] ?? 0)];
  // 24:00 would be a second name for the next day's midnight; 60 s is a leap second and allowed.
  if (hours > 23 || minutes > 59 || seconds >= 61) throw new RangeError(`"${iso}" is not a time of day`);
  return dayNumber(parts[1]) * SECONDS_PER_DAY + hours * 3600 + minutes * 60 + seconds;
}

/** YYYY-MM-DDThh:mm:ssZ, or with milliseconds when the instant is not a whole second. */
export function formatInstant(instantSeconds: number): string {
  const milliseconds = Math.round(instantSeconds * 1000);
  const day = Math.floor(milliseconds / (SECONDS_PER_DAY * 1000));
  const inDay = milliseconds - day * SECONDS_PER_DAY * 1000;
  const seconds = Math.floor(inDay / 1000);
  const [h, m, s] = [Math.floor(seconds / 3600), Math.floor(seconds / 60) % 60, seconds % 60];
  const rest = inDay % 1000;
  const fraction = rest === 0 ? '' : `.${padded(rest, 3)}`;
  return `${isoDate(day)}T${padded(h, 2)}:${padded(m, 2)}:${padded(s, 2)}${fraction}Z`;
}

/** Calendar date of an instant where the clock is `offsetHours` ahead of UTC. */
export function localSolarDate(instantSeconds: number, offsetHours: number): string {
  return isoDate(Math.floor((instantSeconds + offsetHours * 3600) / SECONDS_PER_DAY));
}

/** Whole hours that local solar time is ahead of UTC, longitude east positive. */
export function solarOffsetHours(longitudeDeg: number): number {
  // Adding 0 turns the -0 that Math.round gives just west of Greenwich into 0.
  return Math.round(longitudeDeg / 15) + 0;
}

/**
 * The accounting periods from..to (both included). Months are clipped at both ends and keep the month's name.
 *
 * @throws RangeError when `from` is after `to`
 */
export function periodsOf(from: string, to: string, step: 'month' | 'whole'): Period[] {
  if (daysBetween(from, to) < 0) throw new RangeError(`the period ${from} to ${to} ends before it begins`);
  if (step === 'whole') return [{ id: `${from}_${to}`, from, to }];
  const periods: Period[] = [];
  for (let start = from; start <= to; ) {
    const [year, month] = [Number(start.slice(0, 4)), Number(start.slice(5, 7))];
    const endOfMonth = `${start.slice(0, 8)}${padded(daysInMonth(year, month), 2)}`;
    const end = endOfMonth < to ? endOfMonth : to;
    periods.push({ id: start.slice(0, 7), from: start, to: end });
    start = addDays(endOfMonth, 1);
  }
  return periods;
}

function daysInMonth(year: number, month: number): number {
  if (month === 2) return isLeapYear(year) ? 29 : 28;
  return [4, 6, 9, 11].includes(month) ? 30 : 31;
}

function isLeapYear(year: number): boolean {
  return (year % 4 === 0 && year % 100 !== 0) || year % 400 === 0;
}

function civilToDays(year: number, month: number, dayOfMonth: number): number {
  const shifted = month <= 2 ? year - 1 : year;
  const era = Math.floor(shifted / 400);
  const yearOfEra = shifted - era * 400;
  const monthFromMarch = (month + 9) % 12;
  const dayOfShiftedYear = Math.floor((153 * monthFromMarch + 2) / 5) + dayOfMonth - 1;
  const dayOfEra = yearOfEra * 365 + Math.floor(yearOfEra / 4) - Math.floor(yearOfEra / 100) + dayOfShiftedYear;
  return era * DAYS_PER_ERA + dayOfEra - EPOCH_SHIFT;
}

function daysToCivil(day: number): { year: number; month: number; dayOfMonth: number } {
  const shifted = day + EPOCH_SHIFT;
  const era = Math.floor(shifted / DAYS_PER_ERA);
  const dayOfEra = shifted - era * DAYS_PER_ERA;
  const yearOfEra = Math.floor(
    (dayOfEra - Math.floor(dayOfEra / 1460) + Math.floor(dayOfEra / 36524) - Math.floor(dayOfEra / 146096)) / 365,
  );
  const dayOfShiftedYear = dayOfEra - (365 * yearOfEra + Math.floor(yearOfEra / 4) - Math.floor(yearOfEra / 100));
  const monthFromMarch = Math.floor((5 * dayOfShiftedYear + 2) / 153);
  const dayOfMonth = dayOfShiftedYear - Math.floor((153 * monthFromMarch + 2) / 5) + 1;
  const month = monthFromMarch < 10 ? monthFromMarch + 3 : monthFromMarch - 9;
  return { year: yearOfEra + era * 400 + (month <= 2 ? 1 : 0), month, dayOfMonth };
}

function padded(value: number, width: number): string {
  return String(value).padStart(width, '0');
}
