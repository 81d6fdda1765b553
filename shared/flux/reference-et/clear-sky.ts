/*
 * Solar radiation of the reference-ET standards (Allen et al. 1998, FAO Irrigation and Drainage Paper 56). Radiation
 * in MJ m-2 over the step (day or hour) that the extraterrestrial radiation is given for.
 */

/** Albedo of both reference surfaces. */
export const REFERENCE_ALBEDO = 0.23;

/** Radiation under a clear sky (eq. 37). @param extraterrestrial MJ m-2 over the step */
export function clearSkyRadiation(extraterrestrial: number, elevationM: number): number {
  return (0.75 + 2e-5 * elevationM) * extraterrestrial;
}

/** Radiation from the duration of bright sunshine, with the coefficients 0.25 and 0.50 (eq. 35). */
export function radiationFromSunshine(extraterrestrial: number, sunshineHours: number, daylightHours: number): number {
  return (0.25 + (0.5 * sunshineHours) / daylightHours) * extraterrestrial;
}

/**
 * Radiation from the daily temperature range (eq. 50, Hargreaves).
 *
 * @param coefficient 0.16 in the interior, 0.19 at the coast
 */
export function radiationFromTemperatureRange(
  extraterrestrial: number,
  temperatureMaxC: number,
  temperatureMinC: number,
  coefficient: number,
): number {
  return coefficient * Math.sqrt(temperatureMaxC - temperatureMinC) * extraterrestrial;
}

/** Measured over clear-sky radiation within the limits the standards give it, 0.3..1. */
export function relativeRadiation(measured: number, clearSky: number): number {
  return Math.min(1, Math.max(0.3, measured / clearSky));
}

/**
 * Cloud factor of the net longwave term, 0.05..1 (eq. 39 and its ASCE form): 1.35 Rs/Rso - 0.35.
 * The limits on the ratio make the limits of ASCE-EWRI 2005 on the factor hold by themselves.
 */
export function cloudFactor(relativeRadiationLimited: number): number {
  return 1.35 * relativeRadiationLimited - 0.35;
}

/** Net emissivity of humid air against the surface (eq. 39). */
export function netEmissivity(vapourPressureKPa: number): number {
  return 0.34 - 0.14 * Math.sqrt(vapourPressureKPa);
}
