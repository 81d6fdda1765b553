import { setTimeout as sleep } from 'node:timers/promises';
import type { QueueBasin } from './queue-basin.ts';
import type { ServiceProcess } from './topology.ts';

export const TOKEN = 'a-token-for-tests-only';

/** Environment of a coordinator whose API serves one basin. */
export function coordinatorEnvironment(basin: QueueBasin): Readonly<Record<string, string>> {
  return {
    BASINLOOM_HOME: basin.out('home'),
    BASINLOOM_HTTP_PORT: '0',
    BASINLOOM_TOKEN: TOKEN,
    BASINLOOM_ROOTS: basin.folder,
  };
}

export interface JobStatus {
  readonly jobID: string;
  readonly progress?: number;
  readonly status: 'accepted' | 'running' | 'successful' | 'failed' | 'dismissed';
}

/** The HTTP API of a coordinator that is ready. */
export async function apiOf(coordinator: ServiceProcess): Promise<string> {
  const { httpPort } = await coordinator.line(({ msg }) => msg === 'ready');
  return `http://127.0.0.1:${httpPort}`;
}

export async function post<T>(url: string, body?: unknown): Promise<T> {
  const response = await fetch(url, {
    method: 'POST',
    headers: { authorization: `Bearer ${TOKEN}`, ...(body !== undefined && { 'content-type': 'application/json' }) },
    ...(body !== undefined && { body: JSON.stringify(body) }),
  });
  if (!response.ok) throw new Error(`${url}: ${response.status} ${await response.text()}`);
  return (await response.json()) as T;
}

export async function getJson<T>(url: string): Promise<T> {
  const response = await fetch(url);
  if (!response.ok) throw new Error(`${url}: ${response.status} ${await response.text()}`);
  return (await response.json()) as T;
}

/** The status of a job when it has ended, however. */
export async function untilEnded(job: string): Promise<JobStatus> {
  while (true) {
    const status = await getJson<JobStatus>(job);
    if (status.status !== 'running' && status.status !== 'accepted') return status;
    await sleep(250);
  }
}
