import type { Calibration, OverlapResidual, PassAdjustment } from '../../shared/contract/calibration.ts';
import type { PrepareJob } from '../../shared/contract/jobs.ts';
import type { Plan } from '../../shared/contract/plan.ts';
import type { RunSummary } from '../../shared/contract/run-summary.ts';
import { adjustPasses, movedFar, overlapPairs } from './adjust.ts';
import { artefactKey } from './artefact-key.ts';
import { calibratePasses } from './calibrate-passes.ts';
import { JobFactory } from './job-factory.ts';
import { type FluxesByTile, LayerStages } from './layer-stages.ts';
import { putJson } from './put-json.ts';
import type { RunContext } from './run-context.ts';
import { StageRunner } from './stage-runner.ts';

export interface RunResult {
  readonly summary: RunSummary;
  readonly stages: StageRunner['counts'];
  /** True when something that was asked for is missing from the products. */
  readonly gaps: boolean;
}

/**
 * The whole run: ordinary sequential code over the stages. It knows the engine and the store by their ports only;
 * what the store already holds is not computed again, so a killed run goes on where it was.
 */
export async function runBasin(plan: Plan, context: RunContext): Promise<RunResult> {
  return new BasinRun(plan, context).run();
}

class BasinRun {
  readonly #plan: Plan;
  readonly #planKey: string;
  readonly #context: RunContext;
  readonly #factory: JobFactory;
  readonly #runner: StageRunner;

  constructor(plan: Plan, context: RunContext) {
    this.#plan = plan;
    this.#planKey = artefactKey('plan', plan, '.json');
    this.#context = context;
    this.#factory = new JobFactory(plan, this.#planKey);
    this.#runner = new StageRunner(context.engine, context.store, context.listener, context.signal);
  }

  async run(): Promise<RunResult> {
    const { store, software } = this.#context;
    await putJson(store, this.#planKey, this.#plan);
    for (const entry of this.#plan.leftOut) this.#runner.setAside(entry);
    const prepared = await this.#prepare();
    const { calibrations, evidence } = await calibratePasses(this.#plan, prepared, this.#context, this.#runner);
    const fluxes = await this.#flux(prepared, calibrations);
    const { adjustments, residuals } = await this.#adjust(fluxes);
    const tools = { factory: this.#factory, runner: this.#runner, store };
    const stages = new LayerStages(this.#plan, tools, fluxes, adjustments);
    const layers = [...(await stages.days()), ...(await stages.periods())];
    const summary: RunSummary = {
      planKey: this.#planKey,
      software,
      calibrations: [...calibrations.values()],
      evidence,
      adjustments,
      residuals,
      leftOut: this.#runner.leftOut,
      layers,
    };
    await this.#publish(summary);
    return { summary, stages: this.#runner.counts, gaps: this.#runner.leftOut.some(({ gap }) => gap) };
  }

  /** @returns prepare jobs with a result, by pass */
  async #prepare(): Promise<Map<number, PrepareJob[]>> {
    const { tiles, passes, terrain } = this.#plan;
    const ground = tiles.map((_, tile) => this.#factory.terrain(tile));
    const landed = terrain ? await this.#runner.run('terrain', ground) : null;
    const jobs = passes
      .flatMap((planned, pass) => planned.tiles.map((tile) => this.#factory.prepare(pass, ground[tile])))
      .filter((job) => landed?.has(job.terrainKey) ?? true);
    const finished = await this.#runner.run('prepare', jobs);
    return Map.groupBy(
      jobs.filter((job) => finished.has(job.outputKey)),
      (job) => job.pass,
    );
  }

  async #flux(
    prepared: ReadonlyMap<number, readonly PrepareJob[]>,
    calibrations: ReadonlyMap<number, Calibration>,
  ): Promise<FluxesByTile> {
    const { store } = this.#context;
    const jobs = [];
    for (const [pass, calibration] of [...calibrations].sort(([a], [b]) => a - b)) {
      const key = artefactKey('calibration', calibration, '.json');
      await putJson(store, key, calibration);
      for (const tile of prepared.get(pass) ?? []) jobs.push(this.#factory.flux(tile, key));
    }
    const finished = await this.#runner.run('flux', jobs);
    const landed = jobs
      .filter((job) => finished.has(job.outputKey))
      .map(({ tile, pass, outputKey }) => ({ tile, pass, key: outputKey }));
    return Map.groupBy(landed, ({ tile }) => tile);
  }

  async #adjust(fluxes: FluxesByTile): Promise<{ adjustments: PassAdjustment[]; residuals: OverlapResidual[] }> {
    const pairs = overlapPairs(this.#plan);
    const jobs = [...fluxes].flatMap(([tile, all]) => {
      const here = new Set(all.map(({ pass }) => pass));
      const pairsHere = pairs.filter(([a, b]) => here.has(a) && here.has(b));
      if (pairsHere.length === 0) return [];
      const needed = new Set(pairsHere.flat());
      return [
        this.#factory.overlap(
          tile,
          all.filter(({ pass }) => needed.has(pass)),
          pairsHere,
        ),
      ];
    });
    const finished = await this.#runner.run('overlap', jobs);
    const keys = jobs.map((job) => job.outputKey).filter((key) => finished.has(key));
    const found = await adjustPasses(this.#plan, keys, this.#context.store);
    for (const moved of movedFar(found.adjustments, this.#plan.basin.method.adjust.anchorUncertainty)) {
      this.#runner.setAside({ kind: 'pass', id: moved.passId, gap: false, error: moved.error });
    }
    return found;
  }

  async #publish(summary: RunSummary): Promise<void> {
    const key = artefactKey('publish', summary, '.summary.json');
    await putJson(this.#context.store, key, summary);
    // Always done: tables and report are small, and somebody may have deleted one.
    await this.#runner.run('publish', [this.#factory.publish(key)], 'product', () => Promise.resolve(false));
  }
}
