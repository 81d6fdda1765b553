import type { StationRecord } from '../contract/weather.ts';

/** One hour of a station's record. NaN where a value is missing. */
export interface StationHour {
  /** Of the file, for messages. */
  readonly line: number;
  /** Start of the hour, seconds since 1970-01-01T00:00:00 UTC. */
  readonly start: number;
  /** Means over the hour. */
  readonly temperatureC: number;
  readonly vapourPressureKPa: number;
  /** At the station's anemometer height, m/s. */
  readonly windSpeed: number;
  /** MJ m-2 over the hour. */
  readonly solarMJ: number;
  readonly precipitationMm: number;
}

/** One day of a station's daily record. NaN where a value is missing. */
export interface StationDaily {
  /** Local date, YYYY-MM-DD. */
  readonly date: string;
  readonly temperatureMaxC: number;
  readonly temperatureMinC: number;
  readonly vapourPressureKPa: number;
  /** Mean of the day at the station's anemometer height, m/s. */
  readonly windSpeed: number;
  /** MJ m-2 d-1. */
  readonly solarMJ: number;
  readonly precipitationMm: number;
}

export interface StationTable {
  readonly station: StationRecord;
  /** Of the ground around the mast, m. */
  readonly roughnessLengthM: number;
  /** File of the hourly record, for messages. */
  readonly hourlyFile?: string;
  /** By number of the hour since 1970 (start / 3600). */
  readonly hours: ReadonlyMap<number, StationHour>;
  readonly dailyFile?: string;
  /** By date. */
  readonly days: ReadonlyMap<string, StationDaily>;
}

/** Stations with their records. */
export interface StationTables {
  /** The station list. */
  readonly file: string;
  readonly stations: readonly StationTable[];
}
