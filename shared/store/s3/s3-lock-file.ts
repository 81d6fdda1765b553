import { setTimeout as sleep } from 'node:timers/promises';
import { decodeLock, encodeLock, type FoundLock, type LockFile, type LockRecord } from '../lock-file.ts';
import type { PutOptions, S3Objects } from './s3-objects.ts';

const KEY = '.lock';
/** Longer than a write of a lock takes: after that, the last of several writers is known. */
const SETTLE_MS = 2000;

/**
 * A lock as an object. Where the endpoint knows conditional writes, one of many wins for certain. An endpoint may
 * also overlook conditions without a word; so the winner writes once more under the same condition, which is false now.
 * Where that is not refused, the winner is whose lock is still there after a while.
 */
export class S3LockFile implements LockFile {
  readonly #objects: S3Objects;

  constructor(objects: S3Objects) {
    this.#objects = objects;
  }

  async read(): Promise<FoundLock | null> {
    const object = await this.#objects.get(KEY);
    if (!object) return null;
    const record = decodeLock(object.bytes);
    // What cannot be read was never a lock of ours, for an object is written whole.
    return { record, alive: record ? Date.parse(record.refreshed) : 0, version: object.etag };
  }

  async create(record: LockRecord): Promise<boolean> {
    return this.#win(record, 'new');
  }

  async takeOver(stale: FoundLock, record: LockRecord): Promise<boolean> {
    return this.#win(record, { etag: stale.version });
  }

  async refresh(record: LockRecord): Promise<void> {
    const found = await this.read();
    if (found?.record?.token === record.token) {
      await this.#objects.put(KEY, encodeLock(record), { onlyIf: { etag: found.version } });
    }
  }

  async remove(record: LockRecord): Promise<void> {
    if (await this.#isOurs(record)) await this.#objects.delete(KEY);
  }

  async #win(record: LockRecord, onlyIf: PutOptions['onlyIf']): Promise<boolean> {
    const put = () => this.#objects.put(KEY, encodeLock(record), { onlyIf });
    // Refused may also mean that an answer was lost and the repeated request found our own lock.
    await put();
    if (!(await this.#isOurs(record))) return false;
    if ((await put()) === 'refused') return true;
    await sleep(SETTLE_MS);
    return this.#isOurs(record);
  }

  async #isOurs({ token }: LockRecord): Promise<boolean> {
    return (await this.read())?.record?.token === token;
  }
}
