import { BasinloomError } from '../../shared/contract/errors.ts';
import type { PixelWindow } from '../../shared/contract/grid.ts';
import type { TerrainJob } from '../../shared/contract/jobs.ts';
import type { Plan } from '../../shared/contract/plan.ts';
import { encodePlanes } from '../../shared/raster/tile-codec.ts';
import { readWarped } from '../../shared/raster/warp.ts';
import { meridianConvergence } from '../../shared/region/crs.ts';
import { buildLattice, expandRow, FIELD_STEP } from '../../shared/region/lattice.ts';
import { pixelToMap } from '../../shared/region/pixel-place.ts';
import { haloWindow } from '../../shared/region/tiles.ts';
import type { WorkerContext } from './context.ts';
import { tileWindows } from './tile-window.ts';

/** Elevation (m) and its gradient toward true east and true north, with the halo of prepared tiles. */
export interface TerrainPlanes {
  readonly elevation: Float32Array;
  readonly slopeEast: Float32Array;
  readonly slopeNorth: Float32Array;
}

export async function runTerrain(job: TerrainJob, context: WorkerContext): Promise<void> {
  const plan = await context.plan(job.planKey);
  if (!plan.terrain) throw new BasinloomError('INTERNAL', { detail: 'a terrain job without terrain' });
  const { outer } = tileWindows(plan, job.tile);
  const wide = haloWindow(outer, 1);
  const raster = await context.raster(plan.terrain.file);
  const elevation = await readWarped(raster, plan.grid, wide, { resampling: 'bilinear' });
  const planes = gradient(plan, elevation as Float32Array, wide, outer);
  await context.store.put(job.outputKey, encodePlanes({ stage: 'terrain' }, { ...planes }));
}

/**
 * Central differences over two pixels, turned from grid axes to true east and north by the meridian convergence.
 * The gradient is NaN-free wherever the elevation and its four neighbours are known; elsewhere it is 0, and the
 * elevation itself says whether the pixel is known.
 */
function gradient(plan: Plan, wide: Float32Array, wideWindow: PixelWindow, window: PixelWindow): TerrainPlanes {
  const { rows, columns } = window;
  const elevation = new Float32Array(rows * columns);
  const slopeEast = new Float32Array(rows * columns);
  const slopeNorth = new Float32Array(rows * columns);
  const turn = buildLattice(window, FIELD_STEP, 2, (row, column, out) => {
    const [x, y] = pixelToMap(plan.grid, row, column);
    const angle = meridianConvergence(plan.grid.crs, x, y);
    out[0] = Math.cos(angle);
    out[1] = Math.sin(angle);
  });
  const cosine = new Float64Array(columns);
  const sine = new Float64Array(columns);
  const span = 2 * plan.grid.resolution;
  for (let r = 0; r < rows; r++) {
    expandRow(turn, 0, window.row + r, window.column, columns, cosine);
    expandRow(turn, 1, window.row + r, window.column, columns, sine);
    for (let c = 0; c < columns; c++) {
      const here = (r + 1) * wideWindow.columns + c + 1;
      const at = r * columns + c;
      elevation[at] = wide[here];
      const gridEast = (wide[here + 1] - wide[here - 1]) / span;
      const gridNorth = (wide[here - wideWindow.columns] - wide[here + wideWindow.columns]) / span;
      if (Number.isNaN(gridEast) || Number.isNaN(gridNorth)) continue;
      // The angle runs from grid north to true north, clockwise: true axes are the grid axes turned by it.
      slopeEast[at] = gridEast * cosine[c] - gridNorth * sine[c];
      slopeNorth[at] = gridEast * sine[c] + gridNorth * cosine[c];
    }
  }
  return { elevation, slopeEast, slopeNorth };
}

/** Terrain of a tile without a terrain artefact: flat land at the elevation of the basin file. */
function flatTerrain(plan: Plan, window: PixelWindow): TerrainPlanes {
  const pixels = window.rows * window.columns;
  return {
    elevation: new Float32Array(pixels).fill(plan.basin.elevation),
    slopeEast: new Float32Array(pixels),
    slopeNorth: new Float32Array(pixels),
  };
}

/** Terrain planes of a tile with halo: from the artefact, or flat. */
export async function terrainOf(
  plan: Plan,
  tile: number,
  terrainKey: string,
  context: WorkerContext,
): Promise<TerrainPlanes> {
  if (!plan.terrain) return flatTerrain(plan, tileWindows(plan, tile).outer);
  const { planes } = await context.planes(terrainKey);
  return {
    elevation: planes.elevation as Float32Array,
    slopeEast: planes.slopeEast as Float32Array,
    slopeNorth: planes.slopeNorth as Float32Array,
  };
}
