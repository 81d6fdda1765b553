import { open } from 'node:fs/promises';
import { BasinloomError } from '../contract/errors.ts';
import type { ByteSource } from './byte-source.ts';

/** Opens a file for reading. @throws BasinloomError RASTER_MISSING, RASTER_READ */
export async function openFile(path: string): Promise<ByteSource> {
  const handle = await open(path, 'r').catch((error: NodeJS.ErrnoException) => {
    throw error.code === 'ENOENT' ? new BasinloomError('RASTER_MISSING', { file: path }) : unreadable(path, error);
  });
  const { size } = await handle.stat();
  return {
    name: path,
    size,
    async read(offset, length) {
      // Before the buffer is made: a damaged header may ask for any length.
      if (!(offset + length <= size)) throw truncated(path, size);
      const bytes = Buffer.allocUnsafe(length);
      let done = 0;
      while (done < length) {
        const { bytesRead } = await handle.read(bytes, done, length - done, offset + done).catch((error: Error) => {
          throw unreadable(path, error);
        });
        if (bytesRead === 0) throw truncated(path, offset + done);
        done += bytesRead;
      }
      return bytes;
    },
    close: () => handle.close(),
  };
}

function unreadable(file: string, error: Error): BasinloomError {
  return new BasinloomError('RASTER_READ', { file, detail: error.message }, { cause: error });
}

function truncated(file: string, byte: number): BasinloomError {
  return new BasinloomError('RASTER_TRUNCATED', { file, place: `byte ${byte}` });
}
