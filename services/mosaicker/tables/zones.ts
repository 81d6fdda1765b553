import { type Column, csvText } from './csv.ts';

/**
 * One zone, one land-cover class, one period.
 *
 * `et_mean_mm` is the area-weighted mean over the pixels that have a value. `et_volume_m3` is that mean times
 * `covered_area_km2`: the volume of the covered part. Nothing is extrapolated to the part without data; whoever
 * wants that multiplies by area_km2 / covered_area_km2 and says so.
 */
export interface ZoneRow {
  readonly zone: string;
  readonly zone_kind: 'sub-basin' | 'basin';
  /** Class name, or "all". */
  readonly land_cover: string;
  /** Id of the period. */
  readonly period: string;
  /** First and last day, included, YYYY-MM-DD. */
  readonly from: string;
  readonly to: string;
  readonly area_km2: number;
  /** Area of the pixels with a value. */
  readonly covered_area_km2: number;
  /** covered_area_km2 / area_km2, 0..1. */
  readonly valid_fraction: number;
  /** NaN when nothing is covered. */
  readonly et_mean_mm: number;
  readonly et_volume_m3: number;
  /** Tall reference ET of the same pixels and days. */
  readonly reference_et_mm?: number;
  /** Mean number of usable overpasses for each pixel. */
  readonly observations_mean: number;
  /** Longest gap of any pixel. */
  readonly longest_gap_days_max: number;
  /** Pixels touched, whole or in part. */
  readonly pixel_count: number;
  /** Remarks: words joined by a space, for example "below-min-coverage held-at-end". */
  readonly quality?: string;
}

const COLUMNS: readonly Column<ZoneRow>[] = [
  { name: 'zone', value: (row) => row.zone },
  { name: 'zone_kind', value: (row) => row.zone_kind },
  { name: 'land_cover', value: (row) => row.land_cover },
  { name: 'period', value: (row) => row.period },
  { name: 'from', value: (row) => row.from },
  { name: 'to', value: (row) => row.to },
  { name: 'area_km2', value: (row) => row.area_km2, decimals: 6 },
  { name: 'covered_area_km2', value: (row) => row.covered_area_km2, decimals: 6 },
  { name: 'valid_fraction', value: (row) => row.valid_fraction, decimals: 6 },
  { name: 'et_mean_mm', value: (row) => row.et_mean_mm, decimals: 3 },
  { name: 'et_volume_m3', value: (row) => row.et_volume_m3, decimals: 1 },
  { name: 'reference_et_mm', value: (row) => row.reference_et_mm, decimals: 3 },
  { name: 'observations_mean', value: (row) => row.observations_mean, decimals: 2 },
  { name: 'longest_gap_days_max', value: (row) => row.longest_gap_days_max },
  { name: 'pixel_count', value: (row) => row.pixel_count },
  { name: 'quality', value: (row) => row.quality },
];

/** tables/zones.csv */
export function zonesCsv(rows: readonly ZoneRow[]): string {
  return csvText(COLUMNS, rows);
}
