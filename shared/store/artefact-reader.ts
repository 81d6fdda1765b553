import { BasinloomError } from '../contract/errors.ts';
import type { Plan } from '../contract/plan.ts';
import { type DecodedPlanes, decodePlanes } from '../raster/tile-codec.ts';
import type { Store } from './store.ts';

/** Bytes of an artefact that must be there. @throws BasinloomError ARTEFACT_CORRUPT, STORE_READ */
export async function readArtefact(store: Store, key: string): Promise<Uint8Array> {
  const bytes = await store.get(key);
  if (!bytes) throw new BasinloomError('ARTEFACT_CORRUPT', { key, detail: 'it is missing from the store' });
  return bytes;
}

/** An object of JSON text, or null when it is not there. @throws BasinloomError STORE_READ */
export async function findJson<T>(store: Store, key: string): Promise<T | null> {
  const bytes = await store.get(key);
  return bytes ? (JSON.parse(Buffer.from(bytes).toString('utf8')) as T) : null;
}

/** An artefact of JSON text. @throws BasinloomError ARTEFACT_CORRUPT, STORE_READ */
export async function readJson<T>(store: Store, key: string): Promise<T> {
  return JSON.parse(Buffer.from(await readArtefact(store, key)).toString('utf8')) as T;
}

/** What the jobs of one thread read of what earlier stages left. */
export class ArtefactReader {
  readonly store: Store;
  #plan: { key: string; plan: Promise<Plan> } | undefined;

  constructor(store: Store) {
    this.store = store;
  }

  /** The plan of a key; the last one is kept. @throws BasinloomError ARTEFACT_CORRUPT, STORE_READ */
  async plan(key: string): Promise<Plan> {
    if (this.#plan?.key !== key) this.#plan = { key, plan: this.json<Plan>(key) };
    return this.#plan.plan;
  }

  /** Planes of an artefact. @throws BasinloomError ARTEFACT_CORRUPT, STORE_READ */
  async planes(key: string, wanted?: readonly string[]): Promise<DecodedPlanes> {
    return decodePlanes(await readArtefact(this.store, key), key, wanted);
  }

  /** @throws BasinloomError ARTEFACT_CORRUPT, STORE_READ */
  json<T>(key: string): Promise<T> {
    return readJson<T>(this.store, key);
  }
}
