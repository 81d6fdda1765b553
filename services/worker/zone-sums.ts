import type { PixelWindow } from '../../shared/contract/grid.ts';
import type { PixelPolygons, Plan } from '../../shared/contract/plan.ts';
import { PRODUCTS } from '../../shared/contract/products.ts';
import { quantise } from '../../shared/raster/product-tile.ts';
import { filled } from '../../shared/raster/sample-type.ts';
import { readWarped } from '../../shared/raster/warp.ts';
import { polygonCoverage } from '../../shared/region/coverage.ts';
import { ALL_CLASSES, BASIN_ZONE, type ZoneSum, ZoneTable, type ZoneVariable } from '../../shared/region/zone-table.ts';
import type { WorkerContext } from './context.ts';
import { edgesOf } from './region-share.ts';
import { tileWindows } from './tile-window.ts';

export interface ZonePlanes {
  /** Stored values of et-period, after and before adjustment. */
  readonly etStored: Int16Array;
  readonly before: Int16Array;
  /** mm; NaN where the ET is not known. */
  readonly reference: Float64Array;
  readonly observations: Uint8Array;
  readonly longestGap: Uint16Array;
}

/** The tile's share of every zone, whole and by land-cover class. */
export async function zoneSums(
  plan: Plan,
  tile: number,
  planes: ZonePlanes,
  context: WorkerContext,
): Promise<ZoneSum[]> {
  const { inner } = tileWindows(plan, tile);
  const nodata = PRODUCTS['et-period'].nodata;
  // Observations count where there is a value to rest on them.
  const observed = filled(new Int16Array(planes.observations.length), planes.observations, (count, i) =>
    planes.etStored[i] === nodata ? nodata : count,
  );
  const variables: readonly (readonly [ZoneVariable, Int16Array])[] = [
    ['et-period', planes.etStored],
    ['et-before', planes.before],
    ['reference', quantise('et-period', planes.reference) as Int16Array],
    ['observations', observed],
  ];
  const classes = await classMasks(plan, inner, context);
  const table = new ZoneTable();
  for (const { zone, polygons } of zonesOf(plan)) {
    const { share, empty } = polygonCoverage(edgesOf(polygons), inner);
    if (empty) continue;
    for (const [landcover, include] of classes) {
      const row = table.row(zone, landcover);
      for (const [variable, stored] of variables) row.sums.get(variable)?.addTile(stored, nodata, share, include);
      row.gap = Math.max(row.gap, longestGap(planes, share, include));
    }
  }
  return table.entries();
}

function zonesOf(plan: Plan): { zone: number; polygons: PixelPolygons }[] {
  const zones = plan.zones.map(({ polygons }, zone) => ({ zone, polygons }));
  return [{ zone: BASIN_ZONE, polygons: plan.boundary }, ...zones];
}

/** Land-cover classes that occur in the window, each with its pixels; first of all the whole. */
async function classMasks(
  plan: Plan,
  window: PixelWindow,
  context: WorkerContext,
): Promise<(readonly [code: number, include: Uint8Array | undefined])[]> {
  const whole = [[ALL_CLASSES, undefined]] as const;
  if (!plan.landcover) return [...whole];
  const raster = await context.raster(plan.landcover.file);
  const codes = await readWarped(raster, plan.grid, window, { resampling: 'nearest' });
  const present = [...new Set(codes as Iterable<number>)].sort((a, b) => a - b);
  const maskOf = (code: number) => filled(new Uint8Array(codes.length), codes, (c) => (c === code ? 1 : 0));
  return [...whole, ...present.map((code) => [code, maskOf(code)] as const)];
}

function longestGap({ longestGap: gaps }: ZonePlanes, share: Float64Array, include: Uint8Array | undefined): number {
  let longest = 0;
  for (let i = 0; i < share.length; i++) {
    if (share[i] === 0 || (include && !include[i]) || gaps[i] === PRODUCTS['longest-gap'].nodata) continue;
    if (gaps[i] > longest) longest = gaps[i];
  }
  return longest;
}
