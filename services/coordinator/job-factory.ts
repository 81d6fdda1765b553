import type { PassAdjustment } from '../../shared/contract/calibration.ts';
import type {
  DayJob,
  FluxJob,
  IntegrateJob,
  MosaicJob,
  OverlapJob,
  PrepareJob,
  PublishJob,
  TallyJob,
  TerrainJob,
} from '../../shared/contract/jobs.ts';
import type { Plan } from '../../shared/contract/plan.ts';
import type { ProductName } from '../../shared/contract/products.ts';
import { storedPlanes } from '../../shared/flux/stored-planes.ts';
import { tileId } from '../../shared/region/tiles.ts';
import { artefactKey, digest } from './artefact-key.ts';

export interface PassFlux {
  readonly pass: number;
  readonly key: string;
  readonly adjustment: PassAdjustment;
}

/** Makes the jobs of a plan, each named by what determines its result and by nothing else. */
export class JobFactory {
  readonly #plan: Plan;
  readonly #planKey: string;
  readonly #grid: unknown;
  /** Short names of things too long to stand in every identity. */
  readonly #region: string;
  readonly #zones: string;

  constructor(plan: Plan, planKey: string) {
    this.#plan = plan;
    this.#planKey = planKey;
    this.#grid = { ...plan.grid, crs: plan.grid.crs.code };
    this.#region = digest(plan.boundary);
    this.#zones = digest([plan.boundary, plan.zones]);
  }

  /** Without a terrain file the job is not run, but names what the tile's flat land depends on. */
  terrain(tile: number): TerrainJob {
    const outputKey = artefactKey('terrain', {
      place: this.#place(tile),
      terrain: this.#plan.terrain?.fingerprint ?? this.#plan.basin.elevation,
    });
    return { stage: 'terrain', id: this.#id(tile), planKey: this.#planKey, outputKey, tile };
  }

  prepare(pass: number, { tile, outputKey: terrainKey }: TerrainJob): PrepareJob {
    const { basin, landcover, datumElevationM, passes } = this.#plan;
    const { anchors, lapseRateKPerM } = basin.method;
    const identity = {
      place: this.#place(tile),
      region: this.#region,
      // Only the scenes that touch the tile, each with its place in the pass (it stands in the origin plane).
      scenes: passes[pass].pass.scenes.flatMap(({ fingerprint }, index) =>
        passes[pass].sceneTiles[index].includes(tile) ? [[index, fingerprint]] : [],
      ),
      terrainKey,
      landcover: landcover && [landcover.fingerprint, landcover.classes],
      eligible: [anchors.homogeneity, anchors.maxSlopeDeg, anchors.maxReliefM, datumElevationM, lapseRateKPerM],
    };
    return {
      stage: 'prepare',
      id: this.#id(tile, passes[pass].pass.id),
      planKey: this.#planKey,
      outputKey: artefactKey('prepare', identity),
      summaryKey: artefactKey('prepare', identity, '.summary'),
      pass,
      tile,
      terrainKey,
    };
  }

  flux(prepared: PrepareJob, calibrationKey: string): FluxJob {
    const { basin, passes, solarOffsetHours } = this.#plan;
    const { pass, tile } = prepared;
    const { pass: record, weather } = passes[pass];
    const { lapseRateKPerM, longwaveTemperature, turbidity } = basin.method;
    const outputKey = artefactKey('flux', {
      prepared: prepared.outputKey,
      calibrationKey,
      weather,
      time: [record.acquired, record.scenes.map((scene) => scene.acquired), record.date, solarOffsetHours],
      options: [lapseRateKPerM, longwaveTemperature, turbidity],
      planes: storedPlanes(basin.products),
    });
    return {
      stage: 'flux',
      id: this.#id(tile, record.id),
      planKey: this.#planKey,
      outputKey,
      pass,
      tile,
      preparedKey: prepared.outputKey,
      terrainKey: prepared.terrainKey,
      calibrationKey,
    };
  }

  overlap(tile: number, fluxKeys: OverlapJob['fluxKeys'], pairs: OverlapJob['pairs']): OverlapJob {
    const identity = {
      fluxKeys: fluxKeys.map(({ key }) => key),
      pairs: pairs.map((pair) => pair.map((pass) => this.#plan.passes[pass].pass.id)),
    };
    return {
      stage: 'overlap',
      id: this.#id(tile),
      planKey: this.#planKey,
      outputKey: artefactKey('overlap', identity),
      tile,
      fluxKeys,
      pairs,
    };
  }

  day(date: string, tile: number, fluxes: readonly PassFlux[], products: readonly ProductName[]): DayJob {
    const { days, basin } = this.#plan;
    const outputKey = artefactKey('day', {
      place: this.#place(tile),
      region: this.#region,
      fluxes: fluxes.map(({ key, adjustment: { gain, offset } }) => [key, gain, offset]),
      reference: days.filter((entry) => entry.date === date),
      products,
      compression: basin.compression,
    });
    return { stage: 'day', id: this.#id(tile, date), planKey: this.#planKey, outputKey, date, tile, fluxes, products };
  }

  integrate(period: number, tile: number, fluxes: readonly PassFlux[], products: readonly ProductName[]): IntegrateJob {
    const { basin, periods, days, landcover, passes } = this.#plan;
    const { from, to, id } = periods[period];
    const outputKey = artefactKey('integrate', {
      place: this.#place(tile),
      period: [from, to],
      fluxes: fluxes.map(({ key, pass, adjustment: { gain, offset } }) => [passes[pass].pass.id, key, gain, offset]),
      reference: days.filter((entry) => entry.date >= from && entry.date <= to),
      options: basin.integrate,
      zones: [this.#zones, landcover && [landcover.fingerprint, landcover.classes]],
      products,
      compression: basin.compression,
    });
    return {
      stage: 'integrate',
      id: this.#id(tile, id),
      planKey: this.#planKey,
      outputKey,
      period,
      tile,
      fluxes,
      products,
    };
  }

  tally(when: string, per: 'day' | 'period', tilesKey: string): TallyJob {
    const outputKey = artefactKey('tally', { grid: this.#grid, tilesKey }, '.json');
    return { stage: 'tally', id: when, planKey: this.#planKey, outputKey, when, per, tilesKey };
  }

  mosaic(product: ProductName, when: string, tilesKey: string): MosaicJob {
    const outputKey = artefactKey('mosaic', { grid: this.#grid, product, when, tilesKey }, '.json');
    return { stage: 'mosaic', id: `${when}-${product}`, planKey: this.#planKey, outputKey, product, when, tilesKey };
  }

  publish(summaryKey: string): PublishJob {
    return {
      stage: 'publish',
      id: 'publish',
      planKey: this.#planKey,
      outputKey: artefactKey('publish', { summaryKey }, '.json'),
      summaryKey,
    };
  }

  #place(tile: number): unknown {
    return [this.#grid, this.#plan.tiles[tile]];
  }

  #id(tile: number, prefix?: string): string {
    const id = tileId(this.#plan.tiles[tile]);
    return prefix ? `${prefix}-${id}` : id;
  }
}
