/** A numeric column of a station table: the name carries the unit, the range is what the atmosphere can do. */
export interface Column {
  readonly name: string;
  readonly low: number;
  readonly high: number;
}

const column = (name: string, low: number, high: number): Column => ({ name, low, high });

/** Columns of the station list. */
export const LIST_COLUMNS = {
  longitude: column('longitude_deg', -180, 180),
  latitude: column('latitude_deg', -90, 90),
  elevation: column('elevation_m', -430, 6000),
  windHeight: column('wind_height_m', 0.5, 200),
  roughness: column('roughness_length_m', 1e-4, 3),
} as const;

const SHARED = {
  vapourPressure: column('vapour_pressure_kpa', 0, 8),
  dewPoint: column('dew_point_c', -90, 40),
  wind: column('wind_speed_m_s', 0, 75),
} as const;

/*
 * A humidity sensor may drift a little over 100 and a pyranometer a little under 0 at night: both are let in and
 * bounded where they are used.
 */
export const HOURLY_COLUMNS = {
  ...SHARED,
  airTemperature: column('air_temperature_c', -90, 60),
  relativeHumidity: column('relative_humidity_pct', 0, 105),
  solar: column('solar_radiation_w_m2', -20, 1500),
  precipitation: column('precipitation_mm', 0, 500),
} as const;

export const DAILY_COLUMNS = {
  ...SHARED,
  temperatureMax: column('temperature_max_c', -90, 60),
  temperatureMin: column('temperature_min_c', -90, 60),
  relativeHumidityMax: column('relative_humidity_max_pct', 0, 105),
  relativeHumidityMin: column('relative_humidity_min_pct', 0, 105),
  solar: column('solar_radiation_mj_m2', 0, 50),
  precipitation: column('precipitation_mm', 0, 2000),
} as const;
