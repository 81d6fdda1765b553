export type DemoSize = 'demo' | 'small' | 'tiny';

/** Spoils the self-calibration of one pass: see `contamination.ts`. */
export interface CalibrationError {
  /** Date of the pass (YYYY-MM-DD), or its place among all passes in time. */
  readonly pass: string | number;
  /** About how far the fraction found by the pass ends up from the truth. @defaultValue 0.12 */
  readonly fraction?: number;
  /** Warming of the land that anchors are taken from, K. Overrides `fraction`. */
  readonly kelvin?: number;
}

export interface DemoOptions {
  /** @defaultValue 1 */
  readonly seed?: number;
  /** @defaultValue 'demo' */
  readonly size?: DemoSize;
  readonly calibrationError?: CalibrationError;
}

/** What the size of a basin fixes. Fields and textures keep their size in metres; the layout shrinks. */
export interface WorldScale {
  /** Half of the basin's width and height, m. */
  readonly halfWidth: number;
  readonly halfHeight: number;
  /** Height of the hills above the plain well beyond the basin, m; on its rim they reach some two thirds of it. */
  readonly relief: number;
  /** Scenes reach this far beyond the basin, m. */
  readonly margin: number;
  /** Tile edge in the basin file, pixels. */
  readonly tile: number;
}

export const SCALES: Readonly<Record<DemoSize, WorldScale>> = {
  demo: { halfWidth: 18_000, halfHeight: 13_800, relief: 850, margin: 1200, tile: 256 },
  small: { halfWidth: 4500, halfHeight: 4500, relief: 340, margin: 600, tile: 256 },
  tiny: { halfWidth: 2400, halfHeight: 2400, relief: 150, margin: 360, tile: 128 },
};
