/**
 * The products a run can publish. One entry fixes name, unit, storage and the trade's terms, so that files,
 * STAC items, report and documents cannot disagree.
 *
 * Stored value = round((value - offset) / scale) as `storage`; `nodata` is a stored value.
 */
export type ProductStorage = 'int16' | 'uint16' | 'uint8';

export interface ProductEntry {
  readonly title: string;
  /** What it stands for: one overpass date, or one accounting period. */
  readonly per: 'day' | 'period';
  /** UDUNITS spelling. */
  readonly unit: string;
  readonly storage: ProductStorage;
  readonly scale: number;
  readonly offset: number;
  /** Stored value that means "no data"; null for bit fields, where every value says something. */
  readonly nodata: number | null;
  /** How overview levels are made: mean of the valid pixels, or the nearest (first) pixel for flags. */
  readonly overview: 'average' | 'nearest';
  /** CF standard name where one exists; never invented. */
  readonly standardName?: string;
  readonly description: string;
  /** Plausible range for the physical-bounds check, in units of the product (science of clear-sky land). */
  readonly bounds?: readonly [number, number];
}

const int16 = { storage: 'int16', offset: 0, nodata: -32768, overview: 'average' } as const;

export const PRODUCTS = {
  'et-day': {
    ...int16,
    title: 'Actual evapotranspiration of the day',
    per: 'day',
    unit: 'mm',
    scale: 0.001,
    standardName: 'water_evapotranspiration_amount',
    description: 'Daily total of actual evapotranspiration on an overpass date',
    bounds: [0, 14],
  },
  'et-fraction': {
    ...int16,
    title: 'Reference ET fraction (ETrF)',
    per: 'day',
    unit: '1',
    scale: 0.0001,
    description: 'Actual over tall reference evapotranspiration at the overpass, after adjustment',
    bounds: [-0.1, 1.3],
  },
  'evaporative-fraction': {
    ...int16,
    title: 'Evaporative fraction',
    per: 'day',
    unit: '1',
    scale: 0.0001,
    description: 'Latent heat over available energy (Rn - G) at the overpass',
    bounds: [-0.1, 1.5],
  },
  'net-radiation': {
    ...int16,
    title: 'Net radiation at the overpass',
    per: 'day',
    unit: 'W m-2',
    scale: 0.1,
    standardName: 'surface_net_downward_radiative_flux',
    description: 'Instantaneous net radiation, down positive',
    bounds: [-100, 900],
  },
  'soil-heat': {
    ...int16,
    title: 'Soil heat flux at the overpass',
    per: 'day',
    unit: 'W m-2',
    scale: 0.1,
    standardName: 'downward_heat_flux_at_ground_level_in_soil',
    description: 'Instantaneous soil heat flux, down positive',
    bounds: [-50, 500],
  },
  'sensible-heat': {
    ...int16,
    title: 'Sensible heat flux at the overpass',
    per: 'day',
    unit: 'W m-2',
    scale: 0.1,
    standardName: 'surface_upward_sensible_heat_flux',
    description: 'Instantaneous sensible heat flux, up positive; negative over wet irrigated land',
    bounds: [-200, 700],
  },
  'latent-heat': {
    ...int16,
    title: 'Latent heat flux at the overpass',
    per: 'day',
    unit: 'W m-2',
    scale: 0.1,
    standardName: 'surface_upward_latent_heat_flux',
    description: 'Instantaneous latent heat flux, up positive',
    bounds: [-50, 1000],
  },
  'surface-temperature': {
    ...int16,
    title: 'Surface temperature at the overpass',
    per: 'day',
    unit: 'K',
    scale: 0.01,
    offset: 273.15,
    standardName: 'surface_temperature',
    description: 'Land surface temperature of the scene on the grid',
    bounds: [230, 345],
  },
  'et-period': {
    ...int16,
    title: 'Actual evapotranspiration of the period',
    per: 'period',
    unit: 'mm',
    scale: 0.1,
    standardName: 'water_evapotranspiration_amount',
    description: 'Total of actual evapotranspiration of the period, interpolated between overpasses',
    bounds: [0, 3000],
  },
  'et-ratio': {
    ...int16,
    title: 'Relative evapotranspiration of the period',
    per: 'period',
    unit: '1',
    scale: 0.0001,
    description:
      'Actual over tall reference evapotranspiration of the period; low values show water stress or bare land',
    bounds: [-0.1, 1.3],
  },
  observations: {
    title: 'Usable overpasses in the period',
    per: 'period',
    unit: '1',
    storage: 'uint8',
    scale: 1,
    offset: 0,
    nodata: 255,
    overview: 'nearest',
    standardName: 'number_of_observations',
    description: 'Number of usable overpasses within the period',
  },
  'longest-gap': {
    title: 'Longest gap between overpasses',
    per: 'period',
    unit: 'day',
    storage: 'uint16',
    scale: 1,
    offset: 0,
    nodata: 65535,
    overview: 'nearest',
    description: 'Longest run of days that rests on one interpolation, within the period',
  },
  'quality-day': {
    title: 'Quality bits of the day',
    per: 'day',
    unit: '1',
    storage: 'uint16',
    scale: 1,
    offset: 0,
    nodata: null,
    overview: 'nearest',
    standardName: 'quality_flag',
    description: 'Bit field, see docs/reference/quality-bits.md',
  },
  'quality-period': {
    title: 'Quality bits of the period',
    per: 'period',
    unit: '1',
    storage: 'uint16',
    scale: 1,
    offset: 0,
    nodata: null,
    overview: 'nearest',
    standardName: 'quality_flag',
    description: 'Bit field, see docs/reference/quality-bits.md',
  },
} as const satisfies Record<string, ProductEntry>;

export type ProductName = keyof typeof PRODUCTS;
export const PRODUCT_NAMES = Object.keys(PRODUCTS) as [ProductName, ...ProductName[]];

/** Published with every run, asked for or not: a map without them cannot be judged. */
export const ALWAYS_PUBLISHED: readonly ProductName[] = [
  'quality-day',
  'quality-period',
  'observations',
  'longest-gap',
];

/** What a run publishes for each date or period, in a fixed order. @param asked products of the basin file */
export function publishedProducts(asked: readonly ProductName[], per: ProductEntry['per']): ProductName[] {
  return [...new Set([...asked, ...ALWAYS_PUBLISHED])].filter((product) => PRODUCTS[product].per === per).sort();
}
