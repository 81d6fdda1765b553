import { type ChildProcess, spawn } from 'node:child_process';
import { once } from 'node:events';
import { createInterface } from 'node:readline';
import { fileURLToPath } from 'node:url';

const file = (name: string) => fileURLToPath(new URL(name, import.meta.url));

export interface NoopResult {
  readonly settled: number;
  readonly different: number;
  readonly seconds: number;
  readonly residentBytes: number;
}

/** Sends jobs that do nothing through the engine, each side in a process of its own. */
export async function runNoop(url: string, jobs: number, concurrency: number): Promise<NoopResult> {
  const version = `noop-${process.pid}`;
  return between(
    ['./consumer.ts', url, version, String(concurrency)],
    ['./coordinator.ts', url, version, String(jobs)],
  );
}

/** The same jobs through a bare queue. */
export async function runBare(url: string, jobs: number, concurrency: number): Promise<Omit<NoopResult, 'different'>> {
  return between(['./bare-worker.ts', url, String(concurrency)], ['./bare.ts', url, String(jobs)]);
}

async function between(consumer: readonly string[], producer: readonly string[]): Promise<NoopResult> {
  const worker = start(consumer);
  try {
    await firstLine(worker);
    const coordinator = start(producer);
    return JSON.parse(await firstLine(coordinator)) as NoopResult;
  } finally {
    worker.kill('SIGKILL');
    await once(worker, 'close');
  }
}

function start([name, ...args]: readonly string[]): ChildProcess {
  return spawn(process.execPath, [file(name), ...args], { stdio: ['ignore', 'pipe', 'inherit'] });
}

async function firstLine(child: ChildProcess): Promise<string> {
  const lines = createInterface({ input: child.stdout as NodeJS.ReadableStream });
  for await (const line of lines) return line;
  throw new Error('the process ended without a word');
}
