import { markEligible, neighbourhoodMean } from '../../shared/anchors/eligible.ts';
import { encodeSummary, summariseTile, type TileSummary } from '../../shared/anchors/summary.ts';
import type { PixelWindow } from '../../shared/contract/grid.ts';
import type { PrepareJob } from '../../shared/contract/jobs.ts';
import type { Plan, PlannedPass } from '../../shared/contract/plan.ts';
import { DAY_QUALITY, DAY_UNUSABLE } from '../../shared/contract/quality.ts';
import { ALBEDO_WEIGHTS } from '../../shared/flux/albedo.ts';
import { ndvi as ndviOf } from '../../shared/flux/surface.ts';
import { filled } from '../../shared/raster/sample-type.ts';
import { encodePlanes } from '../../shared/raster/tile-codec.ts';
import { readWarped } from '../../shared/raster/warp.ts';
import { readSurface, type SurfacePlanes } from '../../shared/scenes/read-surface.ts';
import type { WorkerContext } from './context.ts';
import { insideRegion } from './region-share.ts';
import { type TerrainPlanes, terrainOf } from './terrain.ts';
import { cropHalo, type TileWindows, tileWindows } from './tile-window.ts';

/**
 * Puts the scenes of one pass on one tile: warped bands, masks, and the tile's mergeable summary of anchor
 * candidates. Nothing here depends on the weather or on a calibration.
 */
export async function runPrepare(job: PrepareJob, context: WorkerContext): Promise<void> {
  const plan = await context.plan(job.planKey);
  const planned = plan.passes[job.pass];
  const windows = tileWindows(plan, job.tile);
  const surface = await readPass(plan, planned, job.tile, windows, context);
  const terrain = await terrainOf(plan, job.tile, job.terrainKey, context);
  const { summary, ndvi } = await summarise(plan, surface, terrain, windows, context);
  const planes = {
    red: cropHalo(surface.red, windows),
    nir: cropHalo(surface.nir, windows),
    albedo: cropHalo(surface.albedo, windows),
    lst: cropHalo(surface.lst, windows),
    ndvi: cropHalo(ndvi, windows),
    quality: cropHalo(surface.quality, windows),
    origin: cropHalo(surface.origin, windows),
  };
  // The tile last: a resumed run asks for the tile, and then the summary must be there too.
  await context.store.put(job.summaryKey, encodeSummary(summary));
  await context.store.put(job.outputKey, encodePlanes({ stage: 'prepare' }, planes));
}

interface PassSurface {
  readonly red: Float32Array;
  readonly nir: Float32Array;
  readonly albedo: Float32Array;
  readonly lst: Float32Array;
  readonly quality: Uint16Array;
  /** Scene that a pixel's value comes from: its index in the pass plus 1; 0 where none does. */
  readonly origin: Uint8Array;
}

/**
 * The scenes of a pass on one window. Each pixel is taken whole from one scene: the first in row order that sees it
 * clearly and not at its own rim, else the first that sees it clearly, else the first that covers it and says why not.
 * At the rim a bilinear value rests on fewer neighbours; the other row has them all, and no edge shows.
 */
async function readPass(
  plan: Plan,
  { pass, sceneTiles }: PlannedPass,
  tile: number,
  { outer }: TileWindows,
  context: WorkerContext,
): Promise<PassSurface> {
  const pixels = outer.rows * outer.columns;
  const joined: PassSurface = {
    red: new Float32Array(pixels).fill(Number.NaN),
    nir: new Float32Array(pixels).fill(Number.NaN),
    albedo: new Float32Array(pixels).fill(Number.NaN),
    lst: new Float32Array(pixels).fill(Number.NaN),
    quality: new Uint16Array(pixels).fill(DAY_QUALITY.noScene),
    origin: new Uint8Array(pixels),
  };
  const rank = new Uint8Array(pixels);
  for (const [index, scene] of pass.scenes.entries()) {
    if (!sceneTiles[index].includes(tile)) continue;
    const weights = ALBEDO_WEIGHTS[scene.albedoModel];
    const surface = await readSurface(scene, plan.grid, outer, ({ file }) => context.raster(file), weights);
    if (surface) joinScene(joined, rank, surface, outer, index + 1);
  }
  clipToRegion(joined, insideRegion(plan, outer));
  return joined;
}

/**
 * Outside the region nothing is kept: which of those pixels lie in a tile depends on how the region is cut, and
 * neither a map nor an anchor may.
 */
function clipToRegion(joined: PassSurface, inside: Uint8Array): void {
  for (let i = 0; i < inside.length; i++) {
    if (inside[i]) continue;
    joined.red[i] = joined.nir[i] = joined.albedo[i] = joined.lst[i] = Number.NaN;
    joined.quality[i] = DAY_QUALITY.noScene;
    joined.origin[i] = 0;
  }
}

