import { BasinloomError } from '../../../shared/contract/errors.ts';
import type { RunEntry } from '../runs.ts';
import { type JobListQuery, type Link, PROCESS_ID, type StatusInfo } from './schemas.ts';
import { jobStatusOf, statusInfoOf } from './status-info.ts';

/**
 * One page of a list of runs. Pages follow one another by the id of the last run, not by a number, so a run that
 * starts meanwhile neither repeats one nor hides one.
 *
 * @param runs newest first
 * @throws BasinloomError REQUEST_VALUE when there is no run `after`
 */
export function pageOf(runs: readonly RunEntry[], query: JobListQuery): { jobs: StatusInfo[]; links: Link[] } {
  const { limit, status, processID, after } = query;
  const last = after === undefined ? -1 : runs.findIndex(({ record }) => record.id === after);
  if (after !== undefined && last < 0) {
    throw new BasinloomError('REQUEST_VALUE', { place: 'query.after', detail: 'there is no such run' });
  }
  const wanted = runs
    .slice(last + 1)
    .filter(({ record }) => status?.includes(jobStatusOf(record)) ?? true)
    .filter(() => processID?.includes(PROCESS_ID) ?? true);
  const page = wanted.slice(0, limit);
  const links: Link[] = [{ href: address(query), rel: 'self', type: 'application/json' }];
  if (wanted.length > limit) {
    const next = { ...query, after: page[limit - 1].record.id };
    links.push({ href: address(next), rel: 'next', type: 'application/json' });
  }
  return { jobs: page.map(statusInfoOf), links };
}

function address(query: JobListQuery): string {
  const given = Object.entries(query).filter(([, value]) => value !== undefined);
  return `/jobs?${new URLSearchParams(given.map(([name, value]): [string, string] => [name, String(value)]))}`;
}
