import type { JobEnvelope, TileJob } from '../../shared/contract/jobs.ts';
import { answer, type ThreadAnswer } from '../../shared/engine/thread-answer.ts';
import { PerStore } from '../../shared/store/per-store.ts';
import { WorkerContext } from './context.ts';
import { runTileJob } from './run-job.ts';

/** Entry of a worker thread, whatever engine it serves. */
const contexts = new PerStore(
  (store) => new WorkerContext(store),
  (context) => void context.close(),
);

export default async function run({ store, job }: JobEnvelope<TileJob>): Promise<ThreadAnswer> {
  return answer(() => runTileJob(job, contexts.of(store)));
}
