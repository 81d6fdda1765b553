import type { Logger } from 'pino';
import type { BasinFile } from '../../shared/contract/basin-file.ts';
import { BasinloomError } from '../../shared/contract/errors.ts';
import type { RunSummary } from '../../shared/contract/run-summary.ts';
import type { Engine } from '../../shared/engine/engine.ts';
import { findJson } from '../../shared/store/artefact-reader.ts';
import { openStore } from '../../shared/store/open-store.ts';
import type { Store } from '../../shared/store/store.ts';
import { lockStore } from '../../shared/store/store-lock.ts';
import { carryOut } from './carry-out.ts';
import { loadBasin } from './load-basin.ts';
import { LogProgress } from './log-progress.ts';
import { type RunListener, tellAll } from './progress.ts';
import { newRunId, type RunHead, type RunRecord } from './run-record.ts';
import type { RunEntry, RunRequest, Runs } from './runs.ts';

export interface RunRegistryOptions {
  /** Where the coordinator remembers what it was asked for. */
  readonly home: Store;
  readonly openEngine: (run: string, store: string) => Engine;
  readonly log: Logger;
  readonly now: () => Date;
  readonly host: string;
  readonly process: number;
  readonly software: RunSummary['software'];
  /** How long after a run could not be taken up it is tried again, ms. @defaultValue 10,000 */
  readonly againMs?: number;
}

/** requests/<run>.json in the coordinator's home. */
interface Registered {
  readonly id: string;
  readonly request: RunRequest;
  readonly store: string;
  readonly started: string;
  /** Still to be done: a coordinator that starts takes it up again. */
  readonly open: boolean;
}

/** A run that this process carries. */
interface LiveRun {
  readonly head: RunHead;
  readonly store: string;
  readonly stop: AbortController;
  readonly listeners: Set<RunListener>;
  readonly ended: Promise<void>;
  /** False when the coordinator only pauses the run, to take it up again when it is back. */
  closes: boolean;
}

/** The runs of one coordinator. What was asked for lies in its home, how it went in each run's own store. */
export class RunRegistry implements Runs {
  readonly #options: RunRegistryOptions;
  readonly #live = new Map<string, LiveRun>();
  /** Runs that are still to be taken up. */
  readonly #later = new Set<NodeJS.Timeout>();
  #lastStart = 0;

  constructor(options: RunRegistryOptions) {
    this.#options = options;
  }

