import { readlinkSync } from 'node:fs';
import { hostname } from 'node:os';
import { isAlive } from './process-alive.ts';

/**
 * Name of the set of processes that this one's numbers belong to, fit for a file name: the machine's name and, on
 * Linux, its process namespace, for containers may share a name and never share process numbers.
 */
export const thisHost: string = [hostname(), processNamespace()]
  .filter(Boolean)
  .join('.')
  .replaceAll(/[^A-Za-z0-9._]/g, '_');

function processNamespace(): string {
  try {
    return /\d+/.exec(readlinkSync('/proc/self/ns/pid'))?.[0] ?? '';
  } catch {
    return '';
  }
}

/** Whether a process runs; null when it is of another host, so that nobody here can tell. */
export function isProcessAlive(host: string, pid: number): boolean | null {
  return host === thisHost ? isAlive(pid) : null;
}
