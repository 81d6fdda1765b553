import type { RunSummary } from '../../shared/contract/run-summary.ts';
import type { Engine } from '../../shared/engine/engine.ts';
import type { Store } from '../../shared/store/store.ts';
import type { RunListener } from './progress.ts';

/** Ports that a run works through, and who watches it. */
export interface RunContext {
  readonly store: Store;
  readonly engine: Engine;
  readonly listener: RunListener;
  readonly signal: AbortSignal;
  readonly software: RunSummary['software'];
}
