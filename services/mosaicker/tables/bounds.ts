import type { BoundsRow } from '../bounds-check.ts';
import { type Column, csvText } from './csv.ts';

const COLUMNS: readonly Column<BoundsRow>[] = [
  { name: 'when', value: (row) => row.when },
  { name: 'product', value: (row) => row.product },
  { name: 'unit', value: (row) => row.unit },
  { name: 'minimum', value: (row) => row.minimum, decimals: 4 },
  { name: 'mean', value: (row) => row.mean, decimals: 4 },
  { name: 'maximum', value: (row) => row.maximum, decimals: 4 },
  { name: 'plausible_low', value: (row) => row.low, decimals: 4 },
  { name: 'plausible_high', value: (row) => row.high, decimals: 4 },
  { name: 'pixel_count', value: (row) => row.count },
  { name: 'outside_count', value: (row) => row.outside },
  { name: 'outside_fraction', value: (row) => row.outsideShare, decimals: 6 },
];

/** tables/bounds.csv: values and bounds are in the unit of the row. */
export function boundsCsv(rows: readonly BoundsRow[]): string {
  return csvText(COLUMNS, rows);
}
