import { BasinloomError } from '../../shared/contract/errors.ts';
import type { Store } from '../../shared/store/store.ts';
import type { RunRecord } from './run-record.ts';

/**
 * The record of a run in a store, the latest when no id is given (ids begin with the time).
 *
 * @throws BasinloomError RUN_NOT_FOUND
 */
export async function findRun(store: Store, id?: string): Promise<RunRecord> {
  const keys = (await store.list('runs/')).filter((key) => key.endsWith('/run.json'));
  const key = id ? keys.find((candidate) => candidate === `runs/${id}/run.json`) : keys.at(-1);
  const bytes = key && (await store.get(key));
  if (!bytes) throw new BasinloomError('RUN_NOT_FOUND', { path: store.place });
  return JSON.parse(Buffer.from(bytes).toString('utf8')) as RunRecord;
}
