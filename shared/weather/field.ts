import type { StationDay, StationOverpass } from '../contract/weather.ts';

export const OVERPASS_VARIABLES = [
  'airTemperatureDatum',
  'vapourPressure',
  'wind200',
  'stationElevation',
  'referenceInst',
] as const;
export const DAY_VARIABLES = ['referenceDay', 'transmissivityDay'] as const;

/** Station values as a field that is smooth everywhere, the stations included. */
export interface WeatherField<Names extends readonly string[]> {
  readonly variables: Names;
  /** Fills one value for each variable at map coordinates, m. NaN where the field has no station. */
  readonly evaluate: (x: number, y: number, out: Float64Array) => void;
}

interface Placed {
  /** Map coordinates of the grid, m. */
  readonly x: number;
  readonly y: number;
}

/** Distance within which a station's weight levels off, m: without it the field has a cusp at every station. */
const SOFTENING = 1000;

/**
 * Weather at the overpass. Air temperature is carried to 0 m by the lapse before it is weighted, so that a station's
 * height does not leak into its neighbourhood; the other variables are weighted as they are.
 *
 * @param lapseKPerM fall of temperature with height, above 0
 */
export function overpassField(
  stations: readonly (Placed & { weather: StationOverpass })[],
  lapseKPerM: number,
): WeatherField<typeof OVERPASS_VARIABLES> {
  const values = stations.map(({ weather }) => [
    weather.airTemperatureK + lapseKPerM * weather.station.elevationM,
    weather.vapourPressureKPa,
    weather.wind200,
    weather.station.elevationM,
    weather.referenceTallMmPerHour,
  ]);
  return { variables: OVERPASS_VARIABLES, evaluate: weighted(stations, values, OVERPASS_VARIABLES.length) };
}

/** Tall reference ET (mm/d) and transmissivity of a day. */
export function dayField(stations: readonly (Placed & { day: StationDay })[]): WeatherField<typeof DAY_VARIABLES> {
  const values = stations.map(({ day }) => [day.referenceTallMm, day.transmissivity]);
  return { variables: DAY_VARIABLES, evaluate: weighted(stations, values, DAY_VARIABLES.length) };
}

/** Inverse distance squared (Shepard 1968, Proc. 23rd ACM National Conference: 517-524), softened. */
function weighted(places: readonly Placed[], values: readonly (readonly number[])[], count: number) {
  return (x: number, y: number, out: Float64Array): void => {
    out.fill(0, 0, count);
    let total = 0;
    for (let s = 0; s < places.length; s++) {
      const [dx, dy] = [x - places[s].x, y - places[s].y];
      const weight = 1 / (dx * dx + dy * dy + SOFTENING * SOFTENING);
      total += weight;
      for (let v = 0; v < count; v++) out[v] += weight * values[s][v];
    }
    for (let v = 0; v < count; v++) out[v] /= total;
  };
}
