import type { PassAdjustment } from './calibration.ts';
import type { ErrorRecord } from './errors.ts';
import type { ProductName } from './products.ts';

/**
 * Payloads of the jobs. They carry references (keys of artefacts, indexes into the plan), never pixels, so the
 * same payload serves a worker thread and a queue.
 */
export interface JobBase {
  /** Unique within a run and stage, safe in a file name and in a queue. */
  readonly id: string;
  /** Store key of the plan. */
  readonly planKey: string;
  /** Store key of the artefact this job leaves. */
  readonly outputKey: string;
}

/** Elevation and gradient of one tile. */
export interface TerrainJob extends JobBase {
  readonly stage: 'terrain';
  readonly tile: number;
}

/** Scene bands of one pass on one tile, and the tile's anchor summary. */
export interface PrepareJob extends JobBase {
  readonly stage: 'prepare';
  readonly pass: number;
  readonly tile: number;
  readonly terrainKey: string;
  /** Where the mergeable summary goes. */
  readonly summaryKey: string;
}

/** Fluxes and day fraction of one pass on one tile. */
export interface FluxJob extends JobBase {
  readonly stage: 'flux';
  readonly pass: number;
  readonly tile: number;
  readonly preparedKey: string;
  readonly terrainKey: string;
  readonly calibrationKey: string;
}

/** Statistics of all overlapping pass pairs on one tile. */
export interface OverlapJob extends JobBase {
  readonly stage: 'overlap';
  readonly tile: number;
  readonly fluxKeys: readonly { readonly pass: number; readonly key: string }[];
  readonly pairs: readonly (readonly [number, number])[];
}

/** Final blocks of one date on one tile. */
export interface DayJob extends JobBase {
  readonly stage: 'day';
  readonly date: string;
  readonly tile: number;
  readonly fluxes: readonly { readonly pass: number; readonly key: string; readonly adjustment: PassAdjustment }[];
  readonly products: readonly ProductName[];
}

/** Final blocks of one period on one tile. */
export interface IntegrateJob extends JobBase {
  readonly stage: 'integrate';
  readonly period: number;
  readonly tile: number;
  readonly fluxes: readonly { readonly pass: number; readonly key: string; readonly adjustment: PassAdjustment }[];
  readonly products: readonly ProductName[];
}

/**
 * Key of the artefact of each tile of a layer, in the order of Plan.tiles; null where the tile has none. An
 * artefact of its own: for a large region the list is far too long for a queue.
 */
export type TileKeys = readonly (string | null)[];

/** One product file from the blocks of all its tiles. */
export interface MosaicJob extends JobBase {
  readonly stage: 'mosaic';
  readonly product: ProductName;
  /** Date or period id. */
  readonly when: string;
  /** Store key of the list of tile artefacts (TileKeys). */
  readonly tilesKey: string;
}

/** Seams and zone sums of one date or period, merged over its tiles. */
export interface TallyJob extends JobBase {
  readonly stage: 'tally';
  readonly when: string;
  readonly per: 'day' | 'period';
  /** As in MosaicJob. */
  readonly tilesKey: string;
}

/** Tables, catalogue and report from the summary of a run. */
export interface PublishJob extends JobBase {
  readonly stage: 'publish';
  readonly summaryKey: string;
}

export type TileJob = TerrainJob | PrepareJob | FluxJob | OverlapJob | DayJob | IntegrateJob;
export type MosaickerJob = MosaicJob | TallyJob | PublishJob;
export type Job = TileJob | MosaickerJob;
export type Stage = Job['stage'];

/** A job with what a worker that serves many runs needs to do it. */
export interface JobEnvelope<J extends Job = Job> {
  /** Id of the run, for logs. */
  readonly run: string;
  /** Location of the store (see openStore). */
  readonly store: string;
  readonly job: J;
}

const MOSAICKER_STAGES: ReadonlySet<Stage> = new Set<Stage>(['mosaic', 'tally', 'publish']);

/** The service that does the jobs of a stage. */
export function serviceOf(stage: Stage): 'worker' | 'mosaicker' {
  return MOSAICKER_STAGES.has(stage) ? 'mosaicker' : 'worker';
}

/** How a job ended. */
export type Settled<J extends Job = Job> =
  | { readonly status: 'done'; readonly job: J; readonly seconds: number; readonly attempts: number }
  | { readonly status: 'set-aside'; readonly job: J; readonly error: ErrorRecord; readonly attempts: number };
