import { BasinloomError } from '../../contract/errors.ts';
import { isKey } from '../store-key.ts';

export interface S3Location {
  readonly bucket: string;
  /** What every object key begins with: "" or "folder/". */
  readonly prefix: string;
  /** The location without an end slash. */
  readonly place: string;
}

/** s3://bucket or s3://bucket/prefix. @throws BasinloomError STORE_LOCATION */
export function parseS3Location(location: string): S3Location {
  const [, bucket = '', rest = ''] = /^s3:\/\/([^/]*)\/?(.*)$/s.exec(location) ?? [];
  const wrong = (detail: string) => new BasinloomError('STORE_LOCATION', { location, detail });
  if (!isBucketName(bucket)) {
    throw wrong(`"${bucket}" is not a bucket name (3 to 63 of a-z, 0-9, "-" and ".")`);
  }
  const prefix = rest.replace(/\/+$/, '');
  if (prefix && !isKey(prefix)) throw wrong('a prefix is made of letters, digits, ".", "_", "-" and "/"');
  return { bucket, prefix: prefix && `${prefix}/`, place: `s3://${bucket}${prefix && `/${prefix}`}` };
}

/** The general rules of bucket names, as the S3 user guide gives them. */
function isBucketName(name: string): boolean {
  return /^[a-z0-9][a-z0-9.-]{1,61}[a-z0-9]$/.test(name) && !name.includes('..') && !/^\d+(\.\d+){3}$/.test(name);
}
