import { BasinloomError } from '../../contract/errors.ts';

/** Where Redis is and who asks. */
export interface RedisAddress {
  /** redis://host:port/db, or rediss:// for TLS; may carry user and password. */
  readonly url: string;
  readonly username?: string;
  readonly password?: string;
}

/** An address with the user and password that the environment holds. */
export function redisAddress(url: string, environment: Readonly<Record<string, string | undefined>>): RedisAddress {
  const { BASINLOOM_REDIS_USERNAME: username, BASINLOOM_REDIS_PASSWORD: password } = environment;
  return { url, ...(username && { username }), ...(password && { password }) };
}

/** The address as it may stand in a message: without user and password. */
export function printableUrl(address: RedisAddress): string {
  const { protocol, host, pathname } = parse(address.url);
  return `${protocol}//${host}${pathname === '/' ? '' : pathname}`;
}

/**
 * Connection options for the queue's own connections: they wait for Redis to come back, for ever, since jobs in
 * hand must not be lost over a restart.
 *
 * @throws BasinloomError QUEUE_UNREACHABLE for an address that is none
 */
export function connectionOptions(address: RedisAddress) {
  const { protocol, hostname, port, pathname, username, password } = parse(address.url);
  const user = address.username ?? decodeURIComponent(username);
  const secret = address.password ?? decodeURIComponent(password);
  return {
    host: hostname.replace(/^\[|\]$/g, ''),
    port: Number(port || 6379),
    db: Number(pathname.slice(1) || 0),
    ...(user && { username: user }),
    ...(secret && { password: secret }),
    ...(protocol === 'rediss:' && { tls: {} }),
    maxRetriesPerRequest: null,
    retryStrategy: (times: number) => Math.min(50 * 2 ** times, 2000),
  };
}

function parse(url: string): URL {
  try {
    const parsed = new URL(url);
    if (/^rediss?:$/.test(parsed.protocol) && /^\/?\d*$/.test(parsed.pathname)) return parsed;
  } catch {
    // Told below; the text itself may hold a password.
  }
  throw new BasinloomError('QUEUE_UNREACHABLE', {
    url: 'redis address',
    detail: 'expected redis://host:port or redis://host:port/database',
  });
}
