import { airPressure } from '../radiation.ts';
import { clearSkyRadiation, cloudFactor, netEmissivity, REFERENCE_ALBEDO, relativeRadiation } from './clear-sky.ts';
import {
  meanSaturationVapourPressure,
  psychrometricConstant,
  saturationSlope,
  saturationVapourPressure,
} from './psychrometrics.ts';

/*
 * The FAO Penman-Monteith equation for clipped grass (Allen, Pereira, Raes & Smith 1998, FAO Irrigation and Drainage
 * Paper 56). The daily pipeline uses the ASCE form; this one serves comparison with records that were made with it.
 */

/** Stefan-Boltzmann constant, MJ K-4 m-2 d-1 and h-1. */
const SIGMA_DAY = 4.903e-9;
const SIGMA_HOUR = 2.043e-10;
const KELVIN = 273.16;

export interface FaoDay {
  readonly temperatureMaxC: number;
  readonly temperatureMinC: number;
  readonly vapourPressureKPa: number;
  readonly wind2m: number;
  readonly solarMJ: number;
  /** Extraterrestrial radiation of the day, MJ m-2 d-1. */
  readonly extraterrestrialMJ: number;
  readonly elevationM: number;
  /** MJ m-2 d-1; 0 over a day. */
  readonly soilHeatMJ?: number;
  /** Ratio to clear-sky radiation, where it is known otherwise. */
  readonly relativeRadiation?: number;
}

export interface FaoHour {
  readonly temperatureC: number;
  readonly vapourPressureKPa: number;
  readonly wind2m: number;
  readonly solarMJ: number;
  /** Extraterrestrial radiation of the hour, MJ m-2 h-1; 0 at night. */
  readonly extraterrestrialMJ: number;
  readonly elevationM: number;
  /** Ratio to clear-sky radiation two to three hours before sunset, taken at night. */
  readonly nightRelativeRadiation: number;
}

/** Net longwave radiation of a day, upward, MJ m-2 d-1 (eq. 39). @param ratio Rs/Rso, limited to 0.3..1 */
export function faoNetLongwave(
  temperatureMaxC: number,
  temperatureMinC: number,
  vapourPressureKPa: number,
  ratio: number,
): number {
  const emission = ((temperatureMaxC + KELVIN) ** 4 + (temperatureMinC + KELVIN) ** 4) / 2;
  return SIGMA_DAY * emission * netEmissivity(vapourPressureKPa) * cloudFactor(ratio);
}

/** Net radiation of a day, MJ m-2 d-1 (eqs 38-40). */
export function faoDailyNetRadiation(day: FaoDay): number {
  const clear = clearSkyRadiation(day.extraterrestrialMJ, day.elevationM);
  const ratio = day.relativeRadiation ?? (clear > 0 ? relativeRadiation(day.solarMJ, clear) : 0.3);
  const longwave = faoNetLongwave(day.temperatureMaxC, day.temperatureMinC, day.vapourPressureKPa, ratio);
  return (1 - REFERENCE_ALBEDO) * day.solarMJ - longwave;
}

/** Reference ET of a day, mm/d (eq. 6). */
export function faoDailyReferenceEt(day: FaoDay): number {
  const mean = (day.temperatureMaxC + day.temperatureMinC) / 2;
  const deficit = meanSaturationVapourPressure(day.temperatureMaxC, day.temperatureMinC) - day.vapourPressureKPa;
  return penmanMonteith(day, mean, deficit, faoDailyNetRadiation(day) - (day.soilHeatMJ ?? 0), 900);
}

/** Net radiation of an hour, MJ m-2 h-1. */
export function faoHourlyNetRadiation(hour: FaoHour): number {
  const clear = clearSkyRadiation(hour.extraterrestrialMJ, hour.elevationM);
  const ratio = clear > 0 ? relativeRadiation(hour.solarMJ, clear) : hour.nightRelativeRadiation;
  const emission = SIGMA_HOUR * (hour.temperatureC + KELVIN) ** 4;
  return (1 - REFERENCE_ALBEDO) * hour.solarMJ - emission * netEmissivity(hour.vapourPressureKPa) * cloudFactor(ratio);
}

/** Reference ET of an hour, mm/h (eq. 53); soil heat a tenth of net radiation by day, half by night (eqs 45-46). */
export function faoHourlyReferenceEt(hour: FaoHour): number {
  const net = faoHourlyNetRadiation(hour);
  const available = net * (net > 0 ? 0.9 : 0.5);
  const deficit = saturationVapourPressure(hour.temperatureC) - hour.vapourPressureKPa;
  return penmanMonteith(hour, hour.temperatureC, deficit, available, 37);
}

/** Soil heat of a month from the months around it, MJ m-2 d-1 (eq. 43). */
export function monthlySoilHeat(previousMonthC: number, nextMonthC: number): number {
  return 0.07 * (nextMonthC - previousMonthC);
}

/** Soil heat of a month from the month before, MJ m-2 d-1 (eq. 44). */
export function monthlySoilHeatFromPrevious(previousMonthC: number, monthC: number): number {
  return 0.14 * (monthC - previousMonthC);
}

/** Reference ET from temperature alone, mm/d (eq. 52). @param extraterrestrialMJ of the day */
export function hargreavesReferenceEt(
  temperatureMaxC: number,
  temperatureMinC: number,
  extraterrestrialMJ: number,
): number {
  const mean = (temperatureMaxC + temperatureMinC) / 2;
  return 0.0023 * (mean + 17.8) * Math.sqrt(temperatureMaxC - temperatureMinC) * 0.408 * extraterrestrialMJ;
}

function penmanMonteith(
  { elevationM, wind2m }: { elevationM: number; wind2m: number },
  temperatureC: number,
  deficitKPa: number,
  availableMJ: number,
  numerator: number,
): number {
  const slope = saturationSlope(temperatureC);
  const gamma = psychrometricConstant(airPressure(elevationM));
  const aerodynamic = ((gamma * numerator) / (temperatureC + 273)) * wind2m * deficitKPa;
  return (0.408 * slope * availableMJ + aerodynamic) / (slope + gamma * (1 + 0.34 * wind2m));
}
