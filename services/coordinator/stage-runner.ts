import type { Job } from '../../shared/contract/jobs.ts';
import type { LeftOut } from '../../shared/contract/plan.ts';
import type { Engine } from '../../shared/engine/engine.ts';
import type { Store } from '../../shared/store/store.ts';
import { lookAhead } from './look-ahead.ts';
import type { RunListener, StageCounts, StageName } from './progress.ts';

/** Jobs whose result is looked for in the store at a time. */
const LOOK_AHEAD = 32;

/** Runs stages on an engine, skipping what the store already holds, and keeps count. */
export class StageRunner {
  readonly #engine: Engine;
  readonly #store: Store;
  readonly #listener: RunListener;
  readonly #signal: AbortSignal;
  readonly counts = new Map<StageName, StageCounts>();
  readonly leftOut: LeftOut[] = [];

  constructor(engine: Engine, store: Store, listener: RunListener, signal: AbortSignal) {
    this.#engine = engine;
    this.#store = store;
    this.#listener = listener;
    this.#signal = signal;
  }

  setAside(entry: LeftOut): void {
    this.leftOut.push(entry);
    this.#listener.leftOut(entry);
  }

  /**
   * Runs the jobs whose output is not in the store yet.
   *
   * @param kind what a job that is set aside leaves a gap in
   * @returns the output keys that exist afterwards
   */
  async run<J extends Job>(
    stage: StageName,
    jobs: readonly J[],
    kind: LeftOut['kind'] = 'tile',
    done: (job: J) => Promise<boolean> = (job) => this.#store.has(job.outputKey),
  ): Promise<ReadonlySet<string>> {
    const counts: StageCounts = { total: jobs.length, done: 0, kept: 0, setAside: 0 };
    this.counts.set(stage, counts);
    this.#listener.stage(stage, counts);
    const finished = new Set<string>();
    const waiting = this.#missing(jobs, done, (job) => {
      counts.kept++;
      finished.add(job.outputKey);
    });
    for await (const settled of this.#engine.run(waiting, {
      signal: this.#signal,
      isDone: done,
      onWaiting: (job, { code, message, remedy }) =>
        this.#listener.note(`waiting: ${message}. ${remedy}`, { job: `${stage}/${job.id}`, code }),
    })) {
      if (settled.status === 'done') {
        counts.done++;
        finished.add(settled.job.outputKey);
      } else {
        counts.setAside++;
        this.setAside({ kind, id: `${stage}/${settled.job.id}`, gap: true, error: settled.error });
      }
      this.#listener.settled(stage, counts);
    }
    this.#listener.settled(stage, counts);
    return finished;
  }

  async *#missing<J extends Job>(
    jobs: readonly J[],
    done: (job: J) => Promise<boolean>,
    kept: (job: J) => void,
  ): AsyncGenerator<J> {
    for await (const [job, isDone] of lookAhead(jobs, done, LOOK_AHEAD)) {
      if (isDone) kept(job);
      else yield job;
    }
  }
}
