import type { ListMultipartUploadsCommandOutput } from '@aws-sdk/client-s3';
import { isMissing, isNotImplemented, statusOf } from './s3-failure.ts';
import type { S3Objects } from './s3-objects.ts';

/** An upload begun so long ago is nobody's, ms. */
const ABANDONED_MS = 3_600_000;

/**
 * Aborts the uploads that killed processes left half-done: their parts cost space and no listing shows them. An
 * endpoint that cannot tell its uploads has none to remove.
 *
 * @throws BasinloomError STORE_READ, STORE_WRITE
 */
export async function abortAbandoned(objects: S3Objects, now: number): Promise<number> {
  const { client, sdk } = await objects.access.open();
  const { Bucket, Key: Prefix } = objects.target('');
  let aborted = 0;
  let page: ListMultipartUploadsCommandOutput | undefined;
  do {
    try {
      page = await client.send(
        new sdk.ListMultipartUploadsCommand({
          Bucket,
          Prefix,
          KeyMarker: page?.NextKeyMarker,
          UploadIdMarker: page?.NextUploadIdMarker,
        }),
      );
    } catch (error) {
      if (isNotImplemented(error) || statusOf(error) === 405) return aborted;
      throw objects.failure(error, 'STORE_READ', '');
    }
    for (const { Key, UploadId, Initiated } of page.Uploads ?? []) {
      if (!Initiated || now - Initiated.getTime() <= ABANDONED_MS) continue;
      try {
        await client.send(new sdk.AbortMultipartUploadCommand({ Bucket, Key, UploadId }));
        aborted++;
      } catch (error) {
        if ((error as Error).name !== 'NoSuchUpload' && !isMissing(error)) {
          throw objects.failure(error, 'STORE_WRITE', Key?.slice(objects.location.prefix.length) ?? '');
        }
      }
    }
  } while (page.IsTruncated);
  return aborted;
}
