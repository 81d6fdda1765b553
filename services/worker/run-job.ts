import type { TileJob } from '../../shared/contract/jobs.ts';
import type { WorkerContext } from './context.ts';
import { runDay } from './day.ts';
import { runFlux } from './flux.ts';
import { runIntegrate } from './integrate.ts';
import { runOverlap } from './overlap.ts';
import { runPrepare } from './prepare.ts';
import { runTerrain } from './terrain.ts';

/** Runs one tile job. It is idempotent: run twice, it leaves the same bytes under the same name. */
export async function runTileJob(job: TileJob, context: WorkerContext): Promise<void> {
  switch (job.stage) {
    case 'terrain':
      return runTerrain(job, context);
    case 'prepare':
      return runPrepare(job, context);
    case 'flux':
      return runFlux(job, context);
    case 'overlap':
      return runOverlap(job, context);
    case 'day':
      return runDay(job, context);
    case 'integrate':
      return runIntegrate(job, context);
  }
}
