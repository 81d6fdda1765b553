import { mkdir, open, readFile, rm } from 'node:fs/promises';
import { join } from 'node:path';
import { BasinloomError } from '../contract/errors.ts';
import { isAlive } from './process-alive.ts';

/**
 * Keeps two runs out of one output folder. The lock is a file with the number of the process; one left by a
 * process that is gone is taken over.
 *
 * @returns the function that releases the lock
 * @throws BasinloomError RUN_LOCKED, STORE_WRITE
 */
export async function lockFolder(folder: string): Promise<() => Promise<void>> {
  const path = join(folder, '.lock');
  for (let attempt = 0; attempt < 2; attempt++) {
    try {
      await mkdir(folder, { recursive: true });
      const file = await open(path, 'wx');
      await file.writeFile(String(process.pid));
      await file.close();
      return () => rm(path, { force: true });
    } catch (error) {
      if ((error as NodeJS.ErrnoException).code !== 'EEXIST') {
        throw new BasinloomError('STORE_WRITE', { path, detail: (error as Error).message }, { cause: error });
      }
      const pid = Number(await readFile(path, 'utf8').catch(() => ''));
      if (isHeld(pid)) throw new BasinloomError('RUN_LOCKED', { path: folder, pid });
      await rm(path, { force: true });
    }
  }
  throw new BasinloomError('RUN_LOCKED', { path: folder, pid: 'unknown' });
}

/** A lock without a number was left half-written; one with our own number is that of an earlier process. */
function isHeld(pid: number): boolean {
  return Number.isInteger(pid) && pid > 0 && pid !== process.pid && isAlive(pid);
}
