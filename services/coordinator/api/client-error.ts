import { randomUUID } from 'node:crypto';
import { STATUS_CODES } from 'node:http';
import type { Socket } from 'node:net';
import { BasinloomError } from '../../../shared/contract/errors.ts';
import { PROBLEM_TYPE, problemOf } from './problem.ts';

const STATUS_OF_CODE: Readonly<Record<string, number>> = {
  HPE_HEADER_OVERFLOW: 431,
  HPE_CHUNK_EXTENSIONS_OVERFLOW: 413,
  ERR_HTTP_REQUEST_TIMEOUT: 408,
};

/** Answers what is not HTTP, or does not come in within its time: there is no request yet to answer to. */
export function answerClientError(error: Error & { code?: string }, socket: Socket): void {
  if (error.code === 'ECONNRESET' || !socket.writable) {
    socket.destroy();
    return;
  }
  const status = STATUS_OF_CODE[error.code ?? ''] ?? 400;
  const title = STATUS_CODES[status] ?? 'Bad Request';
  const cause = new BasinloomError('REQUEST_SYNTAX', { detail: title.toLowerCase() });
  const body = JSON.stringify({ ...problemOf(cause, `urn:uuid:${randomUUID()}`), title, status });
  const head = [
    `HTTP/1.1 ${status} ${title}`,
    `Content-Type: ${PROBLEM_TYPE}`,
    `Content-Length: ${Buffer.byteLength(body)}`,
    'Connection: close',
  ];
  socket.end(`${head.join('\r\n')}\r\n\r\n${body}`);
}
