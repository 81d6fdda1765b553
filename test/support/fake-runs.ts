import type { RunListener } from '../../services/coordinator/progress.ts';
import type { RunRecord, RunState } from '../../services/coordinator/run-record.ts';
import type { RunEntry, RunRequest, Runs } from '../../services/coordinator/runs.ts';
import { BasinloomError } from '../../shared/contract/errors.ts';

interface Watcher {
  readonly listener: RunListener;
  readonly ended: (record: RunRecord) => void;
}

/** Runs in memory that do nothing by themselves: a test moves them on. */
export class FakeRuns implements Runs {
  readonly #entries = new Map<string, RunEntry>();
  readonly watchers = new Map<string, Set<Watcher>>();
  readonly started: RunRequest[] = [];
  readonly store: string;
  /** What the next start or rerun throws. */
  refusal: BasinloomError | Error | undefined;

  constructor(store: string) {
    this.store = store;
  }

  /** Puts a run there. Later ones are newer. */
  add(id: string, changes: Partial<RunRecord> = {}, request: RunRequest = { basinFile: '/basin.yaml' }): RunEntry {
    const record: RunRecord = {
      id,
      state: 'running',
      basin: 'Orrin',
      basinFile: request.basinFile,
      host: 'test',
      process: 1,
      software: { name: 'basinloom', version: '0' },
      started: '2025-06-01T00:00:00.000Z',
      updated: '2025-06-01T00:01:00.000Z',
      stages: {},
      leftOut: 0,
      ...changes,
    };
    const entry = { record, request, store: this.store };
    this.#entries.set(id, entry);
    return entry;
  }

  change(id: string, changes: Partial<RunRecord>): RunEntry {
    const entry = this.#find(id);
    const changed = { ...entry, record: { ...entry.record, ...changes } };
    this.#entries.set(id, changed);
    return changed;
  }

  tell(id: string, tell: (listener: RunListener) => void): void {
    for (const { listener } of this.watchers.get(id) ?? []) tell(listener);
  }

  end(id: string, state: RunState): void {
    const { record } = this.change(id, { state });
    for (const { ended } of this.watchers.get(id) ?? []) ended(record);
  }

  watching(id: string): number {
    return this.watchers.get(id)?.size ?? 0;
  }

  async start(request: RunRequest): Promise<RunEntry> {
    if (this.refusal) throw this.refusal;
    this.started.push(request);
    return this.add(`run-${this.#entries.size}`, {}, request);
  }

  async list(): Promise<RunEntry[]> {
    return [...this.#entries.values()].reverse();
  }

  async get(id: string): Promise<RunEntry> {
    return this.#find(id);
  }

  async cancel(id: string): Promise<RunEntry> {
    const entry = this.#find(id);
    return entry.record.state === 'running' ? this.change(id, { state: 'stopped' }) : entry;
  }

  async rerun(id: string): Promise<RunEntry> {
    return this.start(this.#find(id).request);
  }

  async watch(id: string, listener: RunListener, ended: (record: RunRecord) => void): Promise<() => void> {
    const { record } = this.#find(id);
    if (record.state !== 'running') ended(record);
    const watcher = { listener, ended };
    const all = this.watchers.get(id) ?? new Set();
    this.watchers.set(id, all.add(watcher));
    return () => void all.delete(watcher);
  }

  #find(id: string): RunEntry {
    const entry = this.#entries.get(id);
    if (!entry) throw new BasinloomError('RUN_NOT_FOUND', { path: id });
    return entry;
  }
}
