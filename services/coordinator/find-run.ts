import { BasinloomError } from '../../shared/contract/errors.ts';
import type { LeftOut } from '../../shared/contract/plan.ts';
import { findJson } from '../../shared/store/artefact-reader.ts';
import type { Store } from '../../shared/store/store.ts';
import type { RunRecord, RunState } from './run-record.ts';

/** runs/<run>/failures.json: what a run went on without. */
export interface FailureRecord {
  readonly run: string;
  readonly state: RunState;
  /** What the products lack; `basinloom run --failed` tries it again. */
  readonly failures: readonly LeftOut[];
  /** What was left out and leaves no gap. */
  readonly notes: readonly LeftOut[];
}

/**
 * The record of a run in a store, the latest when no id is given (ids begin with the time).
 *
 * @throws BasinloomError RUN_NOT_FOUND
 */
export async function findRun(store: Store, id?: string): Promise<RunRecord> {
  const keys = (await store.list('runs/')).filter((key) => key.endsWith('/run.json'));
  const key = id ? keys.find((candidate) => candidate === `runs/${id}/run.json`) : keys.at(-1);
  const record = key && (await findJson<RunRecord>(store, key));
  if (!record) throw new BasinloomError('RUN_NOT_FOUND', { path: store.place });
  return record;
}

/** What a run went on without; nothing yet for one that has not ended. @throws BasinloomError RUN_NOT_FOUND */
export async function findFailures(store: Store, id?: string): Promise<FailureRecord> {
  const { id: run, state } = await findRun(store, id);
  const record = await findJson<FailureRecord>(store, `runs/${run}/failures.json`);
  return record ?? { run, state, failures: [], notes: [] };
}
