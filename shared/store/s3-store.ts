import { type S3Access, sharedS3 } from './s3/s3-access.ts';
import { parseS3Location } from './s3/s3-location.ts';
import { isLogPiece, S3Log } from './s3/s3-log.ts';
import { S3Objects } from './s3/s3-objects.ts';
import { abortAbandoned } from './s3/s3-sweep.ts';
import { uploadStream } from './s3/s3-upload.ts';
import type { Store } from './store.ts';
import { checkKey, isContentNamed } from './store-key.ts';

/**
 * A store in object storage: s3://bucket/prefix at any endpoint that speaks S3. An object appears whole or not at
 * all by the nature of S3. Content-named artefacts are written on condition that they are not there yet (where the
 * endpoint knows conditions), so that the second of two writers sends no bytes twice; everything else is replaced.
 *
 * S3 cannot append: see S3Log for how logs are kept.
 */
export class S3Store implements Store {
  readonly place: string;
  readonly #objects: S3Objects;
  readonly #log: S3Log;

  /**
   * @param access the thread's own client unless given
   * @throws BasinloomError STORE_LOCATION
   */
  constructor(location: string, access: S3Access = sharedS3()) {
    const parsed = parseS3Location(location);
    this.place = parsed.place;
    this.#objects = new S3Objects(access, parsed);
    this.#log = new S3Log(this.#objects);
  }

  async get(key: string): Promise<Uint8Array | null> {
    const object = await this.#objects.get(checkKey(key));
    return object && this.#log.whole(key, object);
  }

  async put(key: string, bytes: Uint8Array): Promise<void> {
    // Refused: it is there already, with the same content.
    await this.#objects.put(checkKey(key), bytes, isContentNamed(key) ? { onlyIf: 'new' } : {});
  }

  async putStream(key: string, parts: AsyncIterable<Uint8Array>): Promise<{ size: number; sha256: string }> {
    return uploadStream(this.#objects, checkKey(key), parts);
  }

  async append(key: string, bytes: Uint8Array): Promise<void> {
    await this.#log.append(checkKey(key), bytes);
  }

  async has(key: string): Promise<boolean> {
    return (await this.#objects.head(checkKey(key))) !== null;
  }

  async size(key: string): Promise<number | null> {
    const found = await this.#objects.head(checkKey(key));
    return found && this.#log.size(key, found);
  }

  async list(prefix: string): Promise<string[]> {
    const found = await this.#objects.list(prefix);
    return found.map(({ key }) => key).filter((key) => !isLogPiece(key));
  }

  async delete(key: string): Promise<void> {
    await this.#objects.delete(checkKey(key));
    await this.#log.forget(key);
  }

  async sweep(): Promise<number> {
    return abortAbandoned(this.#objects, Date.now());
  }
}
