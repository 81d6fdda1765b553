import { availableParallelism, hostname } from 'node:os';
import { fileURLToPath } from 'node:url';
import { pino } from 'pino';
import type { BasinFile } from '../../shared/contract/basin-file.ts';
import { EXIT } from '../../shared/contract/exit-codes.ts';
import { serviceOf } from '../../shared/contract/jobs.ts';
import type { Plan } from '../../shared/contract/plan.ts';
import { redisAddress } from '../../shared/engine/bullmq/address.ts';
import { BullmqEngine } from '../../shared/engine/bullmq/bullmq-engine.ts';
import { JobQueues } from '../../shared/engine/bullmq/job-queues.ts';
import { EmbeddedEngine } from '../../shared/engine/embedded-engine.ts';
import type { Engine } from '../../shared/engine/engine.ts';
import { SOFTWARE } from '../../shared/service/software.ts';
import { openStore } from '../../shared/store/open-store.ts';
import type { Store } from '../../shared/store/store.ts';
import { lockStore } from '../../shared/store/store-lock.ts';
import { type CarriedOut, carryOut } from '../coordinator/carry-out.ts';
import { findRun } from '../coordinator/find-run.ts';
import { LogProgress } from '../coordinator/log-progress.ts';
import { newRunId, type RunHead } from '../coordinator/run-record.ts';
import { TextProgress } from './progress-display.ts';
import { type StopSignals, stopSignals } from './stop-signals.ts';

const threadFiles = {
  worker: fileURLToPath(new URL('../worker/thread.ts', import.meta.url)),
  mosaicker: fileURLToPath(new URL('../mosaicker/thread.ts', import.meta.url)),
};

export interface Executed {
  readonly exitCode: number;
  readonly plan?: Plan;
}

/**
 * Runs a basin from this process. This is where the parts are put together: the coordinator gets a store and an
 * engine, and knows neither by name.
 */
export async function execute(
  basin: BasinFile,
  options: { readonly basinFile: string; readonly threads?: number; readonly log: 'text' | 'json' },
): Promise<Executed> {
  const display =
    options.log === 'json' ? new LogProgress(pino({}, pino.destination(2))) : new TextProgress(process.stderr);
  const stop = stopSignals((message) => display.note(message, {}));
  const release = await lockStore(basin.store);
  const store = openStore(basin.store);
  let engine: Engine | undefined;
  try {
    const head = await runHead(store, basin, options.basinFile);
    engine = await openEngine(basin, head.id, { threads: options.threads, note: (text) => display.note(text, {}) });
    const { state, plan } = await carryOut(basin, head, {
      store,
      engine,
      listener: display,
      signal: stop.signal,
      now: () => new Date(),
    });
    return { exitCode: exitCodeOf(state, stop), ...(plan && { plan }) };
  } finally {
    if (display instanceof TextProgress) display.end();
    stop.dispose();
    await engine?.close();
    await release();
  }
}

function exitCodeOf(state: CarriedOut['state'], stop: StopSignals): number {
  if (state === 'stopped') return stop.exitCode() ?? EXIT.interrupted;
  return state === 'complete' ? EXIT.ok : EXIT.completeWithGaps;
}

/** A run whose process died goes on under its own id, so that its jobs in a queue are its own still. */
async function runHead(store: Store, basin: BasinFile, basinFile: string): Promise<RunHead> {
  const started = new Date();
  const here = { basin: basin.region.name, basinFile, host: hostname(), process: process.pid, software: SOFTWARE };
  const last = await findRun(store).catch(() => null);
  if (last?.state === 'running' && last.basinFile === basinFile) return { ...here, id: last.id, started: last.started };
  return { ...here, id: newRunId(started, process.pid), started: started.toISOString() };
}

async function openEngine(
  basin: BasinFile,
  run: string,
  { threads, note }: { readonly threads: number | undefined; readonly note: (text: string) => void },
): Promise<Engine> {
  if (basin.engine === 'embedded') {
    return new EmbeddedEngine({
      threads: threads ?? basin.threads ?? availableParallelism(),
      threadFile: (stage) => threadFiles[serviceOf(stage)],
      run,
      store: basin.store,
    });
  }
  const queues = await JobQueues.open(redisAddress(basin.engine, process.env), SOFTWARE.version, (error) =>
    note(`Redis: ${error.message}`),
  );
  return new BullmqEngine({ queues, run, store: basin.store, onClose: () => queues.close() });
}
