import type { AnchorRecord, Calibration } from '../../../shared/contract/calibration.ts';
import { type Column, csvText } from './csv.ts';

/** One anchor pixel of one pass, with the calibration that it fixes. */
export interface AnchorRow extends AnchorRecord {
  readonly passId: string;
  readonly method: string;
  /** Pass whose calibration is used, when this pass had too few candidates. */
  readonly borrowedFrom?: string;
}

/** The rows of a calibration. */
export function anchorRows(calibration: Calibration): readonly AnchorRow[] {
  const { passId, method, borrowedFrom } = calibration;
  return calibration.anchors.map((anchor) => ({
    ...anchor,
    passId,
    method,
    ...(borrowedFrom ? { borrowedFrom } : {}),
  }));
}

const COLUMNS: readonly Column<AnchorRow>[] = [
  { name: 'pass', value: (row) => row.passId },
  { name: 'method', value: (row) => row.method },
  { name: 'role', value: (row) => row.role },
  { name: 'borrowed_from', value: (row) => row.borrowedFrom },
  { name: 'row', value: (row) => row.row },
  { name: 'column', value: (row) => row.column },
  { name: 'longitude_deg', value: (row) => row.longitudeDeg, decimals: 6 },
  { name: 'latitude_deg', value: (row) => row.latitudeDeg, decimals: 6 },
  { name: 'elevation_m', value: (row) => row.elevationM, decimals: 1 },
  { name: 'slope_east', value: (row) => row.slopeEast, decimals: 4 },
  { name: 'slope_north', value: (row) => row.slopeNorth, decimals: 4 },
  { name: 'red', value: (row) => row.red, decimals: 4 },
  { name: 'nir', value: (row) => row.nir, decimals: 4 },
  { name: 'ndvi', value: (row) => row.ndvi, decimals: 4 },
  { name: 'albedo', value: (row) => row.albedo, decimals: 4 },
  { name: 'leaf_area_index', value: (row) => row.lai, decimals: 3 },
  { name: 'surface_temperature_k', value: (row) => row.lst, decimals: 3 },
  { name: 'datum_temperature_k', value: (row) => row.datumTemperature, decimals: 3 },
  { name: 'net_radiation_w_m2', value: (row) => row.netRadiation, decimals: 2 },
  { name: 'soil_heat_w_m2', value: (row) => row.soilHeat, decimals: 2 },
  { name: 'sensible_heat_w_m2', value: (row) => row.sensibleHeat, decimals: 2 },
  { name: 'latent_heat_w_m2', value: (row) => row.latentHeat, decimals: 2 },
  { name: 'temperature_difference_k', value: (row) => row.temperatureDifference, decimals: 4 },
  { name: 'aerodynamic_resistance_s_m', value: (row) => row.aerodynamicResistance, decimals: 3 },
  { name: 'reason', value: (row) => row.reason },
];

/** tables/anchors.csv */
export function anchorsCsv(rows: readonly AnchorRow[]): string {
  return csvText(COLUMNS, rows);
}
