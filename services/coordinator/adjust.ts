import { solveAdjustment } from '../../shared/anchors/adjust.ts';
import { OverlapStats, type OverlapStatsJson } from '../../shared/anchors/overlap.ts';
import type { OverlapResidual, PassAdjustment } from '../../shared/contract/calibration.ts';
import { BasinloomError, type ErrorRecord } from '../../shared/contract/errors.ts';
import type { Plan } from '../../shared/contract/plan.ts';
import { readJson } from '../../shared/store/artefact-reader.ts';
import type { Store } from '../../shared/store/store.ts';
import { dayNumber, daysBetween } from '../../shared/time/calendar.ts';
import { rainBetween } from './weather-input.ts';

/**
 * Pairs of passes worth comparing: different swaths or dates, close enough in time, with a tile in common. Pairs
 * are listed even when adjustment is switched off, so that their differences are still reported.
 */
export function overlapPairs(plan: Plan): [number, number][] {
  const { maxGapDays } = plan.basin.method.adjust;
  const pairs: [number, number][] = [];
  plan.passes.forEach((first, a) => {
    const tiles = new Set(first.tiles);
    plan.passes.slice(a + 1).forEach((second, k) => {
      const apart = Math.abs(daysBetween(first.pass.date, second.pass.date));
      if (apart <= maxGapDays && second.tiles.some((tile) => tiles.has(tile))) pairs.push([a, a + 1 + k]);
    });
  });
  return pairs;
}

/** Joint adjustment of all passes from the overlap statistics of all tiles. */
export async function adjustPasses(
  plan: Plan,
  overlapKeys: readonly string[],
  store: Store,
): Promise<{ adjustments: PassAdjustment[]; residuals: OverlapResidual[] }> {
  const merged = new Map<string, { first: number; second: number; stats: OverlapStats }>();
  for (const key of overlapKeys) {
    for (const { first, second, stats } of await readJson<OverlapTile[]>(store, key)) {
      const name = `${first} ${second}`;
      const known = merged.get(name) ?? { first, second, stats: new OverlapStats() };
      known.stats.merge(OverlapStats.fromJSON(stats));
      merged.set(name, known);
    }
  }
  const links = [...merged.values()]
    .sort((a, b) => a.first - b.first || a.second - b.second)
    .map(({ first, second, stats }) => {
      const [a, b] = [plan.passes[first].pass, plan.passes[second].pass];
      return {
        first: a.id,
        second: b.id,
        stats,
        days: [dayNumber(a.date), dayNumber(b.date)] as const,
        daysApart: Math.abs(daysBetween(a.date, b.date)),
        rainMm: rainBetween(plan.days, a.date, b.date),
      };
    });
  const ids = plan.passes.map(({ pass }) => pass.id);
  return solveAdjustment(ids, links, plan.basin.method.adjust);
}

/** Beyond so many times its own uncertainty an adjustment is no small correction any more. */
const FAR_SIGMAS = 3;

/** Passes whose adjustment says that their calibration was wrong, not just uncertain. */
export function movedFar(
  adjustments: readonly PassAdjustment[],
  anchorUncertainty: number,
): { passId: string; error: ErrorRecord }[] {
  return adjustments
    .filter(({ offset }) => Math.abs(offset) > FAR_SIGMAS * anchorUncertainty)
    .map(({ passId, offset }) => {
      const parameters = {
        pass: passId,
        moved: offset.toFixed(3),
        sigmas: (Math.abs(offset) / anchorUncertainty).toFixed(1),
      };
      return { passId, error: new BasinloomError('PASS_MOVED_FAR', parameters).toRecord() };
    });
}

interface OverlapTile {
  readonly first: number;
  readonly second: number;
  readonly stats: OverlapStatsJson;
}
