import { STATUS_CODES } from 'node:http';
import type { ErrorCode } from '../../../shared/contract/error-table.ts';
import { BasinloomError } from '../../../shared/contract/errors.ts';
import type { Problem } from './schemas.ts';

export const PROBLEM_TYPE = 'application/problem+json';

/** HTTP status of errors whose exit code does not tell it. */
const STATUS_OF_CODE: Readonly<Partial<Record<ErrorCode, number>>> = {
  REQUEST_ADDRESS: 404,
  REQUEST_METHOD: 405,
  REQUEST_SIZE: 413,
  REQUEST_TYPE: 415,
  REQUEST_HOST: 421,
  TOKEN_WRONG: 401,
  TOKEN_NOT_SET: 403,
  PATH_OUTSIDE: 403,
  URL_OUTSIDE: 403,
  PROCESS_NOT_FOUND: 404,
  RUN_NOT_FOUND: 404,
  RESULTS_NOT_READY: 404,
  RESULTS_NONE: 404,
  STREAMS_FULL: 503,
  QUEUE_UNREACHABLE: 503,
  // Settings of the service, not of the request.
  QUEUE_UNSAFE: 500,
  ENVIRONMENT: 500,
};

/** HTTP status of the others, by exit code: what was asked for is wrong, or is being worked on. */
const STATUS_OF_EXIT: Readonly<Record<number, number>> = { 2: 400, 65: 422, 66: 422, 75: 409, 78: 422 };

/** Types that OGC API - Processes - Part 1 gives a URI; the title is ours. */
const OGC = 'http://www.opengis.net/def/exceptions/ogcapi-processes-1/1.0';
const TYPE_OF_CODE: Readonly<Partial<Record<ErrorCode, readonly [type: string, title: string]>>> = {
  RUN_NOT_FOUND: [`${OGC}/no-such-job`, 'No such job'],
  PROCESS_NOT_FOUND: [`${OGC}/no-such-process`, 'No such process'],
  RESULTS_NOT_READY: [`${OGC}/result-not-ready`, 'Results not ready'],
  RESULTS_NONE: [`${OGC}/result-not-available`, 'Results not available'],
};

export function statusOf({ code, entry }: BasinloomError): number {
  return STATUS_OF_CODE[code] ?? STATUS_OF_EXIT[entry.exit] ?? 500;
}

/**
 * Any thrown value as problem details (RFC 9457). What is not of the error table says nothing of itself: its message
 * may hold anything; it stands in the log under the same instance.
 *
 * @param instance names this answer: `urn:uuid:...`, as in the log
 */
export function problemOf(thrown: unknown, instance: string): Problem {
  const error = asTableError(thrown);
  const status = statusOf(error);
  const [type, title] = TYPE_OF_CODE[error.code] ?? ['about:blank', STATUS_CODES[status] ?? 'Error'];
  const isOurs = error.code !== 'INTERNAL';
  const others = error.cause instanceof AggregateError ? error.cause.errors : [];
  const all = [error, ...others].filter((one) => one instanceof BasinloomError);
  return {
    type,
    title,
    status,
    detail: isOurs ? error.message : 'An unexpected error; the log of the coordinator has its cause.',
    instance,
    code: error.code,
    remedy: error.remedy,
    ...(all.length > 1 && { errors: all.map(({ code, message }) => ({ code, detail: message })) }),
  };
}

/** Errors of the HTTP framework in the words of the error table. */
function asTableError(thrown: unknown): BasinloomError {
  if (thrown instanceof BasinloomError) return thrown;
  const { code, statusCode, message } = thrown as { code?: unknown; statusCode?: unknown; message?: string };
  if (code === 'FST_ERR_CTP_BODY_TOO_LARGE') return new BasinloomError('REQUEST_SIZE', { limit: BODY_LIMIT });
  if (code === 'FST_ERR_CTP_INVALID_MEDIA_TYPE') return new BasinloomError('REQUEST_TYPE');
  if (typeof statusCode === 'number' && statusCode >= 400 && statusCode < 500) {
    return new BasinloomError('REQUEST_SYNTAX', { detail: message ?? 'malformed' });
  }
  return BasinloomError.from(thrown);
}

/** Largest body of a request, bytes. */
export const BODY_LIMIT = 256 * 1024;
