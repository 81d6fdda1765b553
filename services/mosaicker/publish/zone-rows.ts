import type { Period, Plan } from '../../../shared/contract/plan.ts';
import { PRODUCTS } from '../../../shared/contract/products.ts';
import { ZoneAccumulator } from '../../../shared/region/zone-sum.ts';
import { ALL_CLASSES, BASIN_ZONE, type ZoneSum } from '../../../shared/region/zone-table.ts';
import type { LoadedLayer, Publication } from '../publish.ts';
import type { ZoneRow } from '../tables.ts';

/** Rows of tables/zones.csv: for each period the basin, then its zones; all land cover, then by class. */
export function zoneRows({ plan, layers }: Publication): ZoneRow[] {
  return layers.flatMap((layer) => {
    const period = plan.periods.find(({ id }) => id === layer.when);
    if (!period) return [];
    // A class that occurs in a tile need not occur in every zone that the tile touches.
    return layer.tally.zones.map((sum) => zoneRow(plan, period, sum)).filter((row) => row.pixel_count > 0);
  });
}

/** Volume of the basin in a period as it would be without the adjustment between passes, m3. */
export function volumeBeforeAdjustment(plan: Plan, layer: LoadedLayer): number {
  const basin = layer.tally.zones.find(({ zone, landcover }) => zone === BASIN_ZONE && landcover === ALL_CLASSES);
  return basin ? volume(plan, ZoneAccumulator.fromJSON(basin.sums['et-before']).sum) : Number.NaN;
}

/** m3 from the exact sum of stored period values times pixel shares. */
function volume({ grid }: Plan, storedSum: number): number {
  return ((storedSum * PRODUCTS['et-period'].scale) / 1000) * grid.resolution ** 2;
}

function zoneRow(plan: Plan, period: Period, { zone, landcover, sums, longestGapMax }: ZoneSum): ZoneRow {
  const et = ZoneAccumulator.fromJSON(sums['et-period']);
  const reference = ZoneAccumulator.fromJSON(sums.reference);
  const observations = ZoneAccumulator.fromJSON(sums.observations);
  const pixelKm2 = plan.grid.resolution ** 2 / 1e6;
  const { scale } = PRODUCTS['et-period'];
  const validFraction = et.areaPixels > 0 ? et.validPixels / et.areaPixels : 0;
  return {
    zone: zone === BASIN_ZONE ? plan.basin.region.name : plan.zones[zone].name,
    zone_kind: zone === BASIN_ZONE ? 'basin' : 'sub-basin',
    land_cover: landcover === ALL_CLASSES ? 'all' : className(plan, landcover),
    period: period.id,
    from: period.from,
    to: period.to,
    area_km2: et.areaPixels * pixelKm2,
    covered_area_km2: et.validPixels * pixelKm2,
    valid_fraction: validFraction,
    et_mean_mm: (et.sum / et.validPixels) * scale,
    et_volume_m3: volume(plan, et.sum),
    reference_et_mm: (reference.sum / reference.validPixels) * scale,
    observations_mean: observations.sum / observations.validPixels,
    longest_gap_days_max: longestGapMax,
    pixel_count: et.touchedPixels,
    ...(validFraction < plan.basin.checks.minCoverage && { quality: 'below-min-coverage' }),
  };
}

function className(plan: Plan, code: number): string {
  return plan.landcover?.classes.find((entry) => entry.code === code)?.name ?? `class ${code}`;
}