  /**
   * Takes up the runs that an earlier life of the coordinator left open. One that cannot begin yet is tried again
   * until it can: a container that was killed leaves a lock on its store that lapses only after a while.
   *
   * @returns their number
   */
  async resume(): Promise<number> {
    const open = (await this.#registered()).filter((entry) => entry.open);
    const { againMs = 10_000 } = this.#options;
    for (const { id } of open) {
      if (await this.#takeUp(id)) continue;
      const later = setInterval(() => void this.#takeUp(id).then((over) => over && this.#forget(later)), againMs);
      this.#later.add(later.unref());
    }
    return open.length;
  }

  /** @returns false when the run may begin at another time */
  async #takeUp(id: string): Promise<boolean> {
    try {
      const entry = await this.#find(id);
      if (entry.open && !this.#live.has(id))
        await this.#begin(entry, await loadBasin(entry.request.basinFile, entry.request));
      return true;
    } catch (thrown) {
      const error = BasinloomError.from(thrown);
      this.#options.log[error.retryable ? 'warn' : 'error']({ run: id, error: error.toRecord() }, error.message);
      return !error.retryable;
    }
  }

  #forget(later: NodeJS.Timeout): void {
    clearInterval(later);
    this.#later.delete(later);
  }

  async start(request: RunRequest): Promise<RunEntry> {
    const basin = await loadBasin(request.basinFile, request);
    const started = this.#options.now();
    const entry: Registered = {
      id: this.#newId(started),
      request,
      store: basin.store,
      started: started.toISOString(),
      open: true,
    };
    await this.#begin(entry, basin);
    return this.#entry(entry);
  }

  async list(): Promise<RunEntry[]> {
    const all = await this.#registered();
    return Promise.all(all.reverse().map((entry) => this.#entry(entry)));
  }

  async get(id: string): Promise<RunEntry> {
    return this.#entry(await this.#find(id));
  }

  async cancel(id: string): Promise<RunEntry> {
    const entry = await this.#find(id);
    const live = this.#live.get(id);
    if (live) {
      live.stop.abort();
      await live.ended;
    } else if (entry.open) await this.#remember({ ...entry, open: false });
    return this.get(id);
  }

  async rerun(id: string): Promise<RunEntry> {
    return this.start((await this.#find(id)).request);
  }

  async watch(id: string, listener: RunListener, ended: (record: RunRecord) => void): Promise<() => void> {
    const live = this.#live.get(id);
    if (!live) {
      ended((await this.get(id)).record);
      return () => {};
    }
    live.listeners.add(listener);
    let watching = true;
    void live.ended.then(async () => {
      if (watching) ended((await this.get(id)).record);
    });
    return () => {
      watching = false;
      live.listeners.delete(listener);
    };
  }

  /** How many runs this process carries. */
  get running(): number {
    return this.#live.size;
  }

  /** Pauses every run after the jobs in hand; they stay open for the next life. */
  async close(): Promise<void> {
    for (const later of this.#later) this.#forget(later);
    const live = [...this.#live.values()];
    for (const run of live) {
      run.closes = false;
      run.stop.abort();
    }
    await Promise.all(live.map(({ ended }) => ended));
  }

  async #begin(entry: Registered, basin: BasinFile): Promise<void> {
    const { request, id } = entry;
    if ([...this.#live.values()].some(({ store }) => store === entry.store))
      throw new BasinloomError('RUN_LOCKED', { path: entry.store, pid: this.#options.process });
    const release = await lockStore(entry.store);
    const head = this.#head(entry, basin.region.name);
    try {
      await this.#remember(entry);
    } catch (error) {
      await release();
      throw error;
    }
    const stop = new AbortController();
    const log = this.#options.log.child({ run: id });
    const listeners = new Set<RunListener>([new LogProgress(log)]);
    const engine = this.#options.openEngine(id, entry.store);
    const store = openStore(entry.store);
    log.info({ basinFile: request.basinFile, store: entry.store }, 'run starts');
    const ended = carryOut(basin, head, {
      store,
      engine,
      listener: tellAll(listeners),
      signal: stop.signal,
      now: this.#options.now,
    })
      .then(({ state }) => log.info({ state }, 'run ends'))
      .catch((thrown) => {
        const error = BasinloomError.from(thrown);
        log.error({ error: error.toRecord() }, error.message);
      })
      .then(() => this.#end(entry, release, engine));
    this.#live.set(id, { head, store: entry.store, stop, listeners, ended, closes: true });
  }

  async #end(entry: Registered, release: () => Promise<void>, engine: Engine): Promise<void> {
    const { log } = this.#options;
    const closes = this.#live.get(entry.id)?.closes ?? true;
    try {
      await engine.close();
      if (closes) await this.#remember({ ...entry, open: false });
      await release();
    } catch (thrown) {
      log.error({ run: entry.id, error: BasinloomError.from(thrown).toRecord() }, 'the end of a run');
    } finally {
      this.#live.delete(entry.id);
    }
  }

  #head({ id, request, started }: Registered, basin: string): RunHead {
    const { host, process, software } = this.#options;
    return { id, basin, basinFile: request.basinFile, host, process, software, started };
  }

  async #entry(entry: Registered): Promise<RunEntry> {
    const { id, request, store, started } = entry;
    const known = await findJson<RunRecord>(openStore(store), `runs/${id}/run.json`);
    if (known) return { record: known, request, store };
    const head = this.#live.get(id)?.head ?? this.#head(entry, '');
    return { record: { ...head, state: 'running', updated: started, stages: {}, leftOut: 0 }, request, store };
  }

  /** Ids sort by time; two runs of the same millisecond get different ones. */
  #newId(started: Date): string {
    const moment = new Date(Math.max(started.getTime(), this.#lastStart + 1));
    this.#lastStart = moment.getTime();
    return newRunId(moment, this.#options.process);
  }

  async #registered(): Promise<Registered[]> {
    const keys = await this.#options.home.list('requests/');
    const all = await Promise.all(keys.map((key) => findJson<Registered>(this.#options.home, key)));
    return all.flatMap((found) => found ?? []);
  }

  async #find(id: string): Promise<Registered> {
    const found = /^[\w-]+$/.test(id) ? await findJson<Registered>(this.#options.home, `requests/${id}.json`) : null;
    if (!found) throw new BasinloomError('RUN_NOT_FOUND', { path: id });
    return found;
  }

  async #remember(entry: Registered): Promise<void> {
    await this.#options.home.put(`requests/${entry.id}.json`, Buffer.from(`${JSON.stringify(entry, null, 2)}\n`));
  }
}
