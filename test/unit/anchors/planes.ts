import { markEligible } from '../../../shared/anchors/eligible.ts';
import { type SummaryPlanes, summariseTile, type TileSummary } from '../../../shared/anchors/summary.ts';
import type { PixelWindow } from '../../../shared/contract/grid.ts';
import { normal, seeded } from './random.ts';

export type Planes = Omit<Required<SummaryPlanes>, 'eligible'>;

/** The part of a plane that a window cuts out of a whole image. */
export function crop<P extends Float32Array | Uint16Array | Uint8Array | Int16Array>(
  plane: P,
  whole: PixelWindow,
  window: PixelWindow,
): P {
  const out = new (plane.constructor as new (length: number) => P)(window.rows * window.columns);
  for (let r = 0; r < window.rows; r += 1) {
    const from = (window.row - whole.row + r) * whole.columns + window.column - whole.column;
    out.set(plane.subarray(from, from + window.columns) as never, r * window.columns);
  }
  return out;
}

export const cropAll = <T extends Record<string, Float32Array | Uint16Array | Uint8Array>>(
  planes: T,
  whole: PixelWindow,
  window: PixelWindow,
): T => Object.fromEntries(Object.entries(planes).map(([name, plane]) => [name, crop(plane, whole, window)])) as T;

export const grow = ({ row, column, rows, columns }: PixelWindow, halo: number): PixelWindow => ({
  row: row - halo,
  column: column - halo,
  rows: rows + 2 * halo,
  columns: columns + 2 * halo,
});

/** Windows of `size` pixels that tile a window, the last ones clipped. */
export function tilesOf(whole: PixelWindow, size: number): PixelWindow[] {
  const tiles: PixelWindow[] = [];
  for (let r = 0; r < whole.rows; r += size) {
    for (let c = 0; c < whole.columns; c += size) {
      const rows = Math.min(size, whole.rows - r);
      const columns = Math.min(size, whole.columns - c);
      tiles.push({ row: whole.row + r, column: whole.column + c, rows, columns });
    }
  }
  return tiles;
}

export interface FieldOptions {
  readonly seed: number;
  /** Standard deviation of the noise of each pixel's temperature, K. */
  readonly noiseK?: number;
  /** Edge of a field, pixels. */
  readonly fieldSize?: number;
}

/**
 * A made-up pass: square fields, each of one NDVI (0.1 to 0.9) and a temperature that falls from 320 K to 298 K
 * with it, plus noise.
 */
export function fieldPass(whole: PixelWindow, { seed, noiseK = 0.2, fieldSize = 12 }: FieldOptions): Planes {
  const random = seeded(seed);
  const gauss = normal(random);
  const size = whole.rows * whole.columns;
  const fields = new Map<string, { ndvi: number; temperature: number }>();
  const planes: Planes = {
    ndvi: new Float32Array(size),
    datumTemperature: new Float32Array(size),
    red: new Float32Array(size).fill(0.1),
    nir: new Float32Array(size).fill(0.4),
    albedo: new Float32Array(size).fill(0.2),
    lst: new Float32Array(size),
    elevation: new Float32Array(size).fill(100),
    slopeEast: new Float32Array(size),
    slopeNorth: new Float32Array(size),
    quality: new Uint16Array(size),
  };
  for (let at = 0; at < size; at += 1) {
    const row = Math.floor(at / whole.columns);
    const key = `${Math.floor(row / fieldSize)}:${Math.floor((at % whole.columns) / fieldSize)}`;
    const cover = random();
    const field = fields.get(key) ?? { ndvi: 0.1 + 0.8 * cover, temperature: 320 - 22 * cover + 2 * (random() - 0.5) };
    fields.set(key, field);
    planes.ndvi[at] = field.ndvi + 0.01 * gauss();
    planes.datumTemperature[at] = field.temperature + noiseK * gauss();
    planes.lst[at] = planes.datumTemperature[at];
  }
  return planes;
}

export const LIMITS = {
  maxNdviSd: 0.04,
  maxTemperatureSdK: 0.7,
  maxSlopeDeg: 3,
  maxReliefM: 500,
  datumElevationM: 100,
};

/** The summary of one inner window of a whole image that is at least 2 pixels larger on all sides. */
export function summariseWindow(planes: Planes, whole: PixelWindow, inner: PixelWindow): TileSummary {
  const outer = grow(inner, 2);
  const eligible = markEligible(cropAll(planes, whole, outer), outer, inner, LIMITS);
  return summariseTile({ ...cropAll(planes, whole, inner), eligible }, inner);
}
