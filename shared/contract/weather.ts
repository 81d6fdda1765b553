/** Weather as it travels in plans: already in standard units, one record for each station. */

export interface StationRecord {
  readonly id: string;
  readonly longitudeDeg: number;
  readonly latitudeDeg: number;
  readonly elevationM: number;
  /** Height of the anemometer above ground, m. */
  readonly windHeightM: number;
}

/** A station's state at the overpass, from its hourly record. */
export interface StationOverpass {
  readonly station: StationRecord;
  readonly airTemperatureK: number;
  readonly vapourPressureKPa: number;
  /** Wind carried up to 200 m over the station's own roughness, m/s. */
  readonly wind200: number;
  /** ASCE standardized reference ET, tall, for the hour centred at the overpass, mm/h. */
  readonly referenceTallMmPerHour: number;
}

/** A station's day. Fields that the station cannot give are absent. */
export interface StationDay {
  readonly station: StationRecord;
  /** Local (solar) calendar date, YYYY-MM-DD. */
  readonly date: string;
  /** ASCE standardized reference ET, tall and short, mm/d. */
  readonly referenceTallMm: number;
  readonly referenceShortMm: number;
  /** Measured solar radiation over extraterrestrial radiation of the day, 0..1. */
  readonly transmissivity: number;
  readonly precipitationMm?: number;
  /** "hourly": sum of 24 hourly values; "daily": daily equation. */
  readonly from: 'hourly' | 'daily';
}

/** Everything the flux stage needs of the weather of one pass. */
export interface PassWeather {
  readonly overpass: readonly StationOverpass[];
  readonly day: readonly StationDay[];
  /** ETrF of bare soil at the hot anchor, from the rain record of the nearest stations, 0..1. */
  readonly bareSoilFraction: number;
  /** "rain-record": from the stations' rain; "assumed-dry": no station has enough rain record, 0 is taken. */
  readonly bareSoilFrom: 'rain-record' | 'assumed-dry';
}
