import type { BasinFile } from '../../shared/contract/basin-file.ts';
import { BasinloomError } from '../../shared/contract/errors.ts';
import type { Plan } from '../../shared/contract/plan.ts';
import type { Engine } from '../../shared/engine/engine.ts';
import type { Store } from '../../shared/store/store.ts';
import { makePlan } from './make-plan.ts';
import { type RunListener, tellAll } from './progress.ts';
import { runBasin } from './run-basin.ts';
import { type RunHead, RunRecorder, type RunState } from './run-record.ts';

export interface CarryOutPorts {
  readonly store: Store;
  readonly engine: Engine;
  readonly listener: RunListener;
  readonly signal: AbortSignal;
  readonly now: () => Date;
}

export interface CarriedOut {
  readonly state: Exclude<RunState, 'running' | 'failed'>;
  readonly plan?: Plan;
}

/**
 * One run from its basin file to its record's last line: plans, runs, and records how it ended. The caller holds
 * the store's lock.
 *
 * @throws BasinloomError when the run failed as a whole; the record says so too
 */
export async function carryOut(basin: BasinFile, head: RunHead, ports: CarryOutPorts): Promise<CarriedOut> {
  const { store, engine, signal } = ports;
  const recorder = new RunRecorder(store, head, ports.now);
  try {
    await store.sweep();
    const listener = tellAll([ports.listener, recorder]);
    const plan = await makePlan(basin, signal);
    const result = await runBasin(plan, { store, engine, listener, signal, software: head.software });
    recorder.lineage(plan, result.summary);
    await store.sweep();
    const state = result.gaps ? 'complete-with-gaps' : 'complete';
    await recorder.end(state);
    return { state, plan };
  } catch (thrown) {
    if (signal.aborted) {
      await recorder.end('stopped');
      return { state: 'stopped' };
    }
    const error = BasinloomError.from(thrown);
    await recorder.end('failed', error.toRecord());
    throw error;
  }
}
