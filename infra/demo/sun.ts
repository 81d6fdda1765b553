import { daysSince2000 } from './calendar.ts';

const RAD = Math.PI / 180;

/** Where the sun stands for the whole Earth at an instant. */
export interface Sun {
  /** rad. */
  readonly declination: number;
  /** Hour angle at Greenwich, rad, afternoon positive. */
  readonly greenwichHourAngle: number;
  /** Astronomical units. */
  readonly distance: number;
}

/**
 * Low-precision position of the Astronomical Almanac (page C5; Michalsky 1988, Solar Energy 40:227): 0.01 degree
 * from 1950 to 2050.
 *
 * @param hours UTC, from the first day of the period
 */
export function sunAt(hours: number): Sun {
  const n = daysSince2000(hours);
  const meanLongitude = 280.46 + 0.9856474 * n;
  const anomaly = (357.528 + 0.9856003 * n) * RAD;
  const longitude = (meanLongitude + 1.915 * Math.sin(anomaly) + 0.02 * Math.sin(2 * anomaly)) * RAD;
  const obliquity = (23.439 - 4e-7 * n) * RAD;
  const rightAscension = Math.atan2(Math.cos(obliquity) * Math.sin(longitude), Math.cos(longitude));
  const siderealHours = 18.697374558 + 24.06570982441908 * n;
  const angle = siderealHours * 15 * RAD - rightAscension;
  return {
    declination: Math.asin(Math.sin(obliquity) * Math.sin(longitude)),
    greenwichHourAngle: angle - 2 * Math.PI * Math.round(angle / (2 * Math.PI)),
    distance: 1.00014 - 0.01671 * Math.cos(anomaly) - 0.00014 * Math.cos(2 * anomaly),
  };
}

/** Cosine of the sun's zenith angle; negative below the horizon. Degrees. */
export function cosZenith(sun: Sun, longitude: number, latitude: number): number {
  const phi = latitude * RAD;
  const hourAngle = sun.greenwichHourAngle + longitude * RAD;
  return Math.sin(phi) * Math.sin(sun.declination) + Math.cos(phi) * Math.cos(sun.declination) * Math.cos(hourAngle);
}

/** Elevation and azimuth (clockwise from north) of the sun, degrees. */
export function sunAngles(sun: Sun, longitude: number, latitude: number): { elevation: number; azimuth: number } {
  const phi = latitude * RAD;
  const hourAngle = sun.greenwichHourAngle + longitude * RAD;
  const east = -Math.cos(sun.declination) * Math.sin(hourAngle);
  const north =
    Math.cos(phi) * Math.sin(sun.declination) - Math.sin(phi) * Math.cos(sun.declination) * Math.cos(hourAngle);
  return {
    elevation: Math.asin(cosZenith(sun, longitude, latitude)) / RAD,
    azimuth: (Math.atan2(east, north) / RAD + 360) % 360,
  };
}

/**
 * Sun on a slope for each unit of horizontal area, in three terms: level + south * (rise toward the north) + west *
 * (rise toward the east). This is the cosine of the incidence angle of Duffie & Beckman 1991 (Solar Engineering of
 * Thermal Processes, eq. 1.6.2) over the cosine of the slope s, where tan s cos g is the rise toward the north and
 * tan s sin g the rise toward the east for an aspect g from south, west positive.
 */
export function sunTerms(
  declination: number,
  hourAngle: number,
  latitude: number,
): { level: number; south: number; west: number } {
  const [sinD, cosD] = [Math.sin(declination), Math.cos(declination)];
  const [sinL, cosL] = [Math.sin(latitude), Math.cos(latitude)];
  const cosW = Math.cos(hourAngle);
  return {
    level: sinD * sinL + cosD * cosL * cosW,
    south: cosD * sinL * cosW - sinD * cosL,
    west: cosD * Math.sin(hourAngle),
  };
}

/**
 * Radiation of a clear day outside the atmosphere on a slope over that on level ground, per horizontal area. On a
 * slope the sun gives A + B cos w + C sin w; the integral is taken between the hour angles at which both the horizon
 * and the slope let it through.
 */
export function slopeDayRatio(
  declination: number,
  sinLatitude: number,
  cosLatitude: number,
  slopeEast: number,
  slopeNorth: number,
): number {
  const sinD = Math.sin(declination);
  const cosD = Math.cos(declination);
  const up = sinD * sinLatitude;
  const across = cosD * cosLatitude;
  const sunset = Math.acos(Math.min(1, Math.max(-1, -up / across)));
  const level = 2 * (up * sunset + across * Math.sin(sunset));
  const a = up - sinD * cosLatitude * slopeNorth;
  const b = across + cosD * sinLatitude * slopeNorth;
  const c = cosD * slopeEast;
  const reach = -a / Math.hypot(b, c);
  const noon = Math.atan2(c, b);
  const half = reach <= -1 ? Math.PI : reach >= 1 ? 0 : Math.acos(reach);
  const from = Math.max(-sunset, noon - half);
  const to = Math.min(sunset, noon + half);
  if (to <= from) return 0;
  const sum = a * (to - from) + b * (Math.sin(to) - Math.sin(from)) - c * (Math.cos(to) - Math.cos(from));
  return sum / level;
}
