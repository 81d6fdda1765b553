import type { PassAdjustment } from '../../shared/contract/calibration.ts';
import type { TileKeys } from '../../shared/contract/jobs.ts';
import type { Plan } from '../../shared/contract/plan.ts';
import { type ProductName, publishedProducts } from '../../shared/contract/products.ts';
import type { PublishedLayer } from '../../shared/contract/run-summary.ts';
import type { Store } from '../../shared/store/store.ts';
import { addDays } from '../../shared/time/calendar.ts';
import { artefactKey } from './artefact-key.ts';
import { isPublished } from './is-published.ts';
import type { JobFactory, PassFlux } from './job-factory.ts';
import { putJson } from './put-json.ts';
import type { StageRunner } from './stage-runner.ts';

/** Flux artefacts by tile, in pass order. */
export type FluxesByTile = ReadonlyMap<number, readonly { readonly pass: number; readonly key: string }[]>;

const NO_ADJUSTMENT = { gain: 1, offset: 0, links: 0 };

/** The tile jobs of one date or period that left a result. */
interface Layer {
  readonly when: string;
  readonly jobs: readonly { readonly tile: number; readonly outputKey: string; readonly fluxes: readonly PassFlux[] }[];
}

/** From adjusted flux tiles to the published layers of every date and period: day, integrate, tally, mosaic. */
export class LayerStages {
  readonly #plan: Plan;
  readonly #factory: JobFactory;
  readonly #runner: StageRunner;
  readonly #store: Store;
  readonly #fluxes: ReadonlyMap<number, readonly PassFlux[]>;

  constructor(
    plan: Plan,
    { factory, runner, store }: { factory: JobFactory; runner: StageRunner; store: Store },
    fluxes: FluxesByTile,
    adjustments: readonly PassAdjustment[],
  ) {
    this.#plan = plan;
    this.#factory = factory;
    this.#runner = runner;
    this.#store = store;
    const adjustmentOf = new Map(adjustments.map((adjustment) => [adjustment.passId, adjustment]));
    const adjusted = ({ pass, key }: { readonly pass: number; readonly key: string }): PassFlux => {
      const passId = plan.passes[pass].pass.id;
      return { pass, key, adjustment: adjustmentOf.get(passId) ?? { passId, ...NO_ADJUSTMENT } };
    };
    this.#fluxes = new Map([...fluxes].map(([tile, all]) => [tile, all.map(adjusted)]));
  }

  /** Day layers of every overpass date within the period. */
  async days(): Promise<PublishedLayer[]> {
    const { basin, passes } = this.#plan;
    const products = publishedProducts(basin.products, 'day');
    const inPeriod = (date: string) => date >= basin.period.from && date <= basin.period.to;
    const dates = [...new Set(passes.map(({ pass }) => pass.date).filter(inPeriod))].sort();
    const jobs = dates.flatMap((date) =>
      [...this.#fluxesOf((of) => of === date)].map(([tile, here]) => this.#factory.day(date, tile, here, products)),
    );
    const finished = await this.#runner.run('day', jobs);
    const layers = dates.map((date) => ({
      when: date,
      jobs: jobs.filter((job) => job.date === date && finished.has(job.outputKey)),
    }));
    return this.#publish('day', layers, products);
  }

  async periods(): Promise<PublishedLayer[]> {
    const { basin, periods, tiles } = this.#plan;
    const products = publishedProducts(basin.products, 'period');
    const reach = basin.integrate.maxGapDays;
    const jobs = periods.flatMap(({ from, to }, period) => {
      const first = addDays(from, -reach);
      const last = addDays(to, reach);
      const within = this.#fluxesOf((date) => date >= first && date <= last);
      // Every tile, also those that no pass sees: the tables must know how much of a zone has no value.
      return tiles.map((_, tile) => this.#factory.integrate(period, tile, within.get(tile) ?? [], products));
    });
    const finished = await this.#runner.run('integrate', jobs);
    const layers = periods.map(({ id }, period) => ({
      when: id,
      jobs: jobs.filter((job) => job.period === period && finished.has(job.outputKey)),
    }));
    return this.#publish('period', layers, products);
  }

  /** Stitches the tiles of every layer and adds up their seams and zone sums. */
  async #publish(
    per: 'day' | 'period',
    layers: readonly Layer[],
    products: readonly ProductName[],
  ): Promise<PublishedLayer[]> {
    const { passes } = this.#plan;
    const filled = [];
    for (const layer of layers)
      if (layer.jobs.length > 0) filled.push({ ...layer, tilesKey: await this.#tiles(layer) });
    const tallies = filled.map(({ when, tilesKey }) => this.#factory.tally(when, per, tilesKey));
    const tallied = await this.#runner.run('tally', tallies, 'product');
    const mosaics = filled.flatMap(({ when, tilesKey }) =>
      products.map((product) => this.#factory.mosaic(product, when, tilesKey)),
    );
    const stitched = await this.#runner.run('mosaic', mosaics, 'product', (job) => isPublished(job, this.#store));
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

  /** Leaves the list of the layer's tile artefacts in the store. */
  async #tiles({ jobs }: Layer): Promise<string> {
    const keys: (string | null)[] = this.#plan.tiles.map(() => null);
    for (const job of jobs) keys[job.tile] = job.outputKey;
    const tilesKey = artefactKey('tiles', keys, '.json');
    await putJson(this.#store, tilesKey, keys satisfies TileKeys);
    return tilesKey;
  }

  /** By tile, the fluxes of the passes whose date is wanted; tiles without any are left out. */
  #fluxesOf(wanted: (date: string) => boolean): Map<number, PassFlux[]> {
    const { passes } = this.#plan;
    const found = [...this.#fluxes].map(
      ([tile, all]) => [tile, all.filter(({ pass }) => wanted(passes[pass].pass.date))] as const,
    );
    return new Map(found.filter(([, here]) => here.length > 0));
  }
}
