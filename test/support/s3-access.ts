import { openS3, type S3Access } from '../../shared/store/s3/s3-access.ts';
import { CREDENTIALS } from './s3-server.ts';

/** A client of a test's own server, as the environment of a process would give it. */
export function accessTo(url: string): S3Access {
  return openS3({ endpoint: url, forcePathStyle: true, region: 'us-east-1', credentials: CREDENTIALS });
}
