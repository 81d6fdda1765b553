import type { ErrorRecord } from '../contract/errors.ts';

/** Attempts for an error that can pass, the first included. */
export const ATTEMPTS = 3;
/** First pause before a retry, ms; doubled each time, with jitter. */
export const BACKOFF_MS = 500;
/** Pause before a job that waits for a cause outside looks again, ms. */
export const WAIT_MS = 10_000;

/** True for a cause that no retry of this job can mend and every job meets: the job waits for it to pass. */
export function mustWait({ code }: Pick<ErrorRecord, 'code'>): boolean {
  return code === 'STORE_FULL';
}
