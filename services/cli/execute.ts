import { availableParallelism } from 'node:os';
import { fileURLToPath } from 'node:url';
import { pino } from 'pino';
import type { BasinFile } from '../../shared/contract/basin-file.ts';
import { BasinloomError } from '../../shared/contract/errors.ts';
import { EXIT } from '../../shared/contract/exit-codes.ts';
import type { Stage } from '../../shared/contract/jobs.ts';
import type { Plan } from '../../shared/contract/plan.ts';
import { EmbeddedEngine } from '../../shared/engine/embedded-engine.ts';
import { LocalStore } from '../../shared/store/local-store.ts';
import { lockFolder } from '../../shared/store/store-lock.ts';
import { makePlan } from '../coordinator/make-plan.ts';
import type { RunListener } from '../coordinator/progress.ts';
import { runBasin } from '../coordinator/run-basin.ts';
import { RunRecorder } from '../coordinator/run-record.ts';
import { JsonProgress, TextProgress } from './progress-display.ts';
import { SOFTWARE } from './software.ts';
import { stopSignals } from './stop-signals.ts';

const MOSAICKER_STAGES: ReadonlySet<Stage> = new Set<Stage>(['mosaic', 'tally', 'publish']);
const threadFiles = {
  worker: fileURLToPath(new URL('../worker/thread.ts', import.meta.url)),
  mosaicker: fileURLToPath(new URL('../mosaicker/thread.ts', import.meta.url)),
};

export interface Executed {
  readonly exitCode: number;
  readonly plan?: Plan;
}

/**
 * Runs a basin on the embedded engine in this process. This is where the parts are put together: the coordinator
 * gets a store and an engine, and knows neither by name.
 */
export async function execute(
  basin: BasinFile,
  options: { readonly basinFile: string; readonly threads?: number; readonly log: 'text' | 'json' },
): Promise<Executed> {
  const display =
    options.log === 'json' ? new JsonProgress(pino({}, pino.destination(2))) : new TextProgress(process.stderr);
  const stop = stopSignals((message) => display.note(message, {}));
  const release = await lockFolder(basin.store);
  const store = new LocalStore(basin.store);
  const recorder = new RunRecorder(
    store,
    { basin: basin.region.name, basinFile: options.basinFile, process: process.pid, software: SOFTWARE },
    () => new Date(),
  );
  const engine = new EmbeddedEngine({
    threads: options.threads ?? basin.threads ?? availableParallelism(),
    threadFile: (stage) => (MOSAICKER_STAGES.has(stage) ? threadFiles.mosaicker : threadFiles.worker),
    workerData: { store: basin.store, softwareVersion: SOFTWARE.version },
  });
  try {
    await store.sweep();
    const listener = both(display, recorder);
    const plan = await makePlan(basin, stop.signal);
    const result = await runBasin(plan, { store, engine, listener, signal: stop.signal, software: SOFTWARE });
    recorder.lineage(plan, result.summary);
    await recorder.end(result.gaps ? 'complete-with-gaps' : 'complete');
    return { exitCode: result.gaps ? EXIT.completeWithGaps : EXIT.ok, plan };
  } catch (thrown) {
    if (stop.signal.aborted) {
      await recorder.end('stopped');
      return { exitCode: stop.exitCode() ?? EXIT.interrupted };
    }
    const error = BasinloomError.from(thrown);
    await recorder.end('failed', error.toRecord());
    throw error;
  } finally {
    if (display instanceof TextProgress) display.end();
    stop.dispose();
    await engine.close();
    await release();
  }
}

function both(first: RunListener, second: RunListener): RunListener {
  return {
    stage: (...args) => [first, second].forEach((listener) => void listener.stage(...args)),
    settled: (...args) => [first, second].forEach((listener) => void listener.settled(...args)),
    leftOut: (...args) => [first, second].forEach((listener) => void listener.leftOut(...args)),
    note: (...args) => [first, second].forEach((listener) => void listener.note(...args)),
  };
}
