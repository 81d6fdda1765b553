import { workerData } from 'piscina';
import type { MosaickerJob } from '../../shared/contract/jobs.ts';
import { answer, type ThreadAnswer } from '../../shared/engine/thread-answer.ts';
import { LocalStore } from '../../shared/store/local-store.ts';
import { MosaickerContext } from './context.ts';
import { runMosaic } from './mosaic.ts';
import { runPublish } from './publish.ts';
import { runTally } from './tally.ts';

/** Entry of a mosaicker thread of the embedded engine. */
const { store, softwareVersion } = workerData as { store: string; softwareVersion: string };
const context = new MosaickerContext(new LocalStore(store), softwareVersion);

export default async function run(job: MosaickerJob): Promise<ThreadAnswer> {
  return answer(() => runMosaickerJob(job));
}

async function runMosaickerJob(job: MosaickerJob): Promise<void> {
  switch (job.stage) {
    case 'mosaic':
      return runMosaic(job, context);
    case 'tally':
      return runTally(job, context);
    case 'publish':
      return runPublish(job, context);
  }
}
