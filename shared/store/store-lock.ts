import { mkdir, open, readFile, rm } from 'node:fs/promises';
import { join } from 'node:path';
import { BasinloomError } from '../contract/errors.ts';

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
      if (isAlive(pid)) throw new BasinloomError('RUN_LOCKED', { path: folder, pid });
      await rm(path, { force: true });
    }
  }
  throw new BasinloomError('RUN_LOCKED', { path: folder, pid: 'unknown' });
}

function isAlive(pid: number): boolean {
  if (!Number.isInteger(pid) || pid <= 0 || pid === process.pid) return false;
  try {
    process.kill(pid, 0);
    return true;
  } catch (error) {
    // EPERM: it lives, under another user.
    return (error as NodeJS.ErrnoException).code === 'EPERM';
  }
}
