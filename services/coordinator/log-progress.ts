import type { Logger } from 'pino';
import type { LeftOut } from '../../shared/contract/plan.ts';
import type { RunListener, StageCounts, StageName } from './progress.ts';

/** Least time between two progress lines, ms. */
const EVERY_MS = 1000;

/** Progress for machines: one log line an event. */
export class LogProgress implements RunListener {
  readonly #log: Logger;
  #logged = 0;

  constructor(log: Logger) {
    this.#log = log;
  }

  stage(stage: StageName, counts: Readonly<StageCounts>): void {
    this.#log.info({ stage, ...counts }, 'stage');
  }

  settled(stage: StageName, counts: Readonly<StageCounts>): void {
    const settled = counts.done + counts.kept + counts.setAside;
    if (settled < counts.total && performance.now() - this.#logged < EVERY_MS) return;
    this.#logged = performance.now();
    this.#log.info({ stage, ...counts }, 'progress');
  }

  leftOut({ kind, id, gap, error }: LeftOut): void {
    this.#log.warn({ kind, id, gap, error }, 'left out');
  }

  note(message: string, fields: Readonly<Record<string, unknown>>): void {
    this.#log.info(fields, message);
  }
}