const NOT_COVERED = DAY_QUALITY.noScene | DAY_QUALITY.fill;
/** How good a scene is at a pixel; a better one takes the pixel over. */
const RANK = { none: 0, covered: 1, clear: 2, clearInside: 3 } as const;

function joinScene(
  joined: PassSurface,
  rank: Uint8Array,
  surface: SurfacePlanes,
  { rows, columns }: PixelWindow,
  origin: number,
): void {
  const { quality } = surface;
  for (let row = 0, i = 0; row < rows; row++) {
    for (let column = 0; column < columns; column++, i++) {
      if (quality[i] & DAY_QUALITY.noScene || rank[i] === RANK.clearInside) continue;
      const found = rankOf(quality, i, row, column, rows, columns);
      // Fill says more than no scene at all.
      if (found <= rank[i] && joined.quality[i] !== DAY_QUALITY.noScene) continue;
      rank[i] = found;
      joined.red[i] = surface.red[i];
      joined.nir[i] = surface.nir[i];
      joined.albedo[i] = surface.albedo[i];
      joined.lst[i] = surface.lst[i];
      joined.quality[i] = quality[i];
      joined.origin[i] = found === RANK.none ? 0 : origin;
    }
  }
}

function rankOf(quality: Uint16Array, i: number, row: number, column: number, rows: number, columns: number): number {
  if (quality[i] & NOT_COVERED) return RANK.none;
  if (quality[i] & DAY_UNUSABLE) return RANK.covered;
  for (let y = Math.max(0, row - 1); y <= Math.min(rows - 1, row + 1); y++) {
    for (let x = Math.max(0, column - 1); x <= Math.min(columns - 1, column + 1); x++) {
      if (quality[y * columns + x] & NOT_COVERED) return RANK.clear;
    }
  }
  return RANK.clearInside;
}

/** NDVI of the whole window and the anchor summary of the inner tile. */
async function summarise(
  plan: Plan,
  surface: PassSurface,
  terrain: TerrainPlanes,
  windows: TileWindows,
  context: WorkerContext,
): Promise<{ summary: TileSummary; ndvi: Float32Array }> {
  const pixels = surface.lst.length;
  const ndvi = new Float32Array(pixels);
  const datumTemperature = new Float32Array(pixels);
  const { lapseRateKPerM, anchors } = plan.basin.method;
  for (let i = 0; i < pixels; i++) {
    ndvi[i] = ndviOf(surface.red[i], surface.nir[i]);
    datumTemperature[i] = surface.lst[i] + lapseRateKPerM * (terrain.elevation[i] - plan.datumElevationM);
  }
  const eligible = markEligible(
    {
      ndvi,
      lst: surface.lst,
      quality: surface.quality,
      elevation: terrain.elevation,
      slopeEast: terrain.slopeEast,
      slopeNorth: terrain.slopeNorth,
      agricultural: await agriculturalMask(plan, windows, context),
    },
    windows.outer,
    windows.inner,
    {
      maxNdviSd: anchors.homogeneity.maxNdviSd,
      maxTemperatureSdK: anchors.homogeneity.maxTemperatureSdK,
      maxSlopeDeg: anchors.maxSlopeDeg,
      maxReliefM: anchors.maxReliefM,
      datumElevationM: plan.datumElevationM,
    },
  );
  const inner = {
    ndvi: cropHalo(ndvi, windows),
    // Means of 3 x 3: the coldest and hottest shares of single pixels would hold the noise of the sensor.
    datumTemperature: neighbourhoodMean(datumTemperature, windows.outer, windows.inner),
    lst: neighbourhoodMean(surface.lst, windows.outer, windows.inner),
    red: cropHalo(surface.red, windows),
    nir: cropHalo(surface.nir, windows),
    albedo: cropHalo(surface.albedo, windows),
    quality: cropHalo(surface.quality, windows),
    elevation: cropHalo(terrain.elevation, windows),
    slopeEast: cropHalo(terrain.slopeEast, windows),
    slopeNorth: cropHalo(terrain.slopeNorth, windows),
    eligible,
  };
  return { summary: summariseTile(inner, windows.inner), ndvi };
}

/** 1 where the land cover lets an anchor lie, or undefined when the basin file names no land cover. */
async function agriculturalMask(
  plan: Plan,
  { outer }: TileWindows,
  context: WorkerContext,
): Promise<Uint8Array | undefined> {
  if (!plan.landcover) return undefined;
  const allowed = new Set(plan.landcover.classes.filter((entry) => entry.agricultural).map((entry) => entry.code));
  const raster = await context.raster(plan.landcover.file);
  const codes = await readWarped(raster, plan.grid, outer, { resampling: 'nearest' });
  return filled(new Uint8Array(codes.length), codes, (code) => (allowed.has(code) ? 1 : 0));
}
