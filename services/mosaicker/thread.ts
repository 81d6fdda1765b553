import { workerData } from 'piscina';
import { BasinloomError } from '../../shared/contract/errors.ts';
import type { MosaickerJob } from '../../shared/contract/jobs.ts';
import type { ThreadAnswer } from '../../shared/engine/embedded-engine.ts';
import { LocalStore } from '../../shared/store/local-store.ts';
import { MosaickerContext } from './context.ts';
import { runMosaic } from './mosaic.ts';
import { runPublish } from './publish.ts';
import { runTally } from './tally.ts';

/** Entry of a mosaicker thread of the embedded engine. */
const { store, softwareVersion } = workerData as { store: string; softwareVersion: string };
const context = new MosaickerContext(new LocalStore(store), softwareVersion);

export default async function run(job: MosaickerJob): Promise<ThreadAnswer> {
  try {
    await runMosaickerJob(job);
    return { ok: true };
  } catch (error) {
    return { ok: false, error: BasinloomError.from(error).toRecord() };
  }
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
