import { type SeamResult, SeamStats, type SeamStatsJson } from '../../../shared/anchors/seam.ts';
import type { OverlapResidual } from '../../../shared/contract/calibration.ts';
import type { Plan } from '../../../shared/contract/plan.ts';
import { PRODUCTS } from '../../../shared/contract/products.ts';
import { swathsOf } from '../../../shared/scenes/swaths.ts';
import type { LoadedLayer, Publication } from '../publish.ts';
import type { SeamKind, SeamRow } from '../tables.ts';
import type { TalliedSeams } from '../tally.ts';

/** Rows of tables/seams.csv: pass overlaps first, then the seams of every layer. */
export function seamRows({ plan, summary, layers }: Publication): SeamRow[] {
  const limit = plan.basin.checks.seamLimit;
  return [
    ...summary.residuals.flatMap((residual) => overlapRows(residual, limit)),
    ...layers.flatMap((layer) => layer.tally.seams.flatMap((seams) => layerRows(plan, layer, seams, limit))),
  ];
}

/** The mean difference of two passes over their shared stable pixels: what the adjustment is there to remove. */
function overlapRows(residual: OverlapResidual, limit: number): SeamRow[] {
  const { first, second, pixels, before, after } = residual;
  return (['before', 'after'] as const).map((stage) => {
    const difference = stage === 'before' ? before : after;
    return {
      when: `${first.slice(0, 10)}|${second.slice(0, 10)}`,
      variable: 'et-fraction',
      kind: 'pass-overlap',
      seam: `${first}|${second}`,
      stage,
      count: pixels,
      mean_jump: Math.abs(difference),
      mean_neighbour_jump: Number.NaN,
      ratio: Number.NaN,
      ratio_ci_low: Number.NaN,
      ratio_ci_high: Number.NaN,
      mean_difference: difference,
      difference_ci_low: Number.NaN,
      difference_ci_high: Number.NaN,
      // Pairs that are too far apart in time are listed for information; the limit is for those that are compared.
      ...(residual.cut === undefined && { limit, within_limit: Math.abs(difference) <= limit }),
    };
  });
}

function layerRows(plan: Plan, layer: LoadedLayer, seams: TalliedSeams, limit: number): SeamRow[] {
  const { product: variable, stage } = seams;
  const row = (kind: SeamKind, seam: string, json: SeamStatsJson): SeamRow => {
    const result = SeamStats.fromJSON(json).result(PRODUCTS[variable].scale);
    return {
      when: layer.when,
      variable,
      kind,
      seam,
      stage,
      ...measured(result),
      ...limited(kind, variable, result, limit),
    };
  };
  return [
    ...seams.origins.map(({ a, b, stats }) => row(kindOf(layer, a, b), nameOf(plan, layer, a, b), stats)),
    ...seams.tileEdges.map(({ along, at, stats }) => row('tile-edge', `${along} line ${at}`, stats)),
  ];
}

function measured(result: SeamResult) {
  const { count, meanJump, meanNeighbourJump, ratio, meanDifference } = result;
  return {
    count,
    mean_jump: meanJump,
    mean_neighbour_jump: meanNeighbourJump,
    ratio: ratio.value,
    ratio_ci_low: ratio.low,
    ratio_ci_high: ratio.high,
    mean_difference: meanDifference.value,
    difference_ci_low: meanDifference.low,
    difference_ci_high: meanDifference.high,
  };
}

/** The limit of the basin file is for fractions at pass edges; other seams are judged by their ratio alone. */
function limited(kind: SeamKind, variable: SeamRow['variable'], { meanDifference }: SeamResult, limit: number) {
  if (kind !== 'pass-edge' || variable !== 'et-fraction') return {};
  return { limit, within_limit: Math.abs(meanDifference.value) <= limit };
}

/** Origins of a day: pass (high byte) and scene (low byte). Of a period: bit set of swaths. */
function kindOf({ per }: LoadedLayer, a: number, b: number): SeamKind {
  return per === 'day' && a >> 8 === b >> 8 ? 'scene-edge' : 'pass-edge';
}

function nameOf(plan: Plan, layer: LoadedLayer, a: number, b: number): string {
  return layer.per === 'day' ? daySeam(plan, layer.when, a, b) : `${swathSet(plan, a)}|${swathSet(plan, b)}`;
}

function daySeam(plan: Plan, date: string, a: number, b: number): string {
  const passes = plan.passes.map(({ pass }) => pass).filter((pass) => pass.date === date);
  const [first, second] = [a, b].map((origin) => ({ pass: passes[(origin >> 8) - 1], scene: (origin & 255) - 1 }));
  const row = ({ pass, scene }: typeof first) => String(pass.scenes[scene].row).padStart(3, '0');
  if (first.pass === second.pass) return `rows ${row(first)}|${row(second)} of pass ${first.pass.id}`;
  return `${first.pass.id}|${second.pass.id}`;
}

function swathSet(plan: Plan, bits: number): string {
  const swaths = swathsOf(plan.passes.map(({ pass }) => pass));
  const names = swaths.filter((_, bit) => bits & (1 << (bit % 16))).map((swath) => `swath ${swath}`);
  return names.join(' and ') || 'no swath';
}
