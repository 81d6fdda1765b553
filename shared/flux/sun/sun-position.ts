/**
 * Position of the sun by the low-precision formulas of the Astronomical Almanac, as set out by Michalsky (1988, Solar
 * Energy 40:227-235): 0.01 degree from 1950 to 2050. All angles in radians.
 */
export interface SunPosition {
  readonly declination: number;
  /** Local hour angle, -pi..pi: 0 when the sun is in the meridian, negative in the morning. */
  readonly hourAngle: number;
  /** Earth-sun distance, astronomical units. */
  readonly distanceAu: number;
  /** True minus mean solar time, minutes. */
  readonly equationOfTimeMinutes: number;
  /** Height of the sun's centre above the horizon, without refraction. */
  readonly elevation: number;
  /** From north, clockwise (eastward), 0..2 pi. */
  readonly azimuth: number;
}

/** Unit vector toward the sun in the local frame (true east, true north, up), without refraction. */
export interface SunVector {
  readonly east: number;
  readonly north: number;
  readonly up: number;
}

const RADIANS = Math.PI / 180;
const TURN = 2 * Math.PI;
const SECONDS_PER_DAY = 86400;
/** 2000-01-01T12:00:00 UTC in seconds since 1970. */
const J2000 = 946728000;

/**
 * @param longitudeRad east positive
 * @param instantSeconds seconds since 1970-01-01T00:00:00 UTC
 */
export function sunPosition(latitudeRad: number, longitudeRad: number, instantSeconds: number): SunPosition {
  const { declination, distanceAu, rightAscension, meanLongitude, siderealTime } = celestialSun(instantSeconds);
  const hourAngle = nearestTurn(siderealTime + longitudeRad - rightAscension);
  const { east, north, up } = localVector(latitudeRad, declination, hourAngle);
  return {
    declination,
    hourAngle,
    distanceAu,
    equationOfTimeMinutes: (nearestTurn(meanLongitude - rightAscension) * 1440) / TURN,
    elevation: Math.asin(Math.min(1, Math.max(-1, up))),
    azimuth: wholeTurn(Math.atan2(east, north)),
  };
}

/** The same as a vector; `up` is the cosine of the zenith angle. Parameters as for `sunPosition`. */
export function sunVector(latitudeRad: number, longitudeRad: number, instantSeconds: number): SunVector {
  const { declination, rightAscension, siderealTime } = celestialSun(instantSeconds);
  return localVector(latitudeRad, declination, siderealTime + longitudeRad - rightAscension);
}

/** Spherical triangle of pole, zenith and sun, as components. */
export function localVector(latitudeRad: number, declination: number, hourAngle: number): SunVector {
  const sinLatitude = Math.sin(latitudeRad);
  const cosLatitude = Math.cos(latitudeRad);
  const sinDeclination = Math.sin(declination);
  const cosDeclination = Math.cos(declination);
  const toMeridian = cosDeclination * Math.cos(hourAngle);
  return {
    east: -cosDeclination * Math.sin(hourAngle),
    north: cosLatitude * sinDeclination - sinLatitude * toMeridian,
    up: sinLatitude * sinDeclination + cosLatitude * toMeridian,
  };
}

/** What does not depend on the place. */
function celestialSun(instantSeconds: number) {
  const days = (instantSeconds - J2000) / SECONDS_PER_DAY;
  const meanLongitude = (280.46 + 0.9856474 * days) * RADIANS;
  const meanAnomaly = (357.528 + 0.9856003 * days) * RADIANS;
  const eclipticLongitude =
    meanLongitude + (1.915 * Math.sin(meanAnomaly) + 0.02 * Math.sin(2 * meanAnomaly)) * RADIANS;
  const obliquity = (23.439 - 4e-7 * days) * RADIANS;
  const sinEcliptic = Math.sin(eclipticLongitude);
  return {
    meanLongitude,
    declination: Math.asin(Math.sin(obliquity) * sinEcliptic),
    rightAscension: Math.atan2(Math.cos(obliquity) * sinEcliptic, Math.cos(eclipticLongitude)),
    distanceAu: 1.00014 - 0.01671 * Math.cos(meanAnomaly) - 0.00014 * Math.cos(2 * meanAnomaly),
    // 18.697374558 h of sidereal time at 2000-01-01T12:00 UT, 24.06570982441908 h a day.
    siderealTime: wholeTurn(((18.697374558 + 24.06570982441908 * days) / 24) * TURN),
  };
}

function wholeTurn(angle: number): number {
  return angle - TURN * Math.floor(angle / TURN);
}

function nearestTurn(angle: number): number {
  return angle - TURN * Math.round(angle / TURN);
}
