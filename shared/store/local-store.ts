import { createHash } from 'node:crypto';
import {
  appendFile,
  type FileHandle,
  mkdir,
  open,
  opendir,
  readdir,
  readFile,
  rename,
  rm,
  stat,
} from 'node:fs/promises';
import { dirname, join, resolve } from 'node:path';
import { BasinloomError } from '../contract/errors.ts';
import type { Store } from './store.ts';
import { checkKey } from './store-key.ts';
import { isAbandoned, TEMPORARY, temporaryName } from './temporary-name.ts';

const isMissing = (error: unknown): boolean => {
  const code = (error as NodeJS.ErrnoException).code;
  return code === 'ENOENT' || code === 'ENOTDIR';
};

/** A write that failed; a full disk has a code of its own, because jobs wait for that. */
export function writeFailure(error: unknown, path: string): BasinloomError {
  if (error instanceof BasinloomError) return error;
  const { code, message } = error as NodeJS.ErrnoException;
  const full = code === 'ENOSPC' || code === 'EDQUOT';
  return new BasinloomError(full ? 'STORE_FULL' : 'STORE_WRITE', { path, detail: message }, { cause: error });
}

/**
 * A store in a folder. Writes go to a temporary name beside the target, are synced and renamed, and the folder is
 * synced too, so that a crash or a power cut leaves the whole object or none. Several machines may write to the folder over NFS: a
 * temporary name tells whose it is.
 */
export class LocalStore implements Store {
  readonly place: string;

  constructor(folder: string) {
    this.place = resolve(folder);
  }

  /** The file of a key. @throws BasinloomError INTERNAL for a key that is not a plain relative path */
  path(key: string): string {
    return join(this.place, checkKey(key));
  }

  async get(key: string): Promise<Uint8Array | null> {
    const path = this.path(key);
    try {
      return (await readIfThere(path)) ?? (await readAfterLooking(path));
    } catch (error) {
      throw new BasinloomError('STORE_READ', { path, detail: (error as Error).message }, { cause: error });
    }
  }

  async put(key: string, bytes: Uint8Array): Promise<void> {
    await this.#replace(key, (file) => file.writeFile(bytes));
  }

  async putStream(key: string, parts: AsyncIterable<Uint8Array>): Promise<{ size: number; sha256: string }> {
    const hash = createHash('sha256');
    let size = 0;
    await this.#replace(key, async (file) => {
      for await (const part of parts) {
        hash.update(part);
        size += part.byteLength;
        await file.writeFile(part);
      }
    });
    return { size, sha256: hash.digest('hex') };
  }

  async append(key: string, bytes: Uint8Array): Promise<void> {
    const path = this.path(key);
    try {
      await mkdir(dirname(path), { recursive: true });
      await appendFile(path, bytes);
    } catch (error) {
      throw writeFailure(error, path);
    }
  }

  async has(key: string): Promise<boolean> {
    return (await this.size(key)) !== null;
  }

  /** Bytes of an object, or null when it is not there. */
  async size(key: string): Promise<number | null> {
    try {
      return (await stat(this.path(key))).size;
    } catch (error) {
      if (isMissing(error)) return null;
      throw new BasinloomError('STORE_READ', { path: this.path(key), detail: (error as Error).message });
    }
  }

  async list(prefix: string): Promise<string[]> {
    const folder = prefix.includes('/') ? prefix.slice(0, prefix.lastIndexOf('/')) : '';
    const entries = await this.#entries(folder);
    return entries
      .filter((entry) => !entry.includes(TEMPORARY))
      .map((entry) => (folder ? `${folder}/${entry}` : entry))
      .filter((key) => key.startsWith(prefix))
      .sort();
  }

  async delete(key: string): Promise<void> {
    const path = this.path(key);
    try {
      await rm(path, { force: true });
    } catch (error) {
      if (!isMissing(error)) throw writeFailure(error, path);
    }
  }

  async sweep(): Promise<number> {
    const left = (await this.#entries('')).filter((entry) => entry.includes(TEMPORARY));
    let removed = 0;
    for (const entry of left) {
      const path = join(this.place, entry);
      const found = await stat(path).catch(() => null);
      if (!found || !isAbandoned(entry, found.mtimeMs, Date.now())) continue;
      await rm(path, { force: true }).catch((error) => {
        throw writeFailure(error, path);
      });
      removed++;
    }
    return removed;
  }

  async #entries(folder: string): Promise<string[]> {
    try {
      const found = await readdir(join(this.place, folder), { recursive: true, withFileTypes: true });
      const root = join(this.place, folder);
      return found
        .filter((entry) => entry.isFile())
        .map((entry) =>
          join(entry.parentPath, entry.name)
            .slice(root.length + 1)
            .replaceAll('\\', '/'),
        );
    } catch (error) {
      if (isMissing(error)) return [];
      throw new BasinloomError('STORE_READ', { path: folder, detail: (error as Error).message }, { cause: error });
    }
  }

  async #replace(key: string, write: (file: FileHandle) => Promise<void>): Promise<void> {
    const path = this.path(key);
    const temporary = join(dirname(path), temporaryName());
    try {
      await mkdir(dirname(path), { recursive: true });
      const file = await open(temporary, 'wx');
      try {
        await write(file);
        await file.sync();
      } finally {
        await file.close();
      }
      await rename(temporary, path);
      await syncFolder(dirname(path));
    } catch (error) {
      await rm(temporary, { force: true }).catch(() => {});
      throw writeFailure(error, path);
    }
  }
}

async function readIfThere(path: string): Promise<Uint8Array | null> {
  try {
    return await readFile(path);
  } catch (error) {
    if (isMissing(error)) return null;
    throw error;
  }
}

/** NFS remembers for a while that a file is not there; to open its folder makes it ask the server again. */
async function readAfterLooking(path: string): Promise<Uint8Array | null> {
  try {
    await (await opendir(dirname(path))).close();
  } catch (error) {
    if (isMissing(error)) return null;
    throw error;
  }
  return readIfThere(path);
}

/** Makes a rename durable. Some file systems cannot sync a folder; their rename is as durable as it gets. */
async function syncFolder(folder: string): Promise<void> {
  const handle = await open(folder, 'r');
  try {
    await handle.sync();
  } catch (error) {
    const code = (error as NodeJS.ErrnoException).code;
    if (code !== 'EINVAL' && code !== 'EPERM' && code !== 'ENOTSUP') throw error;
  } finally {
    await handle.close();
  }
}
