import type { PixelWindow } from '../../shared/contract/grid.ts';
import type { IntegrateJob } from '../../shared/contract/jobs.ts';
import type { Plan } from '../../shared/contract/plan.ts';
import { PRODUCTS, type ProductName } from '../../shared/contract/products.ts';
import { DAY_QUALITY, DAY_UNUSABLE, PERIOD_QUALITY } from '../../shared/contract/quality.ts';
import { quantise } from '../../shared/raster/product-tile.ts';
import { buildLattice, expandRow, FIELD_STEP, type Lattice } from '../../shared/region/lattice.ts';
import { swathName, swathsOf } from '../../shared/scenes/swaths.ts';
import { dayNumber } from '../../shared/time/calendar.ts';
import { PeriodIntegrator } from '../../shared/time/interpolate.ts';
import { cumulativeReferenceField } from '../../shared/weather/flux-field.ts';
import { BlockArtefact } from './block-artefact.ts';
import type { WorkerContext } from './context.ts';
import { clipped, type FractionTile, readFraction } from './fraction.ts';
import { insideRegion } from './region-share.ts';
import { tileWindows } from './tile-window.ts';
import { zoneSums } from './zone-sums.ts';

/** All passes of one day on the tile, the first usable one giving the value. */
interface Observation {
  readonly day: number;
  readonly tiles: readonly FractionTile[];
}

interface PeriodPlanes {
  readonly et: Float64Array;
  readonly ratio: Float64Array;
  /** Reference ET of the period where the ET is known, mm. */
  readonly reference: Float64Array;
  readonly observations: Uint8Array;
  readonly longestGap: Uint16Array;
  readonly quality: Uint16Array;
}

/** Final blocks of one period on one tile, and the tile's share of the zone tables. */
export async function runIntegrate(job: IntegrateJob, context: WorkerContext): Promise<void> {
  const plan = await context.plan(job.planKey);
  const { inner } = tileWindows(plan, job.tile);
  const observations = await readObservations(plan, job, context);
  const reference = periodReference(plan, job.period, inner, observations);
  const after = integrate(reference, observations, (tile) => tile.fraction);
  // The same without adjustment, so that the seams can be shown before and after.
  const adjusted = job.fluxes.some(({ adjustment }) => adjustment.gain !== 1 || adjustment.offset !== 0);
  const before = adjusted ? integrate(reference, observations, (tile) => clipped(tile.raw, 1, 0)).et : after.et;

  const artefact = new BlockArtefact(plan, inner);
  const etStored = quantise('et-period', after.et) as Int16Array;
  const origin = swathPlane(plan, observations, inner.rows * inner.columns);
  const beforeStored = adjusted ? (quantise('et-period', before) as Int16Array) : etStored;
  artefact.addSeams('et-period', 'before', beforeStored, origin);
  artefact.addSeams('et-period', 'after', etStored, origin);
  const inside = insideRegion(plan, inner);
  for (let i = 0; i < inside.length; i++) {
    if (inside[i]) continue;
    after.quality[i] = PERIOD_QUALITY.outsideRegion;
    after.observations[i] = PRODUCTS.observations.nodata;
  }
  for (const product of job.products) artefact.addProduct(product, stored(product, after, etStored));
  artefact.addQuality(after.quality, inside, PERIOD_QUALITY.noObservation | PERIOD_QUALITY.gapTooLong);
  artefact.addZones(await zoneSums(plan, job.tile, { ...after, before: beforeStored, etStored }, context));
  await context.store.put(job.outputKey, artefact.encode());
}

function stored(product: ProductName, planes: PeriodPlanes, etStored: Int16Array) {
  switch (product) {
    case 'et-period':
      return etStored;
    case 'et-ratio':
      return quantise(product, planes.ratio);
    case 'observations':
      return planes.observations;
    case 'longest-gap':
      return planes.longestGap;
    case 'quality-period':
      return planes.quality;
    default:
      throw new Error(`${product} is not a product of a period`);
  }
}

async function readObservations(plan: Plan, job: IntegrateJob, context: WorkerContext): Promise<Observation[]> {
  const byDay = new Map<number, FractionTile[]>();
  for (const flux of job.fluxes) {
    const day = dayNumber(plan.passes[flux.pass].pass.date);
    const tiles = byDay.get(day) ?? [];
    tiles.push(await readFraction(flux, context));
    byDay.set(day, tiles);
  }
  return [...byDay].map(([day, tiles]) => ({ day, tiles })).sort((a, b) => a.day - b.day);
}

/** What the integration of a period needs beside the fractions; the same with and without adjustment. */
interface PeriodReference {
  readonly window: PixelWindow;
  readonly integrator: PeriodIntegrator;
  /** Variables of cumulativeReferenceField. */
  readonly lattice: Lattice;
}

/**
 * Cumulative reference ET from global nodes, at the few days where the interpolation bends: the cost does not grow with
 * the length of the period.
 */
