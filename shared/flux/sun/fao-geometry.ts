/*
 * Solar geometry of the reference-ET standards: Allen, Pereira, Raes & Smith 1998 (FAO Irrigation and Drainage
 * Paper 56), eqs 21-34; ASCE-EWRI 2005 uses the same. Coarser than sun-position.ts (up to 0.4 degree), but the
 * published reference ET is defined with it.
 */

/** MJ m-2 min-1. */
const SOLAR_CONSTANT_PER_MINUTE = 0.082;
const TURN = 2 * Math.PI;

/** Inverse relative distance earth-sun, squared: 1/d^2 (eq. 23). */
export function inverseSquaredDistance(dayOfYear: number): number {
  return 1 + 0.033 * Math.cos((TURN * dayOfYear) / 365);
}

/** Declination, rad (eq. 24). */
export function solarDeclination(dayOfYear: number): number {
  return 0.409 * Math.sin((TURN * dayOfYear) / 365 - 1.39);
}

/** Hour angle of sunset, rad (eq. 25): pi in the polar day, 0 in the polar night. */
export function sunsetHourAngle(latitudeRad: number, declination: number): number {
  const cosine = -Math.tan(latitudeRad) * Math.tan(declination);
  return Math.acos(Math.min(1, Math.max(-1, cosine)));
}

/** Daylight hours N (eq. 34). */
export function daylightHours(latitudeRad: number, dayOfYear: number): number {
  return (24 / Math.PI) * sunsetHourAngle(latitudeRad, solarDeclination(dayOfYear));
}

/** Seasonal correction for solar time, h (eqs 32-33). */
export function seasonalCorrectionHours(dayOfYear: number): number {
  const b = (TURN * (dayOfYear - 81)) / 364;
  return 0.1645 * Math.sin(2 * b) - 0.1255 * Math.cos(b) - 0.025 * Math.sin(b);
}

/**
 * Solar hour angle of a clock time, rad (eq. 31), not folded into one turn.
 *
 * @param clockHours standard clock time, h
 * @param zoneLongitudeDegWest centre of the time zone, degrees WEST of Greenwich as in the paper
 * @param longitudeDegWest the place, degrees WEST of Greenwich
 */
export function solarTimeAngle(
  clockHours: number,
  zoneLongitudeDegWest: number,
  longitudeDegWest: number,
  dayOfYear: number,
): number {
  const toMeridian = 0.06667 * (zoneLongitudeDegWest - longitudeDegWest);
  return (Math.PI / 12) * (clockHours + toMeridian + seasonalCorrectionHours(dayOfYear) - 12);
}

/** Height of the sun above the horizon, rad. */
export function solarElevation(latitudeRad: number, dayOfYear: number, hourAngle: number): number {
  const declination = solarDeclination(dayOfYear);
  const sine =
    Math.sin(latitudeRad) * Math.sin(declination) + Math.cos(latitudeRad) * Math.cos(declination) * Math.cos(hourAngle);
  return Math.asin(Math.min(1, Math.max(-1, sine)));
}

/** Extraterrestrial radiation of the day on the horizontal, MJ m-2 d-1 (eq. 21). 0 in the polar night. */
export function extraterrestrialDaily(latitudeRad: number, dayOfYear: number): number {
  const sunset = sunsetHourAngle(latitudeRad, solarDeclination(dayOfYear));
  return radiationBetween(latitudeRad, dayOfYear, -sunset, sunset);
}

/**
 * Extraterrestrial radiation between two solar hour angles, MJ m-2 (eq. 28), the part of the interval with the sun
 * below the horizon left out. Intervals across midnight are allowed.
 *
 * @param startAngle rad, negative before noon
 * @param endAngle rad, not before startAngle
 */
export function extraterrestrialInterval(
  latitudeRad: number,
  dayOfYear: number,
  startAngle: number,
  endAngle: number,
): number {
  const sunset = sunsetHourAngle(latitudeRad, solarDeclination(dayOfYear));
  let total = 0;
  // Yesterday's, today's and tomorrow's daylight: near a midnight sun an hour may touch two of them.
  for (const noon of [-TURN, 0, TURN]) {
    const rise = Math.max(startAngle, noon - sunset);
    const set = Math.min(endAngle, noon + sunset);
    if (set > rise) total += radiationBetween(latitudeRad, dayOfYear, rise, set);
  }
  return total;
}

function radiationBetween(latitudeRad: number, dayOfYear: number, startAngle: number, endAngle: number): number {
  const declination = solarDeclination(dayOfYear);
  const along = (endAngle - startAngle) * Math.sin(latitudeRad) * Math.sin(declination);
  const across = Math.cos(latitudeRad) * Math.cos(declination) * (Math.sin(endAngle) - Math.sin(startAngle));
  const minutesPerRadian = (12 * 60) / Math.PI;
  return minutesPerRadian * SOLAR_CONSTANT_PER_MINUTE * inverseSquaredDistance(dayOfYear) * (along + across);
}
