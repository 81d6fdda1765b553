import type {
  AnchorRecord,
  MethodName,
  OverlapResidual,
  PassAdjustment,
} from '../../../shared/contract/calibration.ts';
import type { LeftOut } from '../../../shared/contract/plan.ts';
import type { ProductName } from '../../../shared/contract/products.ts';
import type { ScatterCounts } from '../../../shared/contract/run-summary.ts';
import type { BoundsRow, FluxOrder } from '../bounds-check.ts';
import type { MapStyle } from '../pictures.ts';
import type { SeamRow } from '../tables/seams.ts';
import type { ZoneRow } from '../tables/zones.ts';

/**
 * Everything that the report shows, in plain numbers and text. The report adds nothing to it and looks nothing
 * up: what is not in the model is not in the report.
 */
export interface ReportModel {
  /** Name of the basin. */
  readonly basin: string;
  /** First and last day of the accounting, YYYY-MM-DD. */
  readonly from: string;
  readonly to: string;
  readonly status: 'complete' | 'complete-with-gaps';
  readonly runId: string;
  readonly method: MethodName;
  readonly grid: ReportGrid;
  /** Least valid share of the region in a period (checks.minCoverage). */
  readonly minCoverage: number;
  /** Largest mean difference across a pass edge (checks.seamLimit). */
  readonly seamLimit: number;
  /** Rows of tables/zones.csv: the basin and its sub-basins, all land cover and by class. */
  readonly zones: readonly ZoneRow[];
  /** What is known of the uncertainty of the volumes, in words; absent: the report says that none was estimated. */
  readonly uncertainty?: string;
  readonly periodMaps: readonly MapFigure[];
  readonly dayMaps: readonly MapFigure[];
  readonly days: readonly DayQuality[];
  readonly periods: readonly PeriodQuality[];
  readonly passes: readonly PassReport[];
  readonly adjustment: AdjustmentReport | null;
  readonly seams: readonly SeamRow[];
  readonly bounds: readonly BoundsRow[];
  readonly fluxOrders: readonly FluxOrder[];
  readonly closures: readonly ClosureCheck[];
  /** What the run went on without; `gap` says whether the result lacks something for it. */
  readonly leftOut: readonly LeftOut[];
  /** Jobs set aside during the run that `leftOut` does not list already. */
  readonly failures: readonly Failure[];
  readonly parameters: readonly Parameter[];
  readonly sources: readonly Source[];
  readonly versions: readonly { readonly name: string; readonly version: string }[];
}

export interface ReportGrid {
  /** "EPSG:32631" or "laea:<latitude>,<longitude>". */
  readonly crs: string;
  readonly resolutionM: number;
  readonly rows: number;
  readonly columns: number;
  readonly tileSize: number;
  /** Tiles that touch the region. */
  readonly tiles: number;
}

/** One map picture. */
export interface MapFigure {
  readonly product: ProductName;
  /** Date or period id, as the products folder names it. */
  readonly when: string;
  /** PNG bytes of mapPng. */
  readonly png: Uint8Array;
  /** Pixels. */
  readonly width: number;
  readonly height: number;
  readonly style: MapStyle;
  /** Outlines of the boundary and the zones: SVG path data in pixels of the picture. */
  readonly outlines: readonly MapOutline[];
  /** Ground distance of one pixel of the picture, m; gives the scale bar. */
  readonly metresPerPixel: number;
  /** Valid share of the region, 0..1. */
  readonly validFraction: number;
  /** Mean over the valid part of the region, in the unit of the product. */
  readonly mean: number;
  /** Passes that the picture shows, for a day map. */
  readonly passes?: readonly string[];
}

export interface MapOutline {
  readonly kind: 'boundary' | 'zone';
  readonly name: string;
  readonly path: string;
}

/** Pixels of the region on one date. */
export interface DayQuality {
  readonly date: string;
  readonly passes: readonly string[];
  readonly regionPixels: number;
  readonly usable: number;
  /** Pixels by name of the bit in DAY_QUALITY_BITS; one pixel may count under several. */
  readonly bits: Readonly<Record<string, number>>;
}

/** Pixels of the region in one period. */
export interface PeriodQuality {
  readonly period: string;
  readonly from: string;
  readonly to: string;
  readonly regionPixels: number;
  readonly usable: number;
  readonly observationsMean: number;
  readonly observationsMin: number;
  readonly observationsMax: number;
  readonly longestGapDaysMean: number;
  readonly longestGapDaysMax: number;
  /** Pixels by name of the bit in PERIOD_QUALITY_BITS. */
  readonly bits: Readonly<Record<string, number>>;
}

/** One pass, how it was calibrated, and what its anchors were chosen from. */
export interface PassReport {
  readonly passId: string;
  readonly satellite: string;
  readonly date: string;
  /** Centre time, ISO 8601 UTC. */
  readonly acquired: string;
  readonly scenes: readonly string[];
  readonly anchors: readonly AnchorRecord[];
  /** dT = slope * (datum temperature - zeroTemperature), K; absent when the pass was set aside. */
  readonly slope?: number;
  readonly zeroTemperature?: number;
  readonly borrowedFrom?: string;
  /** Why the pass has no calibration of its own. */
  readonly setAside?: string;
  readonly hotCandidates?: number;
  readonly coldCandidates?: number;
  readonly adjustment?: PassAdjustment;
  readonly scatter?: ScatterCounts;
}

export interface AdjustmentReport {
  readonly parameters: 'offset' | 'offset-and-gain';
  readonly overlaps: readonly OverlapResidual[];
  /** Root mean square of the overlap differences, weighted by pixels, of the links that were used. */
  readonly rmsBefore: number;
  readonly rmsAfter: number;
  /** Basin volume of each period as it would be without the adjustment, and as published, m3. */
  readonly totals: readonly { readonly period: string; readonly before: number; readonly after: number }[];
}

/** A sum that must close. */
export interface ClosureCheck {
  /** For example "Energy balance at each pixel". */
  readonly name: string;
  /** What was compared, in words. */
  readonly meaning: string;
  readonly found: number;
  readonly limit: number;
  readonly unit: string;
  readonly within: boolean;
}

/** A job that was set aside. */
export interface Failure {
  readonly stage: string;
  readonly job: string;
  readonly code: string;
  readonly message: string;
  readonly remedy: string;
  readonly attempts: number;
}

export interface Parameter {
  /** Key of the basin file, for example "method.anchors.minCandidates". */
  readonly key: string;
  readonly value: string;
  /** True when the basin file does not set it. */
  readonly isDefault: boolean;
}

export interface Source {
  readonly kind: 'scene' | 'weather' | 'terrain' | 'land cover' | 'boundary' | 'zones' | 'basin file';
  /** Product identifier or file name. */
  readonly name: string;
  /** Identity of the bytes. */
  readonly fingerprint?: string;
  /** For example the acquisition time of a scene. */
  readonly detail?: string;
}
