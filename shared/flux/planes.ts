/** Planes that the flux kernel reads, one float32 value for each pixel. */
export const INPUT_PLANES = [
  /** Surface reflectance, 0..1. */
  'red',
  'nir',
  /** Broadband albedo, 0..1. */
  'albedo',
  /** Surface temperature, K. */
  'lst',
  /** m. */
  'elevation',
  /** Terrain gradient, rise over run, toward true east and true north. */
  'slopeEast',
  'slopeNorth',
  /** Unit vector toward the sun at the overpass: true east, true north, up. */
  'sunEast',
  'sunNorth',
  'sunUp',
  'sinLatitude',
  'cosLatitude',
  /** Extraterrestrial radiation of the day on horizontal ground, W m-2. */
  'extraterrestrialDay',
  /** Air temperature carried to 0 m by the lapse rate, K. */
  'airTemperatureDatum',
  /** kPa. */
  'vapourPressure',
  /** Wind at 200 m, m s-1. */
  'wind200',
  /** Elevation at which that wind was found, m. */
  'stationElevation',
  /** ASCE tall reference ET at the overpass (mm h-1) and of the day (mm d-1). */
  'referenceInst',
  'referenceDay',
  /** Solar radiation of the day over the extraterrestrial one, 0..1. */
  'transmissivityDay',
] as const;

/** Planes that it writes; NaN where an input is NaN. */
export const OUTPUT_PLANES = [
  /** W m-2, down positive. */
  'netRadiation',
  'soilHeat',
  /** W m-2, up positive. */
  'sensibleHeat',
  'latentHeat',
  /** Latent heat over available energy. */
  'evaporativeFraction',
  /** ET of the day over tall reference ET of the day. */
  'dayFraction',
] as const;

export type InputPlane = (typeof INPUT_PLANES)[number];
export type OutputPlane = (typeof OUTPUT_PLANES)[number];
export type PixelInputs = Readonly<Record<InputPlane, number>>;
export type PixelOutputs = Readonly<Record<OutputPlane, number>>;
