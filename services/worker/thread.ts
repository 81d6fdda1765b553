import { workerData } from 'piscina';
import { BasinloomError } from '../../shared/contract/errors.ts';
import type { TileJob } from '../../shared/contract/jobs.ts';
import type { ThreadAnswer } from '../../shared/engine/embedded-engine.ts';
import { LocalStore } from '../../shared/store/local-store.ts';
import { WorkerContext } from './context.ts';
import { runTileJob } from './run-job.ts';

/** Entry of a worker thread of the embedded engine. */
const context = new WorkerContext(new LocalStore((workerData as { store: string }).store));

export default async function run(job: TileJob): Promise<ThreadAnswer> {
  try {
    await runTileJob(job, context);
    return { ok: true };
  } catch (error) {
    return { ok: false, error: BasinloomError.from(error).toRecord() };
  }
}
