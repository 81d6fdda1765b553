import type { OverlapResidual, PassAdjustment } from '../../../shared/contract/calibration.ts';
import { type Column, csvText } from './csv.ts';

const ADJUSTMENTS: readonly Column<PassAdjustment>[] = [
  { name: 'pass', value: (row) => row.passId },
  { name: 'gain', value: (row) => row.gain, decimals: 6 },
  { name: 'offset', value: (row) => row.offset, decimals: 6 },
  { name: 'links', value: (row) => row.links },
];

/** tables/adjustments.csv: adjusted fraction = gain * fraction + offset; no unit. */
export function adjustmentsCsv(rows: readonly PassAdjustment[]): string {
  return csvText(ADJUSTMENTS, rows);
}

const OVERLAPS: readonly Column<OverlapResidual>[] = [
  { name: 'first_pass', value: (row) => row.first },
  { name: 'second_pass', value: (row) => row.second },
  { name: 'days_apart', value: (row) => row.daysApart },
  { name: 'pixel_count', value: (row) => row.pixels },
  { name: 'mean_first', value: (row) => row.meanFirst, decimals: 6 },
  { name: 'mean_second', value: (row) => row.meanSecond, decimals: 6 },
  { name: 'difference_before', value: (row) => row.before, decimals: 6 },
  { name: 'difference_after', value: (row) => row.after, decimals: 6 },
  { name: 'used', value: (row) => row.cut === undefined },
  { name: 'not_used_because', value: (row) => row.cut },
];

/** tables/overlaps.csv: mean fractions of the stable pixels that two passes share, first minus second; no unit. */
export function overlapsCsv(rows: readonly OverlapResidual[]): string {
  return csvText(OVERLAPS, rows);
}
