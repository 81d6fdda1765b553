import { createHash } from 'node:crypto';
import { open } from 'node:fs/promises';
import { BasinloomError } from '../contract/errors.ts';

const SAMPLE_BYTES = 65536;

/**
 * Identity of a file without reading all of it: size, time of change, and a hash of its first, middle and last
 * 64 KiB. A file that is replaced, cut or changed in place gets another one.
 *
 * @throws BasinloomError RASTER_MISSING, RASTER_READ
 */
export async function fingerprintFile(path: string): Promise<string> {
  try {
    const file = await open(path, 'r');
    try {
      const { size, mtimeMs } = await file.stat();
      const hash = createHash('sha256').update(`${size} ${Math.round(mtimeMs)}`);
      for (const at of [0, Math.floor(size / 2), Math.max(0, size - SAMPLE_BYTES)]) {
        const { buffer, bytesRead } = await file.read(Buffer.alloc(SAMPLE_BYTES), 0, SAMPLE_BYTES, at);
        hash.update(buffer.subarray(0, bytesRead));
      }
      return hash.digest('hex').slice(0, 32);
    } finally {
      await file.close();
    }
  } catch (error) {
    if ((error as NodeJS.ErrnoException).code === 'ENOENT') throw new BasinloomError('RASTER_MISSING', { file: path });
    throw new BasinloomError('RASTER_READ', { file: path, detail: (error as Error).message }, { cause: error });
  }
}
