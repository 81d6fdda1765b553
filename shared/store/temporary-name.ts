import { randomUUID } from 'node:crypto';
import { isProcessAlive, thisHost } from './this-host.ts';

/** Prefix of unfinished files; `list` and `sweep` know it. */
export const TEMPORARY = '.part-';
/** An unfinished file that nobody touched for so long is nobody's, ms. */
const ABANDONED_MS = 3_600_000;

/** A name for an unfinished file that tells whose it is. */
export function temporaryName(): string {
  return `${TEMPORARY}${thisHost}-${process.pid}-${randomUUID()}`;
}

/**
 * True for an unfinished file that no process will finish: its process is of this host and gone, or nobody wrote
 * to it for an hour.
 *
 * @param modified when it was last written, ms
 */
export function isAbandoned(name: string, modified: number, now: number): boolean {
  const [, host, pid] = /\.part-(.+)-(\d+)-[0-9a-f]{8}(?:-[0-9a-f]{4}){3}-[0-9a-f]{12}$/.exec(name) ?? [];
  if (host !== undefined && isProcessAlive(host, Number(pid)) === false) return true;
  return now - modified > ABANDONED_MS;
}
