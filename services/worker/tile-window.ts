import type { PixelWindow } from '../../shared/contract/grid.ts';
import type { Plan } from '../../shared/contract/plan.ts';
import { haloWindow, tileWindow } from '../../shared/region/tiles.ts';

/**
 * Pixels around a tile that prepared planes see: the homogeneity test looks two pixels out, and which scene a pixel is
 * taken from depends on its neighbours one further. Terrain needs one more for its gradient and reads that itself.
 */
export const HALO = 3;

export interface TileWindows {
  /** The tile, clipped to the grid. */
  readonly inner: PixelWindow;
  /** The tile with its halo; may reach outside the grid. */
  readonly outer: PixelWindow;
}

export function tileWindows(plan: Plan, tile: number): TileWindows {
  const inner = tileWindow(plan.grid, plan.tiles[tile]);
  return { inner, outer: haloWindow(inner, HALO) };
}

type Plane = Float32Array | Uint16Array | Uint8Array;

/** The inner part of a plane that covers the outer window. */
export function cropHalo<T extends Plane>(plane: T, { inner, outer }: TileWindows): T {
  const cropped = new (plane.constructor as new (length: number) => T)(inner.rows * inner.columns);
  const left = inner.column - outer.column;
  for (let r = 0; r < inner.rows; r++) {
    const start = (r + inner.row - outer.row) * outer.columns + left;
    cropped.set(plane.subarray(start, start + inner.columns) as never, r * inner.columns);
  }
  return cropped;
}
