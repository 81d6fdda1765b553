import type { Calibration } from '../../shared/contract/calibration.ts';
import type { PixelWindow } from '../../shared/contract/grid.ts';
import type { FluxJob } from '../../shared/contract/jobs.ts';
import { DAY_QUALITY, DAY_UNUSABLE } from '../../shared/contract/quality.ts';
import type { FluxKernel } from '../../shared/flux/kernel/flux-kernel.ts';
import { sunOnSlope } from '../../shared/flux/radiation.ts';
import { storedPlanes } from '../../shared/flux/stored-planes.ts';
import { encodePlanes } from '../../shared/raster/tile-codec.ts';
import { buildLattice, expandLattice, FIELD_STEP } from '../../shared/region/lattice.ts';
import { type FluxField, fluxField, passParameters } from '../../shared/weather/flux-field.ts';
import type { WorkerContext } from './context.ts';
import { terrainOf } from './terrain.ts';
import { cropHalo, tileWindows } from './tile-window.ts';

/**
 * Fluxes and day fraction of one pass on one tile: the smooth fields are spread from their global nodes, the
 * kernel does the rest. The fraction is kept raw; clipping comes after the adjustment.
 */
export async function runFlux(job: FluxJob, context: WorkerContext): Promise<void> {
  const plan = await context.plan(job.planKey);
  const windows = tileWindows(plan, job.tile);
  const { inner } = windows;
  const calibration = await context.json<Calibration>(job.calibrationKey);
  const { planes: prepared } = await context.planes(job.preparedKey);
  const quality = (prepared.quality as Uint16Array).slice();
  const pixels = inner.rows * inner.columns;
  const kernel = await context.kernel(plan.grid.tileSize ** 2);
  const field = fluxField(plan, job.pass);

  for (const name of ['red', 'nir', 'albedo', 'lst'] as const) kernel.inputs[name].set(prepared[name] as Float32Array);
  const terrain = await terrainOf(plan, job.tile, job.terrainKey, context);
  for (const name of ['elevation', 'slopeEast', 'slopeNorth'] as const) {
    kernel.inputs[name].set(cropHalo(terrain[name], windows));
  }
  spreadField(field, inner, kernel);
  const { method, slope, zeroTemperature } = calibration;
  kernel.run(method, pixels, { ...passParameters(plan, job.pass), slope, zeroTemperature });

  markUnphysical(kernel, quality, pixels);
  if (plan.terrain) markShaded(kernel, quality, pixels);
  if (calibration.borrowedFrom) for (let i = 0; i < pixels; i++) quality[i] |= DAY_QUALITY.borrowedCalibration;

  const kept: Record<string, Float32Array | Uint16Array | Uint8Array> = {
    quality,
    origin: prepared.origin as Uint8Array,
    ndvi: prepared.ndvi as Float32Array,
  };
  for (const name of storedPlanes(plan.basin.products)) {
    const source = name === 'lst' ? kernel.inputs.lst : kernel.outputs[name];
    kept[name] = maskUnusable(source.slice(0, pixels), quality);
  }
  await context.store.put(job.outputKey, encodePlanes({ stage: 'flux' }, kept));
}

function spreadField(field: FluxField, window: PixelWindow, kernel: FluxKernel): void {
  const lattice = buildLattice(window, FIELD_STEP, field.variables.length, field.evaluate);
  field.variables.forEach((name, variable) => {
    expandLattice(lattice, variable, window, kernel.inputs[name]);
  });
}

function maskUnusable(plane: Float32Array, quality: Uint16Array): Float32Array {
  for (let i = 0; i < plane.length; i++) if (quality[i] & DAY_UNUSABLE) plane[i] = Number.NaN;
  return plane;
}

/**
 * Hard bounds beyond which a pixel is not a clear-sky land or water surface at midday (common practice in the
 * trade, no single source): the value becomes nodata and the bit says so.
 */
function markUnphysical({ outputs }: FluxKernel, quality: Uint16Array, pixels: number): void {
  const { netRadiation, soilHeat, sensibleHeat, dayFraction } = outputs;
  for (let i = 0; i < pixels; i++) {
    if (quality[i] & DAY_UNUSABLE) continue;
    const fraction = dayFraction[i];
    const rn = netRadiation[i];
    const sound =
      rn > -100 &&
      rn < 1000 &&
      soilHeat[i] < 0.6 * rn + 50 &&
      sensibleHeat[i] > -400 &&
      sensibleHeat[i] < 900 &&
      fraction > -0.8 &&
      fraction < 2;
    // Written so that NaN (an elevation outside the terrain file, for instance) fails as well.
    if (!sound) quality[i] |= Number.isNaN(fraction) ? DAY_QUALITY.invalidInput : DAY_QUALITY.unphysical;
  }
}

/** Slopes that the sun only grazes: direct radiation, and with it the balance, is not known well enough. */
function markShaded({ inputs }: FluxKernel, quality: Uint16Array, pixels: number): void {
  const { slopeEast, slopeNorth, sunEast, sunNorth, sunUp } = inputs;
  for (let i = 0; i < pixels; i++) {
    const steepness = Math.sqrt(1 + slopeEast[i] * slopeEast[i] + slopeNorth[i] * slopeNorth[i]);
    const incidence = sunOnSlope(sunEast[i], sunNorth[i], sunUp[i], slopeEast[i], slopeNorth[i]) / steepness;
    if (incidence < 0.1) quality[i] |= DAY_QUALITY.shaded;
  }
}
