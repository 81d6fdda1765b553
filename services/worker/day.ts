import type { DayJob } from '../../shared/contract/jobs.ts';
import type { Plan } from '../../shared/contract/plan.ts';
import type { ProductName } from '../../shared/contract/products.ts';
import { DAY_QUALITY, DAY_UNUSABLE } from '../../shared/contract/quality.ts';
import { PRODUCT_PLANE } from '../../shared/flux/stored-planes.ts';
import { quantise } from '../../shared/raster/product-tile.ts';
import { buildLattice, expandLattice, FIELD_STEP } from '../../shared/region/lattice.ts';
import { referenceDayField } from '../../shared/weather/flux-field.ts';
import { BlockArtefact } from './block-artefact.ts';
import type { WorkerContext } from './context.ts';
import { clipped, type FractionTile, readFraction } from './fraction.ts';
import { insideRegion } from './region-share.ts';
import { tileWindows } from './tile-window.ts';

/**
 * Final blocks of one date on one tile. Where several passes of the date see a pixel, the first usable one in
 * the plan's order gives it: a fixed rule, so that no value depends on who computed it.
 */
export async function runDay(job: DayJob, context: WorkerContext): Promise<void> {
  const plan = await context.plan(job.planKey);
  const { inner } = tileWindows(plan, job.tile);
  const pixels = inner.rows * inner.columns;
  const tiles: FractionTile[] = [];
  for (const flux of job.fluxes) tiles.push(await readFraction(flux, context));
  const chosen = choose(tiles, pixels);
  const artefact = new BlockArtefact(plan, inner);

  const qualityStored = quality(tiles, chosen, pixels);
  artefact.addQuality(qualityStored, insideRegion(plan, inner), DAY_UNUSABLE);
  const fraction = gather(tiles, chosen, (tile) => tile.fraction, pixels);
  const fractionStored = quantise('et-fraction', fraction);
  for (const product of job.products) {
    if (product === 'et-fraction') artefact.addProduct(product, fractionStored);
    else if (product === 'quality-day') artefact.addProduct(product, qualityStored);
    else if (product === 'et-day')
      artefact.addProduct(product, quantise(product, etOfDay(plan, job.date, fraction, inner)));
    else artefact.addProduct(product, quantise(product, plain(tiles, chosen, product, pixels)));
  }
  const origin = originPlane(plan, job.date, tiles, chosen);
  const before = gather(tiles, chosen, (tile) => clipped(tile.raw, 1, 0), pixels);
  artefact.addSeams('et-fraction', 'before', quantise('et-fraction', before) as Int16Array, origin);
  artefact.addSeams('et-fraction', 'after', fractionStored as Int16Array, origin);
  await context.store.put(job.outputKey, artefact.encode());
}

/** Index into `tiles` of the pass that gives each pixel; -1 where none is usable. */
function choose(tiles: readonly FractionTile[], pixels: number): Int8Array {
  const chosen = new Int8Array(pixels).fill(-1);
  tiles.forEach((tile, index) => {
    for (let i = 0; i < pixels; i++) {
      if (chosen[i] < 0 && (tile.quality[i] & DAY_UNUSABLE) === 0) chosen[i] = index;
    }
  });
  return chosen;
}

function gather(
  tiles: readonly FractionTile[],
  chosen: Int8Array,
  plane: (tile: FractionTile) => Float32Array,
  pixels: number,
): Float32Array {
  const planes = tiles.map(plane);
  const out = new Float32Array(pixels);
  for (let i = 0; i < pixels; i++) out[i] = chosen[i] < 0 ? Number.NaN : planes[chosen[i]][i];
  return out;
}

function plain(tiles: readonly FractionTile[], chosen: Int8Array, product: ProductName, pixels: number): Float32Array {
  const name = PRODUCT_PLANE[product];
  if (!name) throw new Error(`no plane behind the product ${product}`);
  return gather(tiles, chosen, (tile) => tile.planes[name] as Float32Array, pixels);
}

/** Quality of the chosen pass; where none is usable, of the first pass that covers the pixel. */
function quality(tiles: readonly FractionTile[], chosen: Int8Array, pixels: number): Uint16Array {
  const out = new Uint16Array(pixels).fill(DAY_QUALITY.noScene);
  for (let i = 0; i < pixels; i++) {
    const tile = tiles[chosen[i]] ?? tiles.find((candidate) => (candidate.quality[i] & DAY_QUALITY.noScene) === 0);
    if (tile) out[i] = tile.quality[i];
  }
  return out;
}

/**
 * Where a value comes from: pass (high byte: its place among the passes of the date, plus 1) and scene of the pass
 * (low byte). The same in every tile; seams are where this changes.
 */
function originPlane(plan: Plan, date: string, tiles: readonly FractionTile[], chosen: Int8Array): Uint16Array {
  const passesOfDate = plan.passes.flatMap(({ pass }, index) => (pass.date === date ? [index] : []));
  const place = tiles.map((tile) => (passesOfDate.indexOf(tile.pass) + 1) << 8);
  const out = new Uint16Array(chosen.length);
  for (let i = 0; i < out.length; i++) if (chosen[i] >= 0) out[i] = place[chosen[i]] | tiles[chosen[i]].origin[i];
  return out;
}

function etOfDay(
  plan: Plan,
  date: string,
  fraction: Float32Array,
  window: Parameters<typeof buildLattice>[0],
): Float32Array {
  const lattice = buildLattice(window, FIELD_STEP, 1, referenceDayField(plan, date));
  const reference = new Float32Array(fraction.length);
  expandLattice(lattice, 0, window, reference);
  for (let i = 0; i < fraction.length; i++) reference[i] *= fraction[i];
  return reference;
}
