import { airPressure } from '../radiation.ts';
import { extraterrestrialDaily, extraterrestrialInterval, solarElevation } from '../sun/fao-geometry.ts';
import { clearSkyRadiation, cloudFactor, netEmissivity, REFERENCE_ALBEDO, relativeRadiation } from './clear-sky.ts';
import { meanSaturationVapourPressure, psychrometricConstant, saturationVapourPressure } from './psychrometrics.ts';

/*
 * The ASCE standardized reference evapotranspiration equation (ASCE-EWRI 2005, Allen, Walter, Elliott, Howell,
 * Itenfisu, Jensen & Snyder, eds), for a tall (alfalfa, 0.5 m) and a short (clipped grass, 0.12 m) surface.
 */
export type ReferenceSurface = 'tall' | 'short';

interface Place {
  readonly latitudeRad: number;
  readonly elevationM: number;
  /** 1..366 of the local date. */
  readonly dayOfYear: number;
}

export interface DailyWeather extends Place {
  readonly temperatureMaxC: number;
  readonly temperatureMinC: number;
  readonly vapourPressureKPa: number;
  /** At 2 m, m/s. */
  readonly wind2m: number;
  readonly solarMJ: number;
}

export interface HourlyWeather extends Place {
  readonly temperatureC: number;
  readonly vapourPressureKPa: number;
  /** At 2 m, m/s. */
  readonly wind2m: number;
  /** Solar radiation of the hour, MJ m-2. */
  readonly solarMJ: number;
  /** Solar hour angle at the middle of the hour, rad. */
  readonly hourAngle: number;
  /** Cloud factor taken when the sun is below 0.3 rad: that of the last hour above it. */
  readonly carriedCloudFactor: number;
}

interface Coefficients {
  /** K mm s3 Mg-1 for the step. */
  readonly numerator: number;
  /** s m-1. */
  readonly denominator: number;
  /** Soil heat as a share of net radiation. */
  readonly soilHeat: number;
}

const DAILY: Record<ReferenceSurface, Coefficients> = {
  short: { numerator: 900, denominator: 0.34, soilHeat: 0 },
  tall: { numerator: 1600, denominator: 0.38, soilHeat: 0 },
};
const HOURLY_DAY: Record<ReferenceSurface, Coefficients> = {
  short: { numerator: 37, denominator: 0.24, soilHeat: 0.1 },
  tall: { numerator: 66, denominator: 0.25, soilHeat: 0.04 },
};
const HOURLY_NIGHT: Record<ReferenceSurface, Coefficients> = {
  short: { numerator: 37, denominator: 0.96, soilHeat: 0.5 },
  tall: { numerator: 66, denominator: 1.7, soilHeat: 0.2 },
};

/** Stefan-Boltzmann constant, MJ K-4 m-2 d-1 and h-1 (ASCE-EWRI 2005). */
const SIGMA_DAY = 4.901e-9;
const SIGMA_HOUR = 2.042e-10;
/** The standard's own zero of the Kelvin scale in the longwave term. */
const KELVIN = 273.16;
/** Below this height of the sun the ratio to clear-sky radiation says nothing about clouds, rad. */
const LOW_SUN = 0.3;

/**
 * Reference ET of a day, mm/d (eq. 1 with table 1). Soil heat is 0 over a day.
 * Not clipped: it can be slightly negative in cold humid weather.
 */
export function dailyReferenceEt(weather: DailyWeather, surface: ReferenceSurface): number {
  const mean = (weather.temperatureMaxC + weather.temperatureMinC) / 2;
  const saturation = meanSaturationVapourPressure(weather.temperatureMaxC, weather.temperatureMinC);
  return standardized(weather, mean, saturation, dailyNetRadiation(weather), DAILY[surface]);
}

/** Reference ET of an hour, mm/h (eq. 1 with table 1). Night values may be slightly negative and are kept. */
export function hourlyReferenceEt(weather: HourlyWeather, surface: ReferenceSurface): number {
  const net = hourlyNetRadiation(weather);
  const coefficients = net > 0 ? HOURLY_DAY[surface] : HOURLY_NIGHT[surface];
  return standardized(weather, weather.temperatureC, saturationVapourPressure(weather.temperatureC), net, coefficients);
}

/** Net radiation of the reference surface over a day, MJ m-2 d-1. */
export function dailyNetRadiation(weather: DailyWeather): number {
  const extraterrestrial = extraterrestrialDaily(weather.latitudeRad, weather.dayOfYear);
  const clear = clearSkyRadiation(extraterrestrial, weather.elevationM);
  // Polar night: no radiation to compare; the lower limit of the ratio stands for an unknown sky.
  const factor = cloudFactor(clear > 0 ? relativeRadiation(weather.solarMJ, clear) : 0.3);
  const warm = (weather.temperatureMaxC + KELVIN) ** 4;
  const cold = (weather.temperatureMinC + KELVIN) ** 4;
  const longwave = (SIGMA_DAY * factor * netEmissivity(weather.vapourPressureKPa) * (warm + cold)) / 2;
  return (1 - REFERENCE_ALBEDO) * weather.solarMJ - longwave;
}

/** Net radiation of the reference surface over an hour, MJ m-2 h-1. */
export function hourlyNetRadiation(weather: HourlyWeather): number {
  const factor = hourlyCloudFactor(weather) ?? weather.carriedCloudFactor;
  const emission = SIGMA_HOUR * (weather.temperatureC + KELVIN) ** 4;
  const longwave = factor * netEmissivity(weather.vapourPressureKPa) * emission;
  return (1 - REFERENCE_ALBEDO) * weather.solarMJ - longwave;
}

/** Cloud factor that the hour itself gives; undefined when the sun is below 0.3 rad. */
export function hourlyCloudFactor(weather: Place & { solarMJ: number; hourAngle: number }): number | undefined {
  if (solarElevation(weather.latitudeRad, weather.dayOfYear, weather.hourAngle) < LOW_SUN) return undefined;
  return cloudFactor(relativeRadiation(weather.solarMJ, hourlyClearSky(weather)));
}

/** Clear-sky radiation of the hour around an hour angle, MJ m-2 h-1. */
export function hourlyClearSky(place: Place & { hourAngle: number }): number {
  const half = Math.PI / 24;
  const { latitudeRad, dayOfYear, hourAngle, elevationM } = place;
  return clearSkyRadiation(
    extraterrestrialInterval(latitudeRad, dayOfYear, hourAngle - half, hourAngle + half),
    elevationM,
  );
}

function standardized(
  weather: { elevationM: number; vapourPressureKPa: number; wind2m: number },
  temperatureC: number,
  saturationKPa: number,
  netRadiation: number,
  { numerator, denominator, soilHeat }: Coefficients,
): number {
  // Eq. 5 has the product 4098 x 0.6108 rounded to 2503.
  const slope = (2503 * Math.exp((17.27 * temperatureC) / (temperatureC + 237.3))) / (temperatureC + 237.3) ** 2;
  const gamma = psychrometricConstant(airPressure(weather.elevationM));
  const energy = 0.408 * slope * netRadiation * (1 - soilHeat);
  const deficit = saturationKPa - weather.vapourPressureKPa;
  const aerodynamic = ((gamma * numerator) / (temperatureC + 273)) * weather.wind2m * deficit;
  return (energy + aerodynamic) / (slope + gamma * (1 + denominator * weather.wind2m));
}
