import { addOverlap, OverlapStats, stablePixels } from '../../shared/anchors/overlap.ts';
import type { OverlapJob } from '../../shared/contract/jobs.ts';
import type { WorkerContext } from './context.ts';

/** Statistics of every pass pair that overlaps on one tile; one entry for each pair, mergeable over tiles. */
export async function runOverlap(job: OverlapJob, context: WorkerContext): Promise<void> {
  const tiles = new Map<number, { fraction: Float32Array; ndvi: Float32Array }>();
  for (const { pass, key } of job.fluxKeys) {
    const { planes } = await context.planes(key, ['dayFraction', 'ndvi']);
    tiles.set(pass, { fraction: planes.dayFraction as Float32Array, ndvi: planes.ndvi as Float32Array });
  }
  const found = job.pairs.map(([first, second]) => {
    const a = tiles.get(first);
    const b = tiles.get(second);
    const stats = new OverlapStats();
    if (a && b) {
      addOverlap(stats, a.fraction, b.fraction, stablePixels(a.fraction, b.fraction, a.ndvi, b.ndvi));
    }
    return { first, second, stats: stats.toJSON() };
  });
  await context.store.put(job.outputKey, Buffer.from(JSON.stringify(found)));
}
