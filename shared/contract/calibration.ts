/** Anchors and calibrations as they travel and as tables/anchors.csv lists them. */

export type MethodName = 'metric' | 'sebal';
export type AnchorRole = 'hot' | 'cold';

/** A candidate pixel with all that an anchor needs. Global pixel address; values of that one pixel. */
export interface AnchorCandidate {
  readonly row: number;
  readonly column: number;
  readonly red: number;
  readonly nir: number;
  readonly ndvi: number;
  readonly albedo: number;
  /** Surface temperature, K. */
  readonly lst: number;
  /** Surface temperature carried to the datum elevation, K. */
  readonly datumTemperature: number;
  readonly elevationM: number;
  /** Terrain gradient, rise over run, toward true east and true north. */
  readonly slopeEast: number;
  readonly slopeNorth: number;
}

export interface AnchorRecord extends AnchorCandidate {
  readonly role: AnchorRole;
  readonly longitudeDeg: number;
  readonly latitudeDeg: number;
  readonly lai: number;
  /** W m-2. */
  readonly netRadiation: number;
  readonly soilHeat: number;
  readonly sensibleHeat: number;
  readonly latentHeat: number;
  /** Near-surface temperature difference that the anchor fixes, K. */
  readonly temperatureDifference: number;
  /** s m-1, converged. */
  readonly aerodynamicResistance: number;
  /** Why this pixel: the thresholds that it passed, in words. */
  readonly reason: string;
}

/** dT = slope * (datum temperature - zeroTemperature), K. */
export interface Calibration {
  readonly passId: string;
  readonly method: MethodName;
  readonly slope: number;
  readonly zeroTemperature: number;
  /** zeroTemperature minus the air temperature at the datum over the anchors, K: what a borrower takes over. */
  readonly zeroAboveAir: number;
  /** 1 sigma of slope and zero temperature from the spread of the anchors. */
  readonly slopeSd: number;
  readonly zeroTemperatureSd: number;
  readonly anchors: readonly AnchorRecord[];
  /** Pass whose calibration is used, when this pass had too few candidates. */
  readonly borrowedFrom?: string;
}

/** What the joint adjustment found for one pass: fraction' = gain * fraction + offset. */
export interface PassAdjustment {
  readonly passId: string;
  readonly gain: number;
  readonly offset: number;
  /** Number of overlap links that hold this pass; 0: left as it was. */
  readonly links: number;
}

/** One overlap between two passes, before and after adjustment (mean difference first minus second). */
export interface OverlapResidual {
  readonly first: string;
  readonly second: string;
  readonly pixels: number;
  readonly daysApart: number;
  readonly meanFirst: number;
  readonly meanSecond: number;
  readonly before: number;
  readonly after: number;
  /** Set when the link was not used, with the reason. */
  readonly cut?: string;
}
