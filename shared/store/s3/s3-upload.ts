import { createHash, randomUUID } from 'node:crypto';
import { Readable } from 'node:stream';
import type { S3Objects } from './s3-objects.ts';

/** Size of a part: 10,000 of them, which S3 allows, make an object of 160 GB. */
export const PART_BYTES = 16 * 1024 * 1024;
/** Parts on the way at once; with the one that fills, what an upload holds in memory. */
const PARTS_AT_ONCE = 2;

/**
 * Writes an object from a stream of parts. Nothing is seen of it before its end; a failure leaves what was there.
 *
 * @throws BasinloomError of the source, or STORE_WRITE and its like
 */
export async function uploadStream(
  objects: S3Objects,
  key: string,
  parts: AsyncIterable<Uint8Array>,
): Promise<{ size: number; sha256: string }> {
  const { client } = await objects.access.open();
  const { Upload } = await import('@aws-sdk/lib-storage');
  const hash = createHash('sha256');
  let size = 0;
  let broken: { readonly error: unknown } | undefined;
  async function* counted(): AsyncGenerator<Uint8Array> {
    try {
      for await (const part of parts) {
        hash.update(part);
        size += part.byteLength;
        yield part;
      }
    } catch (error) {
      broken = { error };
      throw error;
    }
  }
  const mark = randomUUID();
  const upload = new Upload({
    client,
    params: { ...objects.target(key), Body: Readable.from(counted()), Metadata: { 'basinloom-write': mark } },
    partSize: PART_BYTES,
    queueSize: PARTS_AT_ONCE,
  });
  try {
    await upload.done();
  } catch (error) {
    if (broken) throw objects.failure(broken.error, 'STORE_WRITE', key);
    if ((error as Error).name !== 'NoSuchUpload' || !(await isThere(objects, key, mark))) {
      // The source is used up, so this job fails; its next try goes without checksums.
      objects.doWithout(error, { conditional: false, checksums: true });
      throw objects.failure(error, 'STORE_WRITE', key);
    }
  }
  return { size, sha256: hash.digest('hex') };
}

/** An answer may be lost after the upload was completed; repeated, it finds no upload any more. */
async function isThere(objects: S3Objects, key: string, mark: string): Promise<boolean> {
  return (await objects.head(key))?.metadata['basinloom-write'] === mark;
}
