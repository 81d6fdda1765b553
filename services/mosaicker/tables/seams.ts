import { PRODUCTS, type ProductName } from '../../../shared/contract/products.ts';
import { type Column, csvText } from './csv.ts';

export type SeamKind = 'tile-edge' | 'scene-edge' | 'pass-edge' | 'pass-overlap';

/** One seam of one variable, before or after adjustment. Jumps and differences are in the variable's unit. */
export interface SeamRow {
  /** Date, period, or pair of dates. */
  readonly when: string;
  readonly variable: ProductName;
  readonly kind: SeamKind;
  /** Readable name: "column line 512", "rows 31|32 of pass ...", "passA|passB". */
  readonly seam: string;
  readonly stage: 'before' | 'after';
  /** Pixel pairs behind the numbers. */
  readonly count: number;
  /** Mean absolute jump across the seam. */
  readonly mean_jump: number;
  /** Mean absolute jump between neighbouring pixels beside the seam, on both sides. */
  readonly mean_neighbour_jump: number;
  /** mean_jump / mean_neighbour_jump: 1 when the seam cannot be told from the land around it. */
  readonly ratio: number;
  /** 95 % confidence interval. */
  readonly ratio_ci_low: number;
  readonly ratio_ci_high: number;
  /** Mean signed difference, first side minus second. */
  readonly mean_difference: number;
  readonly difference_ci_low: number;
  readonly difference_ci_high: number;
  /** Limit of this kind of seam; absent where none is set. */
  readonly limit?: number;
  readonly within_limit?: boolean;
}

const COLUMNS: readonly Column<SeamRow>[] = [
  { name: 'when', value: (row) => row.when },
  { name: 'variable', value: (row) => row.variable },
  { name: 'unit', value: (row) => PRODUCTS[row.variable].unit },
  { name: 'kind', value: (row) => row.kind },
  { name: 'seam', value: (row) => row.seam },
  { name: 'stage', value: (row) => row.stage },
  { name: 'count', value: (row) => row.count },
  { name: 'mean_jump', value: (row) => row.mean_jump, decimals: 6 },
  { name: 'mean_neighbour_jump', value: (row) => row.mean_neighbour_jump, decimals: 6 },
  { name: 'ratio', value: (row) => row.ratio, decimals: 4 },
  { name: 'ratio_ci_low', value: (row) => row.ratio_ci_low, decimals: 4 },
  { name: 'ratio_ci_high', value: (row) => row.ratio_ci_high, decimals: 4 },
  { name: 'mean_difference', value: (row) => row.mean_difference, decimals: 6 },
  { name: 'difference_ci_low', value: (row) => row.difference_ci_low, decimals: 6 },
  { name: 'difference_ci_high', value: (row) => row.difference_ci_high, decimals: 6 },
  { name: 'limit', value: (row) => row.limit, decimals: 6 },
  { name: 'within_limit', value: (row) => row.within_limit },
];

/** tables/seams.csv: `unit` is that of the jumps, differences and limit; ratios have none. */
export function seamsCsv(rows: readonly SeamRow[]): string {
  return csvText(COLUMNS, rows);
}
