import { SOLAR_CONSTANT, STEFAN_BOLTZMANN } from './constants.ts';

/** Mean air pressure at an elevation, kPa (FAO-56 eq. 7). */
export function airPressure(elevationM: number): number {
  return 101.3 * ((293 - 0.0065 * elevationM) / 293) ** 5.26;
}

/** Water in the air column, mm: 0.14 ea P + 2.1 (Garrison & Adler 1990, as in ASCE 2005 appendix D). kPa. */
export function precipitableWater(vapourPressureKPa: number, pressureKPa: number): number {
  return 0.14 * vapourPressureKPa * pressureKPa + 2.1;
}

/**
 * Clear-sky broadband transmissivity (ASCE 2005 appendix D; Allen et al. 2007 eq. 4).
 *
 * @param cosZenith of the horizontal, also on slopes
 * @param turbidity Kt: 1 clean air, 0.5 very turbid
 */
export function transmissivity(pressureKPa: number, waterMm: number, cosZenith: number, turbidity: number): number {
  const gases = (0.00146 * pressureKPa) / (turbidity * cosZenith);
  return 0.35 + 0.627 * Math.exp(-gases - 0.075 * (waterMm / cosZenith) ** 0.4);
}

/**
 * Sun on a slope for each unit of horizontal area: incidence over the cosine of the slope, 0 when the sun is behind
 * it. The upward normal of z(x, y) is (-dz/dx, -dz/dy, 1).
 */
export function sunOnSlope(
  sunEast: number,
  sunNorth: number,
  sunUp: number,
  slopeEast: number,
  slopeNorth: number,
): number {
  return Math.max(0, sunUp - slopeEast * sunEast - slopeNorth * sunNorth);
}

/** Shortwave radiation on the surface, W m-2 of horizontal area. @param inverseSquaredDistance 1/d^2, d in AU */
export function incomingShortwave(onSlope: number, tau: number, inverseSquaredDistance: number): number {
  return SOLAR_CONSTANT * inverseSquaredDistance * tau * onSlope;
}

/**
 * Downwelling longwave radiation of the clear sky, W m-2: 0.85 (-ln tau)^0.09 sigma T^4 (Allen 2000 data; Allen et
 * al. 2007 eqs 24-25).
 */
export function incomingLongwave(tau: number, temperatureK: number): number {
  return 0.85 * (-Math.log(tau)) ** 0.09 * STEFAN_BOLTZMANN * temperatureK ** 4;
}

/** Net radiation, W m-2, down positive. */
export function netRadiation(
  albedo: number,
  shortwave: number,
  longwave: number,
  emissivity: number,
  surfaceK: number,
): number {
  return (1 - albedo) * shortwave + emissivity * (longwave - STEFAN_BOLTZMANN * surfaceK ** 4);
}

/** Hour angles at which the day's sun is sampled. */
export const DAY_SAMPLES = 48;
const DAY_STEP = (2 * Math.PI) / DAY_SAMPLES;

/** Middle of a step of the day, rad; never 0 or pi. */
export function sampleHourAngle(k: number): number {
  return -Math.PI + (k + 0.5) * DAY_STEP;
}

/**
 * How fast the sun passes the horizon within a step: (tan d tan lat + cos w) times this, plus a half, is the share of the
 * step with the sun up, as far as it moves in a straight line there.
 */
export function sampleSteepness(hourAngle: number): number {
  return 1 / (Math.abs(Math.sin(hourAngle)) * DAY_STEP);
}

/**
 * Radiation of the day on a slope over that on the horizontal, for each unit of horizontal area, clear sky and no
 * horizon: the sum over equally spaced hour angles w of max(0, A + B cos w + C sin w) while the sun is up, the steps of
 * sunrise and sunset by their share with the sun up (Allen, Trezza & Tasumi 2006, Agric. For. Meteorol. 139:55-73, eqs
 * 2-5, here summed instead of integrated).
 */
export function slopeDayFactor(
  slopeEast: number,
  slopeNorth: number,
  sinLatitude: number,
  cosLatitude: number,
  declination: number,
): number {
  const sinD = Math.sin(declination);
  const cosD = Math.cos(declination);
  const up = sinD * sinLatitude;
  const upCos = cosD * cosLatitude;
  // Components of the sun: up = up + upCos cos w; north = sinD cosLat - cosD sinLat cos w; east = -cosD sin w.
  const a = up - slopeNorth * sinD * cosLatitude;
  const b = upCos + slopeNorth * cosD * sinLatitude;
  const c = slopeEast * cosD;
  const tangents = up / upCos;
  let onSlope = 0;
  let onLevel = 0;
  // Morning and afternoon mirror each other but for the east-west part of the slope.
  for (let k = 0; k < DAY_SAMPLES / 2; k++) {
    const w = sampleHourAngle(k);
    const [cosine, sine] = [Math.cos(w), Math.sin(w)];
    const day = Math.min(1, Math.max(0, 0.5 + (tangents + cosine) * sampleSteepness(w)));
    const noonward = a + b * cosine;
    onLevel += day * Math.max(0, up + upCos * cosine);
    onSlope += day * (Math.max(0, noonward + c * sine) + Math.max(0, noonward - c * sine));
  }
  return onLevel > 0 ? onSlope / (2 * onLevel) : 1;
}
