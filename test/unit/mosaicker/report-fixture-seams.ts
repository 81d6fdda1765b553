import type { SeamKind, SeamRow } from '../../../services/mosaicker/tables/seams.ts';

/** Invented seams of every kind. */
export function seams(): SeamRow[] {
  const row = (
    kind: SeamKind,
    seam: string,
    stage: 'before' | 'after',
    ratio: number,
    difference: number,
    limit?: number,
  ): SeamRow => ({
    when: '2025-06-12',
    variable: 'et-fraction',
    kind,
    seam,
    stage,
    count: 14210,
    mean_jump: 0.031 * ratio,
    mean_neighbour_jump: 0.031,
    ratio,
    ratio_ci_low: ratio * 0.93,
    ratio_ci_high: ratio * 1.08,
    mean_difference: difference,
    difference_ci_low: difference - 0.004,
    difference_ci_high: difference + 0.004,
    ...(limit === undefined ? {} : { limit, within_limit: Math.abs(difference) <= limit }),
  });
  return [
    row('tile-edge', 'column line 512', 'after', 1.002, 0.0004, 0.05),
    row('tile-edge', 'column line 1024', 'after', 0.99, -0.0002, 0.05),
    row('tile-edge', 'row line 512', 'after', 1.011, 0.0007, 0.05),
    row('scene-edge', 'rows 33|34 of pass 2025-06-12-landsat9-p033', 'after', 1.03, 0.0011, 0.05),
    row('pass-edge', '2025-06-12-landsat9-p033|2025-06-12-landsat8-p034', 'before', 3.4, 0.081, 0.05),
    row('pass-edge', '2025-06-12-landsat9-p033|2025-06-12-landsat8-p034', 'after', 1.4, 0.018, 0.05),
    row('pass-overlap', '2025-05-09-landsat8-p033|2025-05-18-landsat9-p033', 'before', 4.8, 0.112, 0.05),
    row('pass-overlap', '2025-05-09-landsat8-p033|2025-05-18-landsat9-p033', 'after', 2.6, 0.061, 0.05),
  ];
}
