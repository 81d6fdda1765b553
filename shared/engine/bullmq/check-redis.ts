import { Redis } from 'ioredis';
import { BasinloomError } from '../../contract/errors.ts';
import { connectionOptions, printableUrl, type RedisAddress } from './address.ts';

/** How long a first connection is tried, ms. */
const CONNECT_MS = 5000;

/**
 * Refuses a Redis that does not answer, is too old, throws keys away when its memory is full, or keeps nothing over
 * a restart.
 *
 * @throws BasinloomError QUEUE_UNREACHABLE, QUEUE_UNSAFE
 */
export async function checkRedis(address: RedisAddress): Promise<void> {
  const url = printableUrl(address);
  const redis = new Redis({
    ...connectionOptions(address),
    lazyConnect: true,
    maxRetriesPerRequest: 0,
    connectTimeout: CONNECT_MS,
    retryStrategy: () => null,
  });
  let lastError: Error | undefined;
  redis.on('error', (error: Error) => {
    lastError = error;
  });
  try {
    await redis.connect();
    const info = parseInfo(await redis.info());
    const problem = unsafe(info, await saveSetting(redis));
    if (problem) throw new BasinloomError('QUEUE_UNSAFE', { url, ...problem });
  } catch (error) {
    if (error instanceof BasinloomError) throw error;
    const detail = lastError?.message || (error as Error).message;
    throw new BasinloomError('QUEUE_UNREACHABLE', { url, detail }, { cause: error });
  } finally {
    redis.disconnect();
  }
}

/** What is wrong with a Redis, and the remedy; null when it will do. */
export function unsafe(
  info: ReadonlyMap<string, string>,
  save: string | null,
): { readonly detail: string; readonly remedy: string } | null {
  const [major, minor] = (info.get('redis_version') ?? '0.0').split('.').map(Number);
  if (major < 6 || (major === 6 && minor < 2)) {
    return { detail: `version ${info.get('redis_version')} is too old`, remedy: 'Use Redis 6.2 or newer.' };
  }
  const policy = info.get('maxmemory_policy');
  if (policy !== undefined && policy !== 'noeviction') {
    return {
      detail: `maxmemory-policy is ${policy}, so jobs vanish when memory is short`,
      remedy: 'Set "maxmemory-policy noeviction" in redis.conf; infra/redis.conf shows a whole one.',
    };
  }
  if (info.get('aof_enabled') === '0' && save === '') {
    return {
      detail: 'it keeps nothing on disk, so a restart forgets the queue',
      remedy: 'Set "appendonly yes" in redis.conf; infra/redis.conf shows a whole one.',
    };
  }
  return null;
}

export function parseInfo(text: string): Map<string, string> {
  const lines = text.split(/\r?\n/).filter((line) => line.includes(':'));
  return new Map(lines.map((line) => [line.slice(0, line.indexOf(':')), line.slice(line.indexOf(':') + 1)]));
}

/** The snapshot rule; null where the service does not let it be read. */
async function saveSetting(redis: Redis): Promise<string | null> {
  try {
    const [, save] = (await redis.config('GET', 'save')) as string[];
    return save ?? null;
  } catch {
    return null;
  }
}
