import type { ErrorRecord } from '../../shared/contract/errors.ts';
import type { LeftOut, Plan } from '../../shared/contract/plan.ts';
import type { RunSummary } from '../../shared/contract/run-summary.ts';
import type { Store } from '../../shared/store/store.ts';
import type { RunListener, StageCounts, StageName } from './progress.ts';

export type RunState = 'running' | 'complete' | 'complete-with-gaps' | 'failed' | 'stopped';

/** runs/<run>/run.json: what `basinloom status` reads. */
export interface RunRecord {
  readonly id: string;
  readonly state: RunState;
  readonly basin: string;
  readonly basinFile: string;
  /** Name of the machine and number of the process that carries it. */
  readonly host: string;
  readonly process: number;
  readonly software: RunSummary['software'];
  readonly started: string;
  readonly updated: string;
  readonly stages: Readonly<Partial<Record<StageName, StageCounts>>>;
  readonly leftOut: number;
  readonly error?: ErrorRecord;
}

/** What is known of a run before it starts. */
export type RunHead = Pick<RunRecord, 'id' | 'basin' | 'basinFile' | 'host' | 'process' | 'software' | 'started'>;

/** An id for a run: sorts by time, unique among the processes of a store. */
export function newRunId(started: Date, process: number): string {
  return `${started.toISOString().replace(/[-:.]/g, '')}-${process}`;
}

/** How often run.json is written while jobs settle, ms. */
const WRITE_EVERY_MS = 1000;

/** Keeps the folder of one run up to date: run.json, events.ndjson, failures.json, lineage.json. */
export class RunRecorder implements RunListener {
  readonly #store: Store;
  readonly #now: () => Date;
  #record: RunRecord;
  readonly #stages: Partial<Record<StageName, StageCounts>> = {};
  readonly #leftOut: LeftOut[] = [];
  #writing: Promise<void> = Promise.resolve();
  #written = 0;

  /** @param head with the id and start of an earlier life when a killed run goes on */
  constructor(store: Store, head: RunHead, now: () => Date) {
    this.#store = store;
    this.#now = now;
    const updated = now().toISOString();
    this.#record = { state: 'running', updated, stages: this.#stages, leftOut: 0, ...head };
  }

  get id(): string {
    return this.#record.id;
  }

  stage(name: StageName, counts: Readonly<StageCounts>): void {
    this.#stages[name] = counts;
    this.#event('stage', { stage: name, total: counts.total });
    this.#save();
  }

  settled(name: StageName, counts: Readonly<StageCounts>): void {
    this.#stages[name] = counts;
    if (this.#now().getTime() - this.#written >= WRITE_EVERY_MS) this.#save();
  }

  leftOut(entry: LeftOut): void {
    this.#leftOut.push(entry);
    this.#event('left-out', { ...entry });
  }

  note(message: string, fields: Readonly<Record<string, unknown>>): void {
    this.#event('note', { message, ...fields });
  }

  /** Writes the final state; every file of the run folder is on disk afterwards. */
  async end(state: RunState, error?: ErrorRecord): Promise<void> {
    this.#event('end', { state, ...(error && { error }) });
    this.#record = { ...this.#record, state, ...(error && { error }) };
    this.#save();
    const failures = {
      run: this.id,
      state,
      failures: this.#leftOut.filter(({ gap }) => gap),
      notes: this.#leftOut.filter(({ gap }) => !gap),
    };
    this.#put('failures.json', failures);
    await this.#writing;
  }

  /** What made the products: plan, calibrations, versions, and the hash of every artefact's name. */
  lineage(plan: Plan, summary: RunSummary): void {
    this.#put('lineage.json', lineageOf(this.id, plan, summary));
  }

  #event(kind: string, fields: Readonly<Record<string, unknown>>): void {
    const line = `${JSON.stringify({ time: this.#now().toISOString(), event: kind, ...fields })}\n`;
    this.#enqueue(() => this.#store.append(`runs/${this.id}/events.ndjson`, Buffer.from(line)));
  }

  #save(): void {
    this.#written = this.#now().getTime();
    this.#record = { ...this.#record, updated: this.#now().toISOString(), leftOut: this.#leftOut.length };
    this.#put('run.json', this.#record);
  }

  #put(name: string, value: unknown): void {
    const bytes = Buffer.from(`${JSON.stringify(value, null, 2)}\n`);
    this.#enqueue(() => this.#store.put(`runs/${this.id}/${name}`, bytes));
  }

  #enqueue(write: () => Promise<void>): void {
    // One after another; a failed write of the record must not end the run, the products matter more.
    this.#writing = this.#writing.then(write).catch(() => {});
  }
}

/** From every published layer back to scenes, anchors, weather, parameters and versions. */
function lineageOf(run: string, plan: Plan, summary: RunSummary): unknown {
  return {
    run,
    software: summary.software,
    basin: plan.basin,
    grid: plan.grid,
    datumElevationM: plan.datumElevationM,
    inputs: { terrain: plan.terrain, landcover: plan.landcover },
    passes: plan.passes.map(({ pass, weather }) => ({
      id: pass.id,
      acquired: pass.acquired,
      scenes: pass.scenes.map(({ id, metadataFile, fingerprint, bands }) => ({ id, metadataFile, fingerprint, bands })),
      weather,
      calibration: summary.calibrations.find(({ passId }) => passId === pass.id),
      adjustment: summary.adjustments.find(({ passId }) => passId === pass.id),
    })),
    residuals: summary.residuals,
    layers: summary.layers,
    leftOut: summary.leftOut,
  };
}
