/**
 * The fixed bins that make a summary mergeable: NDVI by 0.01, datum temperature by 0.25 K. A stratum is a block
 * of two by two bins. Fixed for every pass and tile, so counts add up exactly.
 */
export const NDVI_BINS = { from: -0.2, perUnit: 100, count: 120 } as const;
export const TEMPERATURE_BINS = { from: 230, perUnit: 4, count: 480 } as const;

export const BIN_COUNT = NDVI_BINS.count * TEMPERATURE_BINS.count;
/** Bins along each side of a stratum. */
export const BINS_PER_STRATUM = 2;
const STRATA_PER_NDVI = TEMPERATURE_BINS.count / BINS_PER_STRATUM;
export const STRATUM_COUNT = (NDVI_BINS.count / BINS_PER_STRATUM) * STRATA_PER_NDVI;

/**
 * Index of the bin of a pixel, or -1 when it lies outside -0.2 <= NDVI <= 1, 230 K <= T <= 350 K or is NaN.
 * A value on an edge belongs to the bin above it; the two upper ends belong to the last bin.
 */
export const binOf = (ndvi: number, datumTemperature: number): number => {
  const i = axisBin(ndvi, NDVI_BINS);
  const j = axisBin(datumTemperature, TEMPERATURE_BINS);
  return i < 0 || j < 0 ? -1 : i * TEMPERATURE_BINS.count + j;
};

export const ndviIndexOf = (bin: number): number => Math.floor(bin / TEMPERATURE_BINS.count);
export const temperatureIndexOf = (bin: number): number => bin % TEMPERATURE_BINS.count;

/** Index of the stratum that holds a bin. */
export const stratumOf = (bin: number): number =>
  Math.floor(ndviIndexOf(bin) / BINS_PER_STRATUM) * STRATA_PER_NDVI +
  Math.floor(temperatureIndexOf(bin) / BINS_PER_STRATUM);

/** Lower edge of the NDVI bin `index`; `index` = count gives the upper end. */
export const ndviEdge = (index: number): number => NDVI_BINS.from + index / NDVI_BINS.perUnit;
/** Lower edge of the temperature bin `index`, K; `index` = count gives the upper end. */
export const temperatureEdge = (index: number): number => TEMPERATURE_BINS.from + index / TEMPERATURE_BINS.perUnit;

interface Axis {
  readonly from: number;
  readonly perUnit: number;
  readonly count: number;
}

function axisBin(value: number, axis: Axis): number {
  const position = (value - axis.from) * axis.perUnit;
  if (!(position >= 0 && position <= axis.count)) return -1;
  return Math.min(Math.floor(position), axis.count - 1);
}
