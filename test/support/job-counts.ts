import type { LogLine } from './topology.ts';

/** What the logs of workers tell of their jobs. */
export interface JobCounts {
  /** Different jobs that were done. */
  readonly jobs: number;
  /** Starts of a job beyond its first, other than retries that found the result there. */
  readonly repeated: number;
  /** Jobs given out again whose result was there. */
  readonly found: number;
}

/** Counts jobs by run, stage and id. Needs the lines of level debug, where a start is logged. */
export function countJobs(lines: readonly LogLine[]): JobCounts {
  const starts = new Map<string, number>();
  const done = new Set<string>();
  let found = 0;
  for (const { msg, run, stage, job } of lines) {
    const key = `${run} ${stage} ${job}`;
    if (msg === 'started') starts.set(key, (starts.get(key) ?? 0) + 1);
    if (msg === 'done') done.add(key);
    if (msg === 'found done') found++;
  }
  const all = [...starts.values()].reduce((sum, count) => sum + count, 0);
  return { jobs: done.size, repeated: all - starts.size, found };
}
