import { resolve } from 'node:path';
import { BasinloomError } from '../contract/errors.ts';
import { LocalLockFile } from './local-lock-file.ts';
import { forgetRecord, isHeld, type LockFile, newRecord } from './lock-file.ts';
import { isS3 } from './open-store.ts';
import { type S3Access, sharedS3 } from './s3/s3-access.ts';
import { parseS3Location } from './s3/s3-location.ts';
import { S3LockFile } from './s3/s3-lock-file.ts';
import { S3Objects } from './s3/s3-objects.ts';

/** How often the holder gives a sign of life, ms. */
const REFRESH_MS = 20_000;
/** A lock that changes hands while we look is looked at again so often. */
const LOOKS = 5;

/**
 * Keeps two runs out of one store. The lock names host and process and is refreshed three times a minute. One left by a
 * dead process of this host is taken over at once, one of another host when it was not refreshed for two minutes.
 *
 * @param access of an S3 store, the thread's own unless given
 * @returns the function that releases the lock, if it is still ours
 * @throws BasinloomError RUN_LOCKED, STORE_WRITE, STORE_FULL, STORE_LOCATION
 */
export async function lockStore(location: string, access?: S3Access): Promise<() => Promise<void>> {
  const file = lockFileOf(location, access);
  const record = newRecord();
  try {
    await acquire(file, record, location);
  } catch (error) {
    forgetRecord(record);
    throw error;
  }
  const refresh = () => void file.refresh({ ...record, refreshed: new Date().toISOString() }).catch(() => {});
  const timer = setInterval(refresh, REFRESH_MS).unref();
  return async () => {
    clearInterval(timer);
    forgetRecord(record);
    // A lock that cannot be removed lapses by itself; the run is done all the same.
    await file.remove(record).catch(() => {});
  };
}

function lockFileOf(location: string, access: S3Access | undefined): LockFile {
  if (!isS3(location)) return new LocalLockFile(resolve(location));
  return new S3LockFile(new S3Objects(access ?? sharedS3(), parseS3Location(location)));
}

async function acquire(file: LockFile, record: ReturnType<typeof newRecord>, location: string): Promise<void> {
  let holder = 'unknown';
  for (let look = 0; look < LOOKS; look++) {
    const found = await file.read();
    if (!found) {
      if (await file.create(record)) return;
    } else if (!isHeld(found, Date.now())) {
      if (await file.takeOver(found, record)) return;
    } else {
      if (found.record) holder = `${found.record.pid} on ${found.record.host}`;
      break;
    }
  }
  throw new BasinloomError('RUN_LOCKED', { path: location, pid: holder });
}
