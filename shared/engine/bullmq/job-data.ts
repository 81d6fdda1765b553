import type { JobsOptions, KeepJobs } from 'bullmq';
import { BasinloomError, type ErrorRecord } from '../../contract/errors.ts';
import type { JobEnvelope } from '../../contract/jobs.ts';
import { ATTEMPTS, BACKOFF_MS } from '../retry.ts';

/** What lies in the queue. */
export interface QueuedJob extends JobEnvelope {
  /**
   * Two workers died on the job before. Workers die for causes of their own, and take others' jobs with them, so
   * it has one more try when the rest of its stage is through; one more death settles it.
   */
  readonly lastTry: boolean;
}

/** What a worker answers for a job that is done. */
export interface JobResult {
  readonly seconds: number;
  readonly attempts: number;
}

/**
 * Finished jobs that stay in Redis: enough for a coordinator that was away a moment, and never more. A setting of the
 * consumer, so that it does not travel with every job.
 */
export const KEEP_DONE: KeepJobs = { count: 1000, age: 3600 };
export const KEEP_FAILED: KeepJobs = { count: 1000, age: 7 * 24 * 3600 };

/** Deaths of its worker that a job survives: the second sets it aside. */
export const MAX_STALLED = 1;

/** Jobs carry references, never pixels; more than this is a mistake. Bytes of JSON. */
const SIZE_LIMIT = 256 * 1024;

export const JOB_OPTIONS: JobsOptions = {
  attempts: ATTEMPTS,
  backoff: { type: 'exponential', delay: BACKOFF_MS, jitter: 0.5 },
  sizeLimit: SIZE_LIMIT,
};

/** An error record as the text that Redis keeps as the reason of a failure. */
export function encodeFailure(error: ErrorRecord): string {
  return JSON.stringify(error);
}

/** @returns the record; for a reason that the queue itself gave (its worker died), WORKER_LOST */
export function decodeFailure(reason: string, job: string): ErrorRecord {
  try {
    const record = JSON.parse(reason) as ErrorRecord;
    if (typeof record.code === 'string') return record;
  } catch {
    // Not ours: told below.
  }
  const code = reason.startsWith('job stalled') ? 'WORKER_LOST' : 'INTERNAL';
  const detail = code === 'WORKER_LOST' ? 'its worker died twice' : reason;
  return new BasinloomError(code, { job, detail }).toRecord();
}
