import { workerData } from 'piscina';
import type { TileJob } from '../../shared/contract/jobs.ts';
import { answer, type ThreadAnswer } from '../../shared/engine/thread-answer.ts';
import { LocalStore } from '../../shared/store/local-store.ts';
import { WorkerContext } from './context.ts';
import { runTileJob } from './run-job.ts';

/** Entry of a worker thread of the embedded engine. */
const context = new WorkerContext(new LocalStore((workerData as { store: string }).store));

export default async function run(job: TileJob): Promise<ThreadAnswer> {
  return answer(() => runTileJob(job, context));
}
