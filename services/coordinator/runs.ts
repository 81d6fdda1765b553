import type { RunListener } from './progress.ts';
import type { RunRecord } from './run-record.ts';

/** What is asked for when a run is started. */
export interface RunRequest {
  /** Path of the basin file on the coordinator's machine. */
  readonly basinFile: string;
  /** Values of the basin file to change, as `--set` does: "grid.tile" to "256". */
  readonly set?: Readonly<Record<string, string>>;
  /** Folder or s3:// location of the output instead of the one in the basin file. */
  readonly out?: string;
}

/** A run as the coordinator's registry knows it. */
export interface RunEntry {
  readonly record: RunRecord;
  readonly request: RunRequest;
  /** Location of the store that holds its results. */
  readonly store: string;
}

/** The runs of a coordinator: what its HTTP API works through. */
export interface Runs {
  /**
   * Starts a run and answers when it is on its way, not when it is done.
   *
   * @throws BasinloomError for a basin file that is missing or wrong, RUN_LOCKED when another run works in its store
   */
  start(request: RunRequest): Promise<RunEntry>;
  /** Newest first. */
  list(): Promise<RunEntry[]>;
  /** @throws BasinloomError RUN_NOT_FOUND */
  get(id: string): Promise<RunEntry>;
  /** Stops a run after the jobs in hand; without effect on one that has ended. @throws BasinloomError RUN_NOT_FOUND */
  cancel(id: string): Promise<RunEntry>;
  /**
   * Starts a new run of the same request: what was set aside is tried again, what is done is kept.
   *
   * @throws BasinloomError RUN_NOT_FOUND, RUN_LOCKED
   */
  rerun(id: string): Promise<RunEntry>;
  /**
   * Tells a listener what a run of this process does from now on.
   *
   * @returns the function that ends it
   * @throws BasinloomError RUN_NOT_FOUND
   */
  watch(id: string, listener: RunListener, ended: (record: RunRecord) => void): Promise<() => void>;
}