function periodReference(
  plan: Plan,
  periodIndex: number,
  window: PixelWindow,
  observations: readonly Observation[],
): PeriodReference {
  const period = plan.periods[periodIndex];
  const { maxGapDays, maxHoldDays } = plan.basin.integrate;
  const from = dayNumber(period.from);
  const to = dayNumber(period.to);
  const days = observations.map(({ day }) => day);
  const integrator = new PeriodIntegrator(days, from, to, maxGapDays, maxHoldDays);
  const { boundaryDays } = integrator;
  const field = cumulativeReferenceField(plan, boundaryDays, from, to);
  return { window, integrator, lattice: buildLattice(window, FIELD_STEP, 2 * boundaryDays.length + 1, field) };
}

/** Fraction between overpasses times daily reference ET, pixel by pixel. */
function integrate(
  { window, integrator, lattice }: PeriodReference,
  observations: readonly Observation[],
  fractionOf: (tile: FractionTile) => Float32Array,
): PeriodPlanes {
  const bends = integrator.boundaryDays.length;
  const { rows, columns } = window;
  const pixels = rows * columns;
  const planes: PeriodPlanes = {
    et: new Float64Array(pixels),
    ratio: new Float64Array(pixels),
    reference: new Float64Array(pixels),
    observations: new Uint8Array(pixels),
    longestGap: new Uint16Array(pixels),
    quality: new Uint16Array(pixels),
  };
  const fractionsOf = observations.map(({ tiles }) => tiles.map(fractionOf));
  const rowsOf = Array.from({ length: 2 * bends + 1 }, () => new Float64Array(columns));
  const fractions = new Float64Array(observations.length);
  const c = new Float64Array(bends);
  const d = new Float64Array(bends);
  const result = { et: 0, observations: 0, longestGapDays: 0, quality: 0 };
  for (let r = 0; r < rows; r++) {
    rowsOf.forEach((row, variable) => {
      expandRow(lattice, variable, window.row + r, window.column, columns, row);
    });
    for (let x = 0; x < columns; x++) {
      const at = r * columns + x;
      const passBits = firstUsable(observations, fractionsOf, at, fractions);
      for (let k = 0; k < bends; k++) {
        c[k] = rowsOf[k][x];
        d[k] = rowsOf[bends + k][x];
      }
      integrator.integrate(fractions, c, d, result);
      planes.et[at] = result.et;
      const total = rowsOf[2 * bends][x];
      // A polar night has no reference ET to be a part of.
      planes.ratio[at] = total > 0 ? result.et / total : Number.NaN;
      planes.reference[at] = Number.isNaN(result.et) ? Number.NaN : total;
      planes.observations[at] = result.observations;
      planes.longestGap[at] = Number.isNaN(result.et) ? 65535 : result.longestGapDays;
      planes.quality[at] = result.quality | passBits;
    }
  }
  return planes;
}

/** Fills one fraction for each observation day (NaN where none is usable); returns the period bits of those used. */
function firstUsable(
  observations: readonly Observation[],
  fractionsOf: readonly (readonly Float32Array[])[],
  at: number,
  out: Float64Array,
): number {
  let seen = 0;
  for (let k = 0; k < observations.length; k++) {
    out[k] = Number.NaN;
    const { tiles } = observations[k];
    for (let t = 0; t < tiles.length; t++) {
      const quality = tiles[t].quality[at];
      if (quality & DAY_UNUSABLE) continue;
      out[k] = fractionsOf[k][t][at];
      seen |= quality;
      break;
    }
  }
  return (
    (seen & DAY_QUALITY.borrowedCalibration ? PERIOD_QUALITY.borrowedCalibration : 0) |
    (seen & DAY_QUALITY.adjusted ? PERIOD_QUALITY.adjusted : 0) |
    (seen & (DAY_QUALITY.clippedLow | DAY_QUALITY.clippedHigh) ? PERIOD_QUALITY.clipped : 0)
  );
}

/**
 * Which orbital paths see a pixel at all, cloudy or not, as a bit set over the sorted paths of the plan. The edges
 * of these sets are the pass edges of a period map.
 */
function swathPlane(plan: Plan, observations: readonly Observation[], pixels: number): Uint16Array {
  const swaths = swathsOf(plan.passes.map(({ pass }) => pass));
  const out = new Uint16Array(pixels);
  for (const { tiles } of observations) {
    for (const tile of tiles) {
      // Beyond 16 swaths bits are shared; a seam between two swaths of one bit then goes unseen in this table only.
      const bit = 1 << (swaths.indexOf(swathName(plan.passes[tile.pass].pass)) % 16);
      for (let i = 0; i < pixels; i++) if (!(tile.quality[i] & SWATH_OUTSIDE)) out[i] |= bit;
    }
  }
  return out;
}

const SWATH_OUTSIDE = DAY_QUALITY.noScene | DAY_QUALITY.fill;
