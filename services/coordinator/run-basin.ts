import type { Calibration, OverlapResidual, PassAdjustment } from '../../shared/contract/calibration.ts';
import type { ErrorCode } from '../../shared/contract/error-table.ts';
import { BasinloomError } from '../../shared/contract/errors.ts';
import type { PrepareJob } from '../../shared/contract/jobs.ts';
import type { Plan } from '../../shared/contract/plan.ts';
import { ALWAYS_PUBLISHED, PRODUCTS, type ProductName } from '../../shared/contract/products.ts';
import type { PassEvidence, PublishedLayer, RunSummary } from '../../shared/contract/run-summary.ts';
import type { Engine } from '../../shared/engine/engine.ts';
import type { Store } from '../../shared/store/store.ts';
import { addDays } from '../../shared/time/calendar.ts';
import { adjustPasses, movedFar, overlapPairs } from './adjust.ts';
import { artefactKey, canonicalJson } from './artefact-key.ts';
import { borrowCalibration, calibratePass, mergedSummary, passEvidence } from './calibrate.ts';
import { isPublished } from './is-published.ts';
import { JobFactory, type PassFlux } from './job-factory.ts';
import type { RunListener } from './progress.ts';
import { StageRunner } from './stage-runner.ts';

export interface RunContext {
  readonly store: Store;
  readonly engine: Engine;
  readonly listener: RunListener;
  readonly signal: AbortSignal;
  readonly software: RunSummary['software'];
}

export interface RunResult {
  readonly summary: RunSummary;
  readonly stages: StageRunner['counts'];
  /** True when something that was asked for is missing from the products. */
  readonly gaps: boolean;
}

/** What ails a pass that another calibration can help. */
const LACKS_ANCHORS: ReadonlySet<ErrorCode> = new Set<ErrorCode>([
  'PASS_NO_ANCHORS',
  'PASS_SPARSE',
  'PASS_CALIBRATION',
]);

