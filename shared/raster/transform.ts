import type { GridSpec, PixelWindow } from '../contract/grid.ts';
import type { RasterGeoreference } from '../contract/scene.ts';
import { projection } from '../region/crs.ts';
import { buildLattice, type Lattice, sampleLattice } from '../region/lattice.ts';
import { pixelToMap } from '../region/pixel-place.ts';

/** Largest error of the lattice against the exact transform, source pixels: half of the 1/8 pixel that is promised. */
const TOLERANCE_PIXELS = 1 / 16;
const FIRST_STEP = 64;

/**
 * Exact source coordinates of a global pixel coordinate: column and row in fractional source pixels, (0.5, 0.5) being
 * the centre of the first source pixel.
 */
function exactTransform(grid: GridSpec, target: RasterGeoreference) {
  const same = grid.crs.proj4 === target.proj4;
  const from = projection(grid.crs);
  const to = projection(target);
  const geographic = /\+proj=longlat/.test(target.proj4);
  const middle = target.originX + (target.width * target.pixelWidth) / 2;
  return (row: number, column: number, out: Float64Array): void => {
    let [x, y] = pixelToMap(grid, row, column);
    if (!same) {
      const [longitude, latitude] = from.inverse(x, y);
      // A raster in degrees may count its longitudes from 0 to 360 or across the date line.
      const near = longitude + 360 * Math.round((middle - longitude) / 360);
      [x, y] = geographic ? [near, latitude] : to.forward(longitude, latitude);
    }
    out[0] = (x - target.originX) / target.pixelWidth;
    out[1] = (target.originY - y) / target.pixelHeight;
  };
}

const steps = new WeakMap<GridSpec, Map<string, number>>();

/**
 * Node spacing with which the lattice stays within tolerance everywhere on the grid. Decided once for a grid and a
 * raster, from the whole grid and never from a window: windows must agree bit for bit.
 */
export function chooseStep(grid: GridSpec, target: RasterGeoreference): number {
  const key = JSON.stringify(target);
  const known = steps.get(grid)?.get(key);
  if (known) return known;
  let step = FIRST_STEP;
  while (step > 1 && transformError(grid, target, step) > TOLERANCE_PIXELS) step /= 2;
  const ofGrid = steps.get(grid) ?? new Map<string, number>();
  steps.set(grid, ofGrid.set(key, step));
  return step;
}

/** Cells looked at along each side of the grid when the error of a lattice is measured. */
const PROBES = 7;

/** Largest distance between lattice and exact transform in the middle of cells spread over the grid, source pixels. */
export function transformError(grid: GridSpec, target: RasterGeoreference, step: number): number {
  const exact = exactTransform(grid, target);
  const want = new Float64Array(2);
  let worst = 0;
  for (let i = 0; i <= PROBES; i++) {
    for (let j = 0; j <= PROBES; j++) {
      const row = Math.floor((i * grid.rows) / PROBES / step) * step + step / 2;
      const column = Math.floor((j * grid.columns) / PROBES / step) * step + step / 2;
      const window = { row, column, rows: 1, columns: 1 };
      const lattice = buildLattice(window, step, 2, exact);
      exact(row + 0.5, column + 0.5, want);
      const dx = sampleLattice(lattice, 0, row, column) - want[0];
      const dy = sampleLattice(lattice, 1, row, column) - want[1];
      worst = Math.max(worst, Math.hypot(dx, dy));
    }
  }
  return worst;
}

/** Source column (variable 0) and row (variable 1) of the pixels of a window. */
export function pixelTransform(grid: GridSpec, target: RasterGeoreference, window: PixelWindow): Lattice {
  return buildLattice(window, chooseStep(grid, target), 2, exactTransform(grid, target));
}
