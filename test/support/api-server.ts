import { mkdir, mkdtemp, realpath, rm, writeFile } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { type Logger, pino } from 'pino';
import { expect } from 'vitest';
import { SMALLEST_BASIN_FILE } from '../../infra/docs/basin-file-page.ts';
import { type Problem, problem } from '../../services/coordinator/api/schemas.ts';
import { type StartApiOptions, startApi } from '../../services/coordinator/api/start-api.ts';
import { ERROR_TABLE } from '../../shared/contract/error-table.ts';
import { FakeRuns } from './fake-runs.ts';

export const TOKEN = 'a-token-of-the-tests';

/** A coordinator's API over real HTTP, with a folder that it may use and one beside it that it may not. */
export interface ApiServer {
  readonly runs: FakeRuns;
  /** The allowed root; holds basin.yaml, and out/ for the store. */
  readonly root: string;
  /** Beside the root, with a name that begins like it. */
  readonly outside: string;
  readonly url: string;
  readonly port: number;
  /** All log lines so far. */
  log(): string;
  fetch(path: string, init?: RequestInit): Promise<Response>;
  /** With the token and a JSON body. */
  send(method: string, path: string, body?: unknown): Promise<Response>;
  close(): Promise<void>;
}

export async function apiServer(options: Partial<StartApiOptions> = {}): Promise<ApiServer> {
  const parent = await realpath(await mkdtemp(join(tmpdir(), 'basinloom-api-')));
  const root = join(parent, 'data');
  const outside = join(parent, 'data-evil');
  for (const folder of [join(root, 'out'), outside]) await mkdir(folder, { recursive: true });
  await writeFile(join(root, 'basin.yaml'), SMALLEST_BASIN_FILE);
  await writeFile(join(outside, 'basin.yaml'), SMALLEST_BASIN_FILE);
  const runs = new FakeRuns(join(root, 'out'));
  const lines: string[] = [];
  const log: Logger = pino({ level: 'trace' }, { write: (line: string) => void lines.push(line) });
  const api = await startApi({ runs, port: 0, token: TOKEN, roots: [root], urls: [], log, ...options });
  const url = `http://127.0.0.1:${api.port}`;
  return {
    runs,
    root,
    outside,
    url,
    port: api.port,
    log: () => lines.join(''),
    fetch: (path, init) => fetch(`${url}${path}`, init),
    send: (method, path, body) =>
      fetch(`${url}${path}`, {
        method,
        headers: {
          authorization: `Bearer ${TOKEN}`,
          ...(body !== undefined && { 'content-type': 'application/json' }),
        },
        ...(body !== undefined && { body: typeof body === 'string' ? body : JSON.stringify(body) }),
      }),
    async close() {
      await api.close();
      await rm(parent, { recursive: true, force: true });
    },
  };
}

export const EXECUTION = '/processes/basin-run/execution';

/** Holds an answer to RFC 9457 and gives its members. */
export async function problemIn(response: Response, status: number): Promise<Problem> {
  expect(response.status).toBe(status);
  // RFC 9457, section 3: the media type; 3.1: the members; status equals that of the response.
  expect(response.headers.get('content-type')).toMatch(/^application\/problem\+json/);
  const text = await response.text();
  expect(text).not.toMatch(/\.ts:\d+|node_modules|\bat .*\(/);
  const members = problem.strict().parse(JSON.parse(text));
  expect(members.status).toBe(status);
  expect(members.instance).toMatch(/^urn:uuid:[0-9a-f-]{36}$/);
  expect(Object.keys(ERROR_TABLE)).toContain(members.code);
  expect(members.remedy).not.toBe('');
  return members;
}