const NO_ADJUSTMENT = { gain: 1, offset: 0, links: 0 };

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
  readonly #evidence: PassEvidence[] = [];

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
    const calibrations = await this.#calibrate(prepared);
    const fluxes = await this.#flux(prepared, calibrations);
    const { adjustments, residuals } = await this.#adjust(fluxes);
    const layers = [...(await this.#days(fluxes, adjustments)), ...(await this.#periods(fluxes, adjustments))];
    const summary: RunSummary = {
      planKey: this.#planKey,
      software,
      calibrations: [...calibrations.values()],
      evidence: this.#evidence,
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
    let landed: ReadonlySet<string> | null = null;
    if (terrain) {
      landed = await this.#runner.run(
        'terrain',
        tiles.map((_, tile) => this.#factory.terrain(tile)),
      );
    }
    const jobs = passes
      .flatMap((planned, pass) => planned.tiles.map((tile) => this.#factory.prepare(pass, tile)))
      .filter((job) => landed?.has(job.terrainKey) ?? true);
    const finished = await this.#runner.run('prepare', jobs);
    return Map.groupBy(
      jobs.filter((job) => finished.has(job.outputKey)),
      (job) => job.pass,
    );
  }

  /** One calibration for each pass that can have one; the others borrow or are set aside. */
  async #calibrate(prepared: ReadonlyMap<number, PrepareJob[]>): Promise<Map<number, Calibration>> {
    const { store, listener, signal } = this.#context;
    const counts = { total: this.#plan.passes.length, done: 0, kept: 0, setAside: 0 };
    this.#runner.counts.set('calibrate', counts);
    listener.stage('calibrate', counts);
    const own = new Map<number, Calibration>();
    const failed: { pass: number; error: BasinloomError }[] = [];
    for (const [pass, jobs] of prepared) {
      signal.throwIfAborted();
      let evidence: PassEvidence | undefined;
      try {
        const summary = await mergedSummary(
          jobs.map((job) => job.summaryKey),
          store,
        );
        evidence = passEvidence(this.#plan.passes[pass].pass.id, summary);
        const found = calibratePass(this.#plan, pass, summary);
        own.set(pass, found.calibration);
        evidence = found.evidence;
      } catch (error) {
        failed.push({ pass, error: BasinloomError.from(error) });
      }
      if (evidence) this.#evidence.push(evidence);
      counts.done = own.size;
      listener.settled('calibrate', counts);
    }
    const all = new Map(own);
    for (const { pass, error } of failed) {
      const borrowed = this.#borrow(pass, error, own);
      const { id } = this.#plan.passes[pass].pass;
      if (borrowed) {
        all.set(pass, borrowed);
        counts.done++;
        listener.note('calibration borrowed', { pass: id, from: borrowed.borrowedFrom, because: error.message });
      } else {
        counts.setAside++;
        this.#runner.setAside({ kind: 'pass', id, gap: error.code !== 'PASS_ALL_CLOUD', error: error.toRecord() });
      }
    }
    if (all.size === 0) throw failed[0]?.error ?? new BasinloomError('INTERNAL', { detail: 'no pass was prepared' });
    listener.settled('calibrate', counts);
    return all;
  }

  #borrow(pass: number, error: BasinloomError, own: ReadonlyMap<number, Calibration>): Calibration | null {
    if (!LACKS_ANCHORS.has(error.code) || this.#plan.basin.method.anchors.onFailure !== 'borrow') return null;
    const lenders = [...own].map(([other, calibration]) => ({ pass: other, calibration }));
    return borrowCalibration(this.#plan, pass, lenders);
  }

  /** @returns for every tile, the flux artefacts on it in pass order */
  async #flux(
    prepared: ReadonlyMap<number, PrepareJob[]>,
    calibrations: ReadonlyMap<number, Calibration>,
  ): Promise<Map<number, { pass: number; key: string }[]>> {
    const { store } = this.#context;
    const jobs = [];
    for (const [pass, calibration] of [...calibrations].sort(([a], [b]) => a - b)) {
      const key = artefactKey('calibration', calibration, '.json');
      await putJson(store, key, calibration);
      for (const { tile } of prepared.get(pass) ?? []) jobs.push(this.#factory.flux(pass, tile, key));
    }
    const finished = await this.#runner.run('flux', jobs);
    const landed = jobs
      .filter((job) => finished.has(job.outputKey))
      .map(({ tile, pass, outputKey }) => ({ tile, pass, key: outputKey }));
    return Map.groupBy(landed, ({ tile }) => tile);
  }

  async #adjust(
    fluxes: ReadonlyMap<number, { pass: number; key: string }[]>,
  ): Promise<{ adjustments: PassAdjustment[]; residuals: OverlapResidual[] }> {
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

  /** Day layers of every overpass date within the period. */
  async #days(
    fluxes: ReadonlyMap<number, { pass: number; key: string }[]>,
    adjustments: readonly PassAdjustment[],
  ): Promise<PublishedLayer[]> {
    const { basin, passes } = this.#plan;
    const products = this.#products('day');
    const inPeriod = ({ date }: { date: string }) => date >= basin.period.from && date <= basin.period.to;
    const dates = [
      ...new Set(
        passes
          .map(({ pass }) => pass)
          .filter(inPeriod)
          .map(({ date }) => date),
      ),
    ].sort();
    const jobs = dates.flatMap((date) =>
      [...this.#fluxesOf(fluxes, adjustments, (pass) => passes[pass].pass.date === date)].map(([tile, here]) =>
        this.#factory.day(date, tile, here, products),
      ),
    );
    const finished = await this.#runner.run('day', jobs);
    const layers = dates.map((date) => ({
      when: date,
      jobs: jobs.filter((job) => job.date === date && finished.has(job.outputKey)),
    }));
    return this.#mosaics('day', layers, products);
  }

  async #periods(
    fluxes: ReadonlyMap<number, { pass: number; key: string }[]>,
    adjustments: readonly PassAdjustment[],
  ): Promise<PublishedLayer[]> {
    const { basin, passes, periods, tiles } = this.#plan;
    const products = this.#products('period');
    const reach = basin.integrate.maxGapDays;
    const jobs = periods.flatMap(({ from, to }, period) => {
      const first = addDays(from, -reach);
      const last = addDays(to, reach);
      const within = this.#fluxesOf(fluxes, adjustments, (pass) => {
        const { date } = passes[pass].pass;
        return date >= first && date <= last;
      });
      // Every tile, also those that no pass sees: the tables must know how much of a zone has no value.
      return tiles.map((_, tile) => this.#factory.integrate(period, tile, within.get(tile) ?? [], products));
    });
    const finished = await this.#runner.run('integrate', jobs);
    const layers = periods.map(({ id }, period) => ({
      when: id,
      jobs: jobs.filter((job) => job.period === period && finished.has(job.outputKey)),
    }));
    return this.#mosaics('period', layers, products);
  }

  /** Stitches the tiles of every layer and adds up their seams and zone sums. */
  async #mosaics(
    per: 'day' | 'period',
    layers: readonly {
      when: string;
      jobs: readonly { tile: number; outputKey: string; fluxes: readonly PassFlux[] }[];
    }[],
    products: readonly ProductName[],
  ): Promise<PublishedLayer[]> {
    const { tiles, passes } = this.#plan;
    const filled = layers.filter(({ jobs }) => jobs.length > 0);
    const keysOf = (jobs: readonly { tile: number; outputKey: string }[]) => {
      const keys: (string | null)[] = tiles.map(() => null);
      for (const job of jobs) keys[job.tile] = job.outputKey;
      return keys;
    };
    const tallies = filled.map(({ when, jobs }) => this.#factory.tally(when, per, keysOf(jobs)));
    const tallied = await this.#runner.run('tally', tallies, 'product');
    const mosaics = filled.flatMap(({ when, jobs }) =>
      products.map((product) => this.#factory.mosaic(product, when, keysOf(jobs))),
    );
    const stitched = await this.#runner.run('mosaic', mosaics, 'product', (job) =>
      isPublished(job, this.#context.store),
    );
    return filled.flatMap(({ when, jobs }, index): PublishedLayer[] => {
      if (!tallied.has(tallies[index].outputKey)) return [];
      const mine = mosaics.filter((job) => job.when === when && stitched.has(job.outputKey));
      const used = new Set(jobs.flatMap((job) => job.fluxes.map(({ pass }) => pass)));
      return [
        {
          when,
          per,
          passes: [...used].sort((a, b) => a - b).map((pass) => passes[pass].pass.id),
          tallyKey: tallies[index].outputKey,
          mosaics: Object.fromEntries(mine.map((job) => [job.product, job.outputKey])),
        },
      ];
    });
  }

  async #publish(summary: RunSummary): Promise<void> {
    const key = artefactKey('publish', summary, '.summary.json');
    await putJson(this.#context.store, key, summary);
    // Always done: tables and report are small, and somebody may have deleted one.
    await this.#runner.run('publish', [this.#factory.publish(key)], 'product', () => Promise.resolve(false));
  }

  #products(per: 'day' | 'period'): ProductName[] {
    const asked = new Set<ProductName>([...this.#plan.basin.products, ...ALWAYS_PUBLISHED]);
    return [...asked].filter((product) => PRODUCTS[product].per === per).sort();
  }

  #fluxesOf(
    fluxes: ReadonlyMap<number, { pass: number; key: string }[]>,
    adjustments: readonly PassAdjustment[],
    wanted: (pass: number) => boolean,
  ): Map<number, PassFlux[]> {
    const adjustmentOf = new Map(adjustments.map((adjustment) => [adjustment.passId, adjustment]));
    const found = new Map<number, PassFlux[]>();
    for (const [tile, all] of fluxes) {
      const here = all
        .filter(({ pass }) => wanted(pass))
        .map(({ pass, key }) => {
          const passId = this.#plan.passes[pass].pass.id;
          return { pass, key, adjustment: adjustmentOf.get(passId) ?? { passId, ...NO_ADJUSTMENT } };
        });
      if (here.length > 0) found.set(tile, here);
    }
    return found;
  }
}

async function putJson(store: Store, key: string, value: unknown): Promise<void> {
  if (!(await store.has(key))) await store.put(key, Buffer.from(canonicalJson(value)));
}
