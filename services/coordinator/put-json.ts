import type { Store } from '../../shared/store/store.ts';
import { canonicalJson } from './artefact-key.ts';

/** Leaves an artefact of JSON text, unless it is there: its name says what it holds. */
export async function putJson(store: Store, key: string, value: unknown): Promise<void> {
  if (!(await store.has(key))) await store.put(key, Buffer.from(canonicalJson(value)));
}
