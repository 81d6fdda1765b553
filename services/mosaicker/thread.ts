import type { JobEnvelope, MosaickerJob } from '../../shared/contract/jobs.ts';
import { answer, type ThreadAnswer } from '../../shared/engine/thread-answer.ts';
import { SOFTWARE } from '../../shared/service/software.ts';
import { PerStore } from '../../shared/store/per-store.ts';
import { MosaickerContext } from './context.ts';
import { runMosaic } from './mosaic.ts';
import { runPublish } from './publish.ts';
import { runTally } from './tally.ts';

/** Entry of a mosaicker thread, whatever engine it serves. */
const contexts = new PerStore((store) => new MosaickerContext(store, SOFTWARE.version));

export default async function run({ store, job }: JobEnvelope<MosaickerJob>): Promise<ThreadAnswer> {
  return answer(() => runMosaickerJob(job, contexts.of(store)));
}

async function runMosaickerJob(job: MosaickerJob, context: MosaickerContext): Promise<void> {
  switch (job.stage) {
    case 'mosaic':
      return runMosaic(job, context);
    case 'tally':
      return runTally(job, context);
    case 'publish':
      return runPublish(job, context);
  }
}
