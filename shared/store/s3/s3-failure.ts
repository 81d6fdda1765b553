import { BasinloomError } from '../../contract/errors.ts';

const DENIED = new Set([
  'AccessDenied',
  'AllAccessDisabled',
  'CredentialsProviderError',
  'InvalidAccessKeyId',
  'SignatureDoesNotMatch',
]);
/** These pass: a new token, a mended clock. */
const PASSING = new Set(['ExpiredToken', 'ExpiredTokenException', 'RequestTimeTooSkewed']);

interface Answer {
  readonly name?: string;
  readonly code?: string;
  readonly message?: string;
  readonly $metadata?: { readonly httpStatusCode?: number };
}

/** HTTP status of an answer that the SDK threw. */
export function statusOf(error: unknown): number | undefined {
  return (error as Answer).$metadata?.httpStatusCode;
}

export function isMissing(error: unknown): boolean {
  const { name } = error as Answer;
  return name !== 'NoSuchBucket' && (name === 'NoSuchKey' || name === 'NotFound' || statusOf(error) === 404);
}

/** An endpoint that does not know what the request asks for. */
export function isNotImplemented(error: unknown): boolean {
  return statusOf(error) === 501 || (error as Answer).name === 'NotImplemented';
}

/** Some endpoints call a checksum header that they do not know a wrong argument. */
export function isAboutChecksums(error: unknown): boolean {
  const { message = '' } = error as Answer;
  return isNotImplemented(error) || (statusOf(error) === 400 && /checksum|x-amz-sdk|unsupported header/i.test(message));
}

/** What went wrong at an S3 endpoint, as an error of the table. */
export function s3Failure(
  error: unknown,
  code: 'STORE_READ' | 'STORE_WRITE',
  place: { readonly bucket: string; readonly path: string },
): BasinloomError {
  if (error instanceof BasinloomError) return error;
  const { bucket, path } = place;
  const { name = '', code: system, message } = error as Answer;
  const status = statusOf(error);
  const said = message && message !== 'UnknownError' ? message : undefined;
  const detail = [said ?? system ?? name, status && status >= 300 && `HTTP ${status}`].filter(Boolean).join(', ');
  const options = { cause: error };
  if (name === 'NoSuchBucket') return new BasinloomError('STORE_NO_BUCKET', { bucket }, options);
  if (name === 'PermanentRedirect' || status === 301) {
    const elsewhere = 'the bucket is in another region; set AWS_REGION to it';
    return new BasinloomError('STORE_LOCATION', { location: `s3://${bucket}`, detail: elsewhere }, options);
  }
  if (
    !PASSING.has(name) &&
    (DENIED.has(name) || status === 401 || status === 403 || /^Region is missing/.test(said ?? ''))
  ) {
    return new BasinloomError('STORE_DENIED', { path, detail }, options);
  }
  if (status === 507 || /StorageFull|QuotaExceeded|InsufficientStorage|InsufficientCapacity/.test(name)) {
    return new BasinloomError('STORE_FULL', { path, detail }, options);
  }
  return new BasinloomError(code, { path, detail }, options);
}
