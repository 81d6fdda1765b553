import { BasinloomError } from '../../../shared/contract/errors.ts';
import type { StageCounts, StageName } from '../progress.ts';
import type { RunRecord, RunState } from '../run-record.ts';
import type { RunEntry } from '../runs.ts';
import { problemOf } from './problem.ts';
import { type JobStatus, type Link, PROCESS_ID, type StatusInfo } from './schemas.ts';

const STATUS_OF_STATE: Readonly<Record<RunState, JobStatus>> = {
  running: 'running',
  complete: 'successful',
  'complete-with-gaps': 'successful',
  failed: 'failed',
  stopped: 'dismissed',
};

/** A run that plans is accepted: whether it can be done at all shows when its first stage begins. */
export function jobStatusOf({ state, stages }: Pick<RunRecord, 'state' | 'stages'>): JobStatus {
  return state === 'running' && Object.keys(stages).length === 0 ? 'accepted' : STATUS_OF_STATE[state];
}

export function jobPath(id: string): string {
  return `/jobs/${encodeURIComponent(id)}`;
}

/** The statusInfo of OGC API - Processes, with members of our own: basin, basinFile, stages, setAside. */
export function statusInfoOf({ record }: Pick<RunEntry, 'record'>): StatusInfo {
  const { id, started, updated, state, error } = record;
  return {
    jobID: id,
    processID: PROCESS_ID,
    type: 'process',
    status: jobStatusOf(record),
    message: messageOf(record),
    created: started,
    started,
    ...(state !== 'running' && { finished: updated }),
    updated,
    progress: progressOf(record),
    basin: record.basin,
    basinFile: record.basinFile,
    stages: record.stages as StatusInfo['stages'],
    setAside: record.leftOut,
    ...(error && { exception: exceptionOf(BasinloomError.fromRecord(error)) }),
    links: linksOf(record),
  };
}

function messageOf({ state, stages, leftOut, error }: RunRecord): string {
  const stage = stageAtWork(stages);
  switch (state) {
    case 'running':
      return stage ? `in stage ${stage}` : 'planning';
    case 'complete':
      return 'complete';
    case 'complete-with-gaps':
      return `complete with gaps; ${leftOut} set aside or noted`;
    case 'stopped':
      return 'stopped on request; a rerun goes on where it was';
    case 'failed':
      return error?.message ?? 'failed';
  }
}

/** Tally and mosaic run twice, so the stage named last need not be the one at work. */
function stageAtWork(stages: RunRecord['stages']): string | undefined {
  const begun = Object.entries(stages);
  return (begun.find(([, counts]) => fractionOf(counts) < 1) ?? begun.at(-1))?.[0];
}

function exceptionOf(error: BasinloomError): NonNullable<StatusInfo['exception']> {
  const { type, title, status, detail, code, remedy } = problemOf(error, '');
  return { type, title, status, detail, code, remedy };
}

/**
 * Shares of the stages in the time of a run, %, as measured in one of the demo basin. Tally and mosaic are left out:
 * they run twice, and a share that begins again would make progress go back.
 */
const SHARES: readonly (readonly [StageName, number])[] = [
  ['terrain', 3],
  ['prepare', 36],
  ['flux', 18],
  ['overlap', 3],
  ['day', 12],
  ['integrate', 21],
  ['publish', 7],
];

/** Share of the work that is done, 0 to 100: by jobs within a stage, by experience between stages. Never falls. */
export function progressOf({ state, stages }: Pick<RunRecord, 'state' | 'stages'>): number {
  if (state === 'complete' || state === 'complete-with-gaps') return 100;
  const begun = SHARES.findLastIndex(([name]) => stages[name] !== undefined);
  const done = SHARES.slice(0, begun + 1).reduce((sum, [name, share]) => sum + share * fractionOf(stages[name]), 0);
  return Math.min(99, Math.floor(done));
}

/** A stage that was passed over, or has no jobs, is done. */
function fractionOf(counts: StageCounts | undefined): number {
  if (!counts || counts.total === 0) return 1;
  return Math.min(1, (counts.done + counts.kept + counts.setAside) / counts.total);
}

function linksOf(record: RunRecord): Link[] {
  const self = jobPath(record.id);
  const json = 'application/json';
  const links: Link[] = [
    { href: self, rel: 'self', type: json, title: 'this run' },
    { href: `${self}/failures`, rel: 'related', type: json, title: 'what was set aside' },
  ];
  const status = jobStatusOf(record);
  if (status === 'successful') {
    const rel = 'http://www.opengis.net/def/rel/ogc/1.0/results';
    links.push({ href: `${self}/results`, rel, type: json, title: 'maps, tables and report' });
  }
  if (record.state === 'running') {
    links.push({ href: `${self}/events`, rel: 'monitor', type: 'text/event-stream', title: 'events as they happen' });
  }
  return links;
}
