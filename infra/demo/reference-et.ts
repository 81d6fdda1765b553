import { pressureAt, saturationVapour } from './air.ts';
import { SOLAR_OFFSET_HOURS } from './calendar.ts';
import { toDegrees } from './plane.ts';
import { cosZenith, sunAt } from './sun.ts';
import { type AirState, type Site, type Weather, windAt2m } from './weather.ts';

/**
 * Tall reference ET of one hour, mm: the ASCE standardized equation (ASCE-EWRI 2005, eq. 1 with Cn 66 and Cd 0.25 by
 * day, 1.7 by night; G 0.04 Rn and 0.2 Rn; albedo 0.23).
 *
 * @param cloudiness fcd of the longwave term, 0.05..1
 */
export function tallReferenceHour(air: AirState, elevation: number, cloudiness: number): number {
  const { celsius, vapourKPa } = air;
  const megajoules = (watts: number) => watts * 0.0036;
  const saturation = saturationVapour(celsius);
  const slope = (4098 * saturation) / (celsius + 237.3) ** 2;
  const psychrometric = 0.000665 * pressureAt(elevation);
  const longwave = 2.042e-10 * cloudiness * (0.34 - 0.14 * Math.sqrt(vapourKPa)) * (celsius + 273.16) ** 4;
  const net = 0.77 * megajoules(air.shortwave) - longwave;
  const daytime = net > 0;
  const soil = net * (daytime ? 0.04 : 0.2);
  const wind = windAt2m(air);
  const drying = (psychrometric * 66 * wind * (saturation - vapourKPa)) / (celsius + 273);
  return (0.408 * slope * (net - soil) + drying) / (slope + psychrometric * (1 + (daytime ? 0.25 : 1.7) * wind));
}

/** Cloudiness of the longwave term from measured over clear-sky radiation (ASCE-EWRI 2005, eqs 18 and 19). */
function cloudinessOf(air: AirState, elevation: number): number {
  const clear = (0.75 + 2e-5 * elevation) * air.extraterrestrial;
  const ratio = Math.min(1, Math.max(0.3, air.shortwave / clear));
  return Math.min(1, Math.max(0.05, 1.35 * ratio - 0.35));
}

/** The sun must stand this high (sine of 0.3 rad) for the cloudiness of an hour to be taken from it. */
const HIGH_SUN = Math.sin(0.3);

/** Tall reference ET of the hour around an instant, mm. The sun must be well up. */
export function tallReferenceAround(weather: Weather, hours: number, site: Site): number {
  const air = weather.hourFrom(hours - 0.5, site);
  return tallReferenceHour(air, site.elevation, cloudinessOf(air, site.elevation));
}

/** Tall reference ET of a solar day, mm: the sum of its hours. Cloudiness is carried through the night. */
export function tallReferenceDay(weather: Weather, day: number, site: Site): number {
  const [longitude, latitude] = toDegrees(site.x, site.y);
  const first = day * 24 - SOLAR_OFFSET_HOURS;
  let cloudiness = 1;
  let sum = 0;
  for (let hour = first - 8; hour < first + 24; hour++) {
    const air = weather.hourFrom(hour, site);
    if (cosZenith(sunAt(hour + 0.5), longitude, latitude) >= HIGH_SUN) cloudiness = cloudinessOf(air, site.elevation);
    if (hour >= first) sum += tallReferenceHour(air, site.elevation, cloudiness);
  }
  return sum;
}
