import { type FileHandle, mkdir, open, readFile, rename, rm, stat } from 'node:fs/promises';
import { join } from 'node:path';
import { BasinloomError } from '../contract/errors.ts';
import { writeFailure } from './local-store.ts';
import { decodeLock, encodeLock, type FoundLock, type LockFile, type LockRecord } from './lock-file.ts';
import { temporaryName } from './temporary-name.ts';

/** A claim older than this was left by a process that died, ms. */
const CLAIM_MS = 60_000;

const codeOf = (error: unknown) => (error as NodeJS.ErrnoException).code;

/**
 * A lock as a file, created exclusively. The file stays open: a sign of life is written into the file that we made,
 * so it can never overwrite the lock of whoever took over.
 */
export class LocalLockFile implements LockFile {
  readonly #folder: string;
  readonly #path: string;
  readonly #claimPath: string;
  #file: FileHandle | undefined;

  constructor(folder: string) {
    this.#folder = folder;
    this.#path = join(folder, '.lock');
    this.#claimPath = join(folder, '.lock-claim');
  }

  async read(): Promise<FoundLock | null> {
    return readLock(this.#path);
  }

  async create(record: LockRecord): Promise<boolean> {
    let file: FileHandle | undefined;
    try {
      await mkdir(this.#folder, { recursive: true });
      file = await open(this.#path, 'wx');
      await file.writeFile(encodeLock(record));
      await file.sync();
      this.#file = file;
      return true;
    } catch (error) {
      if (!file && codeOf(error) === 'EEXIST') return false;
      await file?.close().catch(() => {});
      if (file) await rm(this.#path, { force: true });
      throw writeFailure(error, this.#path);
    }
  }

  /**
   * Our lock replaces the stale one by a rename, so that at no moment there is none. A claim, created exclusively,
   * lets one process at a time do this, and it looks again first: the stale lock may be gone by then.
   */
  async takeOver(stale: FoundLock, record: LockRecord): Promise<boolean> {
    if (!(await this.#claim())) return false;
    const temporary = join(this.#folder, temporaryName());
    try {
      if ((await this.read())?.version !== stale.version) return false;
      const file = await open(temporary, 'wx');
      this.#file = file;
      await file.writeFile(encodeLock(record));
      await file.sync();
      await rename(temporary, this.#path);
      return true;
    } catch (error) {
      await this.#file?.close().catch(() => {});
      this.#file = undefined;
      await rm(temporary, { force: true }).catch(() => {});
      throw writeFailure(error, this.#path);
    } finally {
      await rm(this.#claimPath, { force: true });
    }
  }

  async #claim(): Promise<boolean> {
    try {
      await (await open(this.#claimPath, 'wx')).close();
      return true;
    } catch (error) {
      if (codeOf(error) !== 'EEXIST') throw writeFailure(error, this.#claimPath);
      // Its process died within the few milliseconds that a claim lasts.
      const claimed = await stat(this.#claimPath).catch(() => null);
      if (claimed && Date.now() - claimed.mtimeMs > CLAIM_MS) await rm(this.#claimPath, { force: true });
      return false;
    }
  }

  async refresh(record: LockRecord): Promise<void> {
    const bytes = encodeLock(record);
    await this.#file?.write(bytes, 0, bytes.length, 0);
    await this.#file?.sync();
  }

  async remove({ token }: LockRecord): Promise<void> {
    await this.#file?.close();
    this.#file = undefined;
    if ((await this.read())?.record?.token === token) await rm(this.#path, { force: true });
  }
}

async function readLock(path: string): Promise<FoundLock | null> {
  try {
    const bytes = await readFile(path);
    const record = decodeLock(bytes);
    if (record) return { record, alive: Date.parse(record.refreshed), version: `${record.token} ${record.refreshed}` };
    const { mtimeMs, ino } = await stat(path);
    return { record, alive: mtimeMs, version: `unreadable ${ino} ${mtimeMs}` };
  } catch (error) {
    if (codeOf(error) === 'ENOENT') return null;
    throw new BasinloomError('STORE_READ', { path, detail: (error as Error).message }, { cause: error });
  }
}
