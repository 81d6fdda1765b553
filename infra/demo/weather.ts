import { clearSky, LAPSE, pressureAt, SOLAR_CONSTANT, saturationVapour, windAtHeight } from './air.ts';
import { SOLAR_OFFSET_HOURS } from './calendar.ts';
import { toDegrees } from './plane.ts';
import { hashUnit, valueNoise } from './random.ts';
import { cosZenith, sunAt } from './sun.ts';

/** A place for the weather: metres on the world's map and above the sea. */
export interface Site {
  readonly x: number;
  readonly y: number;
  readonly elevation: number;
}

/** Mean state of the air over a span of time. */
export interface AirState {
  readonly celsius: number;
  readonly vapourKPa: number;
  readonly wind200: number;
  /** W m-2 on level ground. */
  readonly shortwave: number;
  /** The same outside the atmosphere. */
  readonly extraterrestrial: number;
}

export interface Weather {
  /** Air at an instant without the sun: hours UTC from the first day of the period. */
  airAt(hours: number, site: Site): Pick<AirState, 'celsius' | 'vapourKPa' | 'wind200'>;
  /** Mean over one hour. */
  hourFrom(start: number, site: Site): AirState;
  /** Rain of a solar day, mm. */
  rainOf(day: number): number;
}

/** The one rain of the season, long before the first overpass. */
const RAIN: Readonly<Record<number, number>> = { [-23]: 4.2, [-22]: 11.6 };
/** Elevation at which the wind aloft has its nominal speed, m, and its growth with height. */
const WIND_LEVEL = 150;
const WIND_GROWTH = 1e-4;
/** Samples of an hour. */
const SAMPLES = 6;

/**
 * A dry summer: smooth in time and space, with days that differ. Clear sky on the overpass days.
 *
 * @param clearDays days (solar) without a cloud over the stations
 */
export function makeWeather(seed: number, clearDays: ReadonlySet<number>): Weather {
  const noise = (days: number, scale: number, stream: number) => valueNoise(days / scale, 0.5, seed + stream);

  const airAt: Weather['airAt'] = (hours, { x, y, elevation }) => {
    const days = hours / 24;
    const solarHour = hours + SOLAR_OFFSET_HOURS;
    const swing = (peak: number) => Math.cos(((solarHour - peak) * Math.PI) / 12);
    const season = 2.8 * Math.sin(((days + 20) * Math.PI) / 180);
    const mean = 23.4 + season + 2 * noise(days, 5, 41) + 2e-5 * x;
    return {
      celsius: mean + (6.6 + 1.2 * noise(days, 7, 42)) * swing(15) - LAPSE * elevation,
      vapourKPa: (1.42 + 0.18 * noise(days, 6, 43)) * (1 + 1.5e-6 * y),
      wind200:
        (4.2 + 0.8 * noise(days, 4, 44) + 1.7 * swing(15.5)) *
        (1 + 1e-6 * x) *
        (1 + WIND_GROWTH * (elevation - WIND_LEVEL)),
    };
  };
  const clearness = (day: number): number =>
    clearDays.has(day) ? 1 : 1 - 0.45 * Math.max(0, hashUnit(day + 4096, 7, seed + 45) - 0.45);

  return {
    airAt,
    rainOf: (day) => RAIN[day] ?? 0,
    hourFrom(start, site) {
      const sum = { celsius: 0, vapourKPa: 0, wind200: 0, shortwave: 0, extraterrestrial: 0 };
      const [longitude, latitude] = toDegrees(site.x, site.y);
      const pressure = pressureAt(site.elevation);
      for (let k = 0; k < SAMPLES; k++) {
        const hours = start + (k + 0.5) / SAMPLES;
        const air = airAt(hours, site);
        const sun = sunAt(hours);
        const cosine = Math.max(0, cosZenith(sun, longitude, latitude));
        const outside = (SOLAR_CONSTANT * cosine) / sun.distance ** 2;
        const day = Math.floor((hours + SOLAR_OFFSET_HOURS) / 24);
        sum.celsius += air.celsius / SAMPLES;
        sum.vapourKPa += air.vapourKPa / SAMPLES;
        sum.wind200 += air.wind200 / SAMPLES;
        sum.extraterrestrial += outside / SAMPLES;
        sum.shortwave += (outside * clearSky(pressure, air.vapourKPa, cosine) * clearness(day)) / SAMPLES;
      }
      return sum;
    },
  };
}

/** Relative humidity of an air state, %. */
export function relativeHumidity({ celsius, vapourKPa }: Pick<AirState, 'celsius' | 'vapourKPa'>): number {
  return Math.min(100, (100 * vapourKPa) / saturationVapour(celsius));
}

/** Wind at 2 m that belongs to a wind aloft, m/s. */
export function windAt2m({ wind200 }: Pick<AirState, 'wind200'>): number {
  return windAtHeight(wind200, 2);
}
