import { BasinloomError } from '../contract/errors.ts';
import type { ByteSource } from './byte-source.ts';

/** Bytes in memory as a source. */
export function memorySource(bytes: Uint8Array, name = 'memory'): ByteSource {
  return {
    name,
    size: bytes.length,
    async read(offset, length) {
      if (!(offset + length <= bytes.length)) {
        throw new BasinloomError('RASTER_TRUNCATED', { file: name, place: `byte ${bytes.length}` });
      }
      return new Uint8Array(bytes.subarray(offset, offset + length));
    },
    async close() {},
  };
}
