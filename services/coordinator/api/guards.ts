import { createHash, timingSafeEqual } from 'node:crypto';
import { isIP } from 'node:net';
import { BasinloomError } from '../../../shared/contract/errors.ts';

/** Headers of every answer. No CORS header: pages of other origins get nothing. */
export const SECURITY_HEADERS: Readonly<Record<string, string>> = {
  'x-content-type-options': 'nosniff',
  'x-frame-options': 'DENY',
  'content-security-policy': "default-src 'none'; frame-ancestors 'none'",
  'cross-origin-resource-policy': 'same-origin',
  'referrer-policy': 'no-referrer',
  'cache-control': 'no-store',
};

/**
 * Lets a request pass that carries the token.
 *
 * @param authorization value of the header
 * @throws BasinloomError TOKEN_NOT_SET, TOKEN_WRONG
 */
export function checkToken(token: string | undefined, authorization: string | undefined): void {
  if (!token) throw new BasinloomError('TOKEN_NOT_SET');
  const given = /^Bearer +([^\s]+) *$/i.exec(authorization ?? '')?.[1];
  if (given === undefined) throw new BasinloomError('TOKEN_WRONG', { detail: 'missing' });
  // Hashes have one length, so neither the length nor the first difference of the token shows in the time taken.
  if (!timingSafeEqual(sha256(given), sha256(token))) throw new BasinloomError('TOKEN_WRONG', { detail: 'wrong' });
}

function sha256(text: string): Buffer {
  return createHash('sha256').update(text).digest();
}

/** True for an address that only this machine reaches. */
export function isLoopback(host: string): boolean {
  return host.toLowerCase() === 'localhost' || host === '::1' || (isIP(host) === 4 && host.startsWith('127.'));
}

/**
 * Refuses a name that is not this machine's: a page on the web whose name was made to resolve to 127.0.0.1 (DNS
 * rebinding) still says its own name.
 *
 * @param header value of the Host header
 * @throws BasinloomError REQUEST_HOST
 */
export function checkLoopbackHost(header: string | undefined): void {
  if (/^(?:localhost|127\.0\.0\.1|\[::1\])(?::\d{1,5})?$/i.test(header ?? '')) return;
  throw new BasinloomError('REQUEST_HOST', { host: header ? JSON.stringify(header.slice(0, 100)) : '(none)' });
}
