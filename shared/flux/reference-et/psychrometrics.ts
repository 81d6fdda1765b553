/*
 * Humidity, pressure-dependent constants and wind of the reference-ET standards: Allen, Pereira, Raes & Smith 1998
 * (FAO Irrigation and Drainage Paper 56). Temperatures in degrees Celsius, pressures in kPa. Air pressure itself
 * (eq. 7) stands in ../radiation.ts.
 */

/** Saturation vapour pressure over water, kPa (eq. 11). */
export function saturationVapourPressure(temperatureC: number): number {
  return 0.6108 * Math.exp((17.27 * temperatureC) / (temperatureC + 237.3));
}

/** Mean saturation vapour pressure of a day, kPa (eq. 12): never that of the mean temperature, which is lower. */
export function meanSaturationVapourPressure(temperatureMaxC: number, temperatureMinC: number): number {
  return (saturationVapourPressure(temperatureMaxC) + saturationVapourPressure(temperatureMinC)) / 2;
}

/** Slope of the saturation curve, kPa/K (eq. 13). */
export function saturationSlope(temperatureC: number): number {
  return (4098 * saturationVapourPressure(temperatureC)) / (temperatureC + 237.3) ** 2;
}

/** Psychrometric constant, kPa/K (eq. 8). */
export function psychrometricConstant(pressureKPa: number): number {
  return 0.665e-3 * pressureKPa;
}

/** Vapour pressure from the dew point, kPa (eq. 14). */
export function vapourPressureFromDewPoint(dewPointC: number): number {
  return saturationVapourPressure(dewPointC);
}

/**
 * Vapour pressure from a psychrometer, kPa (eqs 15-16).
 *
 * @param coefficient per K: 0.000662 ventilated (5 m/s), 0.0008 naturally ventilated, 0.0012 indoors
 */
export function vapourPressureFromWetBulb(
  dryC: number,
  wetC: number,
  pressureKPa: number,
  coefficient: number,
): number {
  return saturationVapourPressure(wetC) - coefficient * pressureKPa * (dryC - wetC);
}

/** Vapour pressure of an instant or an hour from its relative humidity, kPa. */
export function vapourPressureFromHumidity(temperatureC: number, relativeHumidityPct: number): number {
  return (saturationVapourPressure(temperatureC) * relativeHumidityPct) / 100;
}

/** Vapour pressure of a day from its humidity extremes, kPa (eq. 17): the wettest hour is the coldest. */
export function vapourPressureFromHumidityRange(
  temperatureMaxC: number,
  temperatureMinC: number,
  relativeHumidityMaxPct: number,
  relativeHumidityMinPct: number,
): number {
  const cold = vapourPressureFromHumidity(temperatureMinC, relativeHumidityMaxPct);
  const warm = vapourPressureFromHumidity(temperatureMaxC, relativeHumidityMinPct);
  return (cold + warm) / 2;
}

/** Vapour pressure of a day from its mean humidity alone, kPa (eq. 19). */
export function vapourPressureFromMeanHumidity(
  temperatureMaxC: number,
  temperatureMinC: number,
  relativeHumidityPct: number,
): number {
  return (meanSaturationVapourPressure(temperatureMaxC, temperatureMinC) * relativeHumidityPct) / 100;
}

/** Wind speed at 2 m over clipped grass from that at another height, m/s (eq. 47). @param heightM above 0.1 m */
export function windAtTwoMetres(windSpeed: number, heightM: number): number {
  return (windSpeed * 4.87) / Math.log(67.8 * heightM - 5.42);
}
