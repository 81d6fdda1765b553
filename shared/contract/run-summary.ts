import type { Calibration, OverlapResidual, PassAdjustment } from './calibration.ts';
import type { LeftOut } from './plan.ts';
import type { ProductName } from './products.ts';

/** One date or period as the run left it: references to what publishing needs. */
export interface PublishedLayer {
  /** Date or period id: the folder under products/. */
  readonly when: string;
  readonly per: 'day' | 'period';
  /** Passes that give values. */
  readonly passes: readonly string[];
  /** Store key of the merged seams and zone sums. */
  readonly tallyKey: string;
  /** Store key of the record that the mosaic of each product left. */
  readonly mosaics: Partial<Record<ProductName, string>>;
}

/** Counts of eligible pixels over NDVI (columns) and datum temperature (rows, coldest first). */
export interface ScatterCounts {
  readonly ndviStart: number;
  readonly ndviStep: number;
  readonly temperatureStartK: number;
  readonly temperatureStepK: number;
  readonly columns: number;
  readonly rows: number;
  readonly counts: readonly number[];
}

/** What the anchors of a pass were chosen from. */
export interface PassEvidence {
  readonly passId: string;
  readonly usable: number;
  readonly coldCandidates?: number;
  readonly hotCandidates?: number;
  readonly scatter: ScatterCounts;
}

/** All that publishing needs to know of a run. Holds no clock: the same inputs give the same summary. */
export interface RunSummary {
  readonly planKey: string;
  readonly software: { readonly name: string; readonly version: string };
  readonly calibrations: readonly Calibration[];
  readonly evidence: readonly PassEvidence[];
  readonly adjustments: readonly PassAdjustment[];
  readonly residuals: readonly OverlapResidual[];
  readonly leftOut: readonly LeftOut[];
  readonly layers: readonly PublishedLayer[];
}
