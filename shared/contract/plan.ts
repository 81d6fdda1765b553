import type { BasinFile } from './basin-file.ts';
import type { ErrorRecord } from './errors.ts';
import type { GridSpec, TileAddress } from './grid.ts';
import type { PassRecord } from './scene.ts';
import type { PassWeather, StationDay } from './weather.ts';

/** A step of the accounting calendar. */
export interface Period {
  /** "2025-06" for a month, "2025-04-01_2025-09-30" for the whole. */
  readonly id: string;
  /** First and last day, included, YYYY-MM-DD. */
  readonly from: string;
  readonly to: string;
}

/** A pass with what the plan adds to it. */
export interface PlannedPass {
  readonly pass: PassRecord;
  /** Indexes into Plan.tiles of the tiles that some scene of the pass touches, ascending. */
  readonly tiles: readonly number[];
  /** The same for each scene of the pass. */
  readonly sceneTiles: readonly (readonly number[])[];
  readonly weather: PassWeather;
}

/**
 * All that the stages need to know, frozen before any pixel is read. Pure data: it is stored as JSON and every
 * worker reads the same one.
 */
export interface Plan {
  readonly version: 1;
  readonly basin: BasinFile;
  readonly grid: GridSpec;
  /** Elevation to which datum temperatures are carried, m. */
  readonly datumElevationM: number;
  /** Hours to add to UTC for the region's solar calendar day. */
  readonly solarOffsetHours: number;
  /** Absolute paths. */
  readonly terrain?: RasterInput;
  readonly landcover?: RasterInput & { readonly classes: readonly LandcoverClass[] };
  /** Region boundary and zones on the grid. */
  readonly boundary: PixelPolygons;
  readonly zones: readonly PlannedZone[];
  /** Tiles that touch the region, row by row. */
  readonly tiles: readonly TileAddress[];
  readonly passes: readonly PlannedPass[];
  /** Daily reference ET of every station, for every day that the periods or passes need. */
  readonly days: readonly StationDay[];
  readonly periods: readonly Period[];
  /** Scenes and passes that were left out before the run, with the reason. */
  readonly leftOut: readonly LeftOut[];
}

/** Rings of a polygon in global pixel coordinates (x = column, y = row, fractional); holes by orientation. */
export type PixelPolygons = readonly (readonly (readonly (readonly [number, number])[])[])[];

export interface PlannedZone {
  readonly name: string;
  readonly polygons: PixelPolygons;
}

export interface RasterInput {
  readonly file: string;
  readonly fingerprint: string;
}

export interface LandcoverClass {
  readonly code: number;
  readonly name: string;
  /** True when anchors may lie on it. */
  readonly agricultural: boolean;
}

/** Something that the run goes on without. */
export interface LeftOut {
  readonly kind: 'scene' | 'pass' | 'tile' | 'product';
  readonly id: string;
  /** True when the product lacks something that was asked for: the run then ends as complete with gaps. */
  readonly gap: boolean;
  readonly error: ErrorRecord;
}
