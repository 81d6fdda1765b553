import { type ChildProcess, spawn } from 'node:child_process';
import { mkdtemp, rm } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';

const MAIN = fileURLToPath(new URL('../../services/cli/main.ts', import.meta.url));

export interface CliResult {
  readonly exitCode: number | null;
  readonly signal: NodeJS.Signals | null;
  readonly stdout: string;
  readonly stderr: string;
}

/**
 * Starts the command as a user would, in a process of its own.
 *
 * @param environment added to that of the test
 */
export function startCli(
  args: readonly string[],
  environment: Readonly<Record<string, string>> = {},
): { child: ChildProcess; ended: Promise<CliResult> } {
  const child = spawn(process.execPath, [MAIN, ...args], {
    stdio: ['ignore', 'pipe', 'pipe'],
    env: { ...process.env, ...environment },
  });
  let stdout = '';
  let stderr = '';
  child.stdout.on('data', (chunk) => {
    stdout += chunk;
  });
  child.stderr.on('data', (chunk) => {
    stderr += chunk;
  });
  const ended = new Promise<CliResult>((resolve) => {
    child.on('close', (exitCode, signal) => resolve({ exitCode, signal, stdout, stderr }));
  });
  return { child, ended };
}

export function runCli(...args: readonly string[]): Promise<CliResult> {
  return startCli(args).ended;
}

/** A folder of its own for a test; call the second value to remove it. */
export async function temporaryFolder(): Promise<[folder: string, remove: () => Promise<void>]> {
  const folder = await mkdtemp(join(tmpdir(), 'basinloom-test-'));
  return [folder, () => rm(folder, { recursive: true, force: true })];
}
