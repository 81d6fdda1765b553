import type { Job, serviceOf } from '../../contract/jobs.ts';

/** Prefix of every key in Redis. */
export const PREFIX = 'basinloom';

export type ServiceName = ReturnType<typeof serviceOf>;
export const SERVICES: readonly ServiceName[] = ['worker', 'mosaicker'];

/**
 * A queue for each service and version of the software: a worker of another version would leave other bytes under
 * the same name, so it never sees the job.
 */
export function queueName(service: ServiceName, version: string): string {
  return `${service}-${version}`;
}

/**
 * Id of a job in its queue: the run, the job, and what determines its result, so that a coordinator that takes a
 * run up again finds a job that is the same, and only that. A job that is added again after it was lost gets the
 * next round: an id that Redis still knows would be dropped without a word.
 */
export function queueId(run: string, round: number, { stage, id, outputKey }: Job): string {
  const content = /([0-9a-f]{8})[0-9a-f]*(\.\w+)*$/.exec(outputKey)?.[1] ?? '0';
  return `${run}-${round}-${stage}-${id}-${content}`;
}
