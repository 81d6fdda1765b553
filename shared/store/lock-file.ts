import { randomUUID } from 'node:crypto';
import { isProcessAlive, thisHost } from './this-host.ts';

/** What a lock holds, as JSON of one length however often it is refreshed. */
export interface LockRecord {
  readonly host: string;
  readonly pid: number;
  readonly token: string;
  /** ISO time of the last sign of life. */
  readonly refreshed: string;
}

/** A lock as it was found. */
export interface FoundLock {
  /** Null for one that cannot be read: its writer is at it, or died in the middle. */
  readonly record: LockRecord | null;
  /** Last sign of life, ms. */
  readonly alive: number;
  /** Names this very state of the lock. */
  readonly version: string;
}

/** Where the lock of a store is kept. */
export interface LockFile {
  read(): Promise<FoundLock | null>;
  /** @returns false when there is one already */
  create(record: LockRecord): Promise<boolean>;
  /** Puts our lock in the place of one that nobody holds. @returns false when another was faster */
  takeOver(stale: FoundLock, record: LockRecord): Promise<boolean>;
  /** Writes a new sign of life; without effect on a lock that is not ours any more. */
  refresh(record: LockRecord): Promise<void>;
  /** Removes the lock if it is still ours. */
  remove(record: LockRecord): Promise<void>;
}

/** Locks of another host are theirs until they were not refreshed for so long, ms. */
export const LEASE_MS = 120_000;

/** Tokens of the locks that this process holds. */
const ours = new Set<string>();

export function newRecord(): LockRecord {
  const record = { host: thisHost, pid: process.pid, token: randomUUID(), refreshed: new Date().toISOString() };
  ours.add(record.token);
  return record;
}

export function forgetRecord({ token }: LockRecord): void {
  ours.delete(token);
}

/** True while the process behind a lock may still work. */
export function isHeld({ record, alive }: FoundLock, now: number): boolean {
  const lease = now - alive <= LEASE_MS;
  if (!record) return lease;
  // Our own number with a token that is not ours: an earlier process had the number.
  if (record.host === thisHost && record.pid === process.pid) return ours.has(record.token);
  return isProcessAlive(record.host, record.pid) ?? lease;
}

export function encodeLock(record: LockRecord): Uint8Array {
  return Buffer.from(`${JSON.stringify(record)}\n`);
}

export function decodeLock(bytes: Uint8Array): LockRecord | null {
  try {
    const { host, pid, token, refreshed } = JSON.parse(Buffer.from(bytes).toString('utf8')) as Partial<LockRecord>;
    const time = Date.parse(refreshed ?? '');
    if (typeof host !== 'string' || !Number.isInteger(pid) || typeof token !== 'string' || Number.isNaN(time))
      return null;
    return { host, pid: pid as number, token, refreshed: refreshed as string };
  } catch {
    return null;
  }
}
