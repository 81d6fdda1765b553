import { BasinloomError } from '../../shared/contract/errors.ts';
import type { Plan } from '../../shared/contract/plan.ts';
import { type DecodedPlanes, decodePlanes } from '../../shared/raster/tile-codec.ts';
import type { Store } from '../../shared/store/store.ts';

/** What the jobs of one mosaicker thread share. */
export class MosaickerContext {
  readonly store: Store;
  /** Version that goes into product files. */
  readonly softwareVersion: string;
  #plan: { key: string; plan: Promise<Plan> } | undefined;

  constructor(store: Store, softwareVersion: string) {
    this.store = store;
    this.softwareVersion = softwareVersion;
  }

  async plan(key: string): Promise<Plan> {
    if (this.#plan?.key !== key) this.#plan = { key, plan: this.json<Plan>(key) };
    return this.#plan.plan;
  }

  /** Planes of an artefact. @throws BasinloomError ARTEFACT_CORRUPT, STORE_READ */
  async planes(key: string, wanted?: readonly string[]): Promise<DecodedPlanes> {
    return decodePlanes(await this.#bytes(key), key, wanted);
  }

  async json<T>(key: string): Promise<T> {
    return JSON.parse(Buffer.from(await this.#bytes(key)).toString('utf8')) as T;
  }

  async #bytes(key: string): Promise<Uint8Array> {
    const bytes = await this.store.get(key);
    if (!bytes) throw new BasinloomError('ARTEFACT_CORRUPT', { key, detail: 'it is missing from the store' });
    return bytes;
  }
}
