import type { Stage } from '../../shared/contract/jobs.ts';
import type { LeftOut } from '../../shared/contract/plan.ts';

/** Counts of one stage, as status and progress display show them. */
export interface StageCounts {
  /** Jobs of the stage, those found done included. */
  total: number;
  /** Done in this run. */
  done: number;
  /** Found done in the store. */
  kept: number;
  setAside: number;
}

export type StageName = Stage | 'calibrate';

/** What a run tells whoever watches it. */
export interface RunListener {
  stage(name: StageName, counts: Readonly<StageCounts>): void;
  settled(name: StageName, counts: Readonly<StageCounts>): void;
  leftOut(entry: LeftOut): void;
  note(message: string, fields: Readonly<Record<string, unknown>>): void;
}

/** A listener that tells others. */
export function tellAll(listeners: Iterable<RunListener>): RunListener {
  return {
    stage: (...args) => [...listeners].forEach((listener) => void listener.stage(...args)),
    settled: (...args) => [...listeners].forEach((listener) => void listener.settled(...args)),
    leftOut: (...args) => [...listeners].forEach((listener) => void listener.leftOut(...args)),
    note: (...args) => [...listeners].forEach((listener) => void listener.note(...args)),
  };
}
