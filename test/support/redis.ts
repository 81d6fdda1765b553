import { type ChildProcess, execFileSync, spawn, spawnSync } from 'node:child_process';
import { once } from 'node:events';
import { mkdtemp, rm, writeFile } from 'node:fs/promises';
import { createServer } from 'node:net';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { setTimeout as sleep } from 'node:timers/promises';
import { Redis } from 'ioredis';
import { GenericContainer, type StartedTestContainer } from 'testcontainers';

const CONFIG = ['appendonly yes', 'appendfsync everysec', 'maxmemory-policy noeviction', 'save ""'];

/** A Redis for a test, real in every case. */
export interface TestRedis {
  readonly url: string;
  /** Where the server came from. */
  readonly from: 'REDIS_URL' | 'redis-server' | 'container';
  /** Ends the server without warning. Only for a server of our own: see `canKill`. */
  kill(): Promise<void>;
  /** Starts it again, on the same files and port. */
  start(): Promise<void>;
  readonly canKill: boolean;
  stop(): Promise<void>;
}

/**
 * The first that is there: the server of REDIS_URL; `redis-server` of this machine; a container.
 *
 * @param extra further lines of redis.conf, for a server of our own
 */
export async function startRedis(extra: readonly string[] = []): Promise<TestRedis> {
  const given = process.env.REDIS_URL;
  if (given) return notOurs(given);
  if (spawnSync('redis-server', ['--version']).status === 0) return ownServer(extra);
  try {
    return await container(extra);
  } catch (cause) {
    throw new Error(
      'These tests need Redis. Install it (Debian: apt-get install redis-server), set REDIS_URL to a running one, or start a Docker engine.',
      { cause },
    );
  }
}

/** On a bare Debian machine, root can install what is missing. */
export function installRedis(): void {
  if (process.env.REDIS_URL || spawnSync('redis-server', ['--version']).status === 0) return;
  if (process.getuid?.() !== 0 || spawnSync('apt-get', ['--version']).status !== 0) return;
  const environment = { ...process.env, DEBIAN_FRONTEND: 'noninteractive' };
  try {
    execFileSync('apt-get', ['update', '-qq'], { env: environment, stdio: 'ignore' });
    execFileSync('apt-get', ['install', '-y', '-qq', 'redis-server'], { env: environment, stdio: 'ignore' });
  } catch {
    // The ladder goes on with a container.
  }
}

function notOurs(url: string): TestRedis {
  const refuse = () => Promise.reject(new Error('the server of REDIS_URL is not ours to kill'));
  return { url, from: 'REDIS_URL', canKill: false, kill: refuse, start: refuse, stop: () => Promise.resolve() };
}

async function ownServer(extra: readonly string[]): Promise<TestRedis> {
  const folder = await mkdtemp(join(tmpdir(), 'basinloom-redis-'));
  const port = await freePort();
  const file = join(folder, 'redis.conf');
  await writeFile(file, [...CONFIG, ...extra, `port ${port}`, 'bind 127.0.0.1', `dir ${folder}`, ''].join('\n'));
  const url = `redis://127.0.0.1:${port}`;
  let child: ChildProcess;
  const start = async () => {
    child = spawn('redis-server', [file], { stdio: 'ignore' });
    await answers(url);
  };
  const end = async (signal: NodeJS.Signals) => {
    if (child.exitCode !== null || child.signalCode !== null) return;
    const ended = once(child, 'exit');
    child.kill(signal);
    await ended;
  };
  await start();
  return {
    url,
    from: 'redis-server',
    canKill: true,
    kill: () => end('SIGKILL'),
    start,
    async stop() {
      await end('SIGTERM');
      await rm(folder, { recursive: true, force: true });
    },
  };
}

async function container(extra: readonly string[]): Promise<TestRedis> {
  const options = [...CONFIG, ...extra].flatMap((line) => {
    const [name, ...values] = line.split(' ');
    return [`--${name}`, ...values.map((value) => value.replaceAll('"', ''))];
  });
  const started: StartedTestContainer = await new GenericContainer(process.env.REDIS_IMAGE ?? 'redis:7')
    .withExposedPorts(6379)
    .withCommand(['redis-server', ...options])
    .start();
  const url = `redis://${started.getHost()}:${started.getMappedPort(6379)}`;
  return {
    url,
    from: 'container',
    canKill: false,
    kill: () => Promise.reject(new Error('a container gets another port when it is started again')),
    start: () => Promise.resolve(),
    stop: async () => void (await started.stop()),
  };
}

/** Waits until a server answers. */
async function answers(url: string): Promise<void> {
  const redis = new Redis(url, { maxRetriesPerRequest: null, retryStrategy: () => 50 });
  redis.on('error', () => {});
  try {
    // A server that reads its log back says LOADING for a while.
    while ((await redis.ping().catch(() => '')) !== 'PONG') await sleep(50);
  } finally {
    redis.disconnect();
  }
}

async function freePort(): Promise<number> {
  const server = createServer().listen(0, '127.0.0.1');
  await once(server, 'listening');
  const { port } = server.address() as { port: number };
  server.close();
  await once(server, 'close');
  return port;
}
