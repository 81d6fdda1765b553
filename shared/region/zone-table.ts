import { ZoneAccumulator, type ZoneAccumulatorJson } from './zone-sum.ts';

/** Zone index that stands for the whole basin. */
export const BASIN_ZONE = -1;
/** Class code that stands for all land cover. */
export const ALL_CLASSES = -1;

/** Variables summed in every zone. */
export const ZONE_VARIABLES = ['et-period', 'et-before', 'reference', 'observations'] as const;
export type ZoneVariable = (typeof ZONE_VARIABLES)[number];

/** Sums of one zone and land-cover class, over one tile or, merged, over all. */
export interface ZoneSum {
  /** Index into Plan.zones, or BASIN_ZONE. */
  readonly zone: number;
  /** Land-cover code, or ALL_CLASSES. */
  readonly landcover: number;
  readonly sums: Readonly<Record<ZoneVariable, ZoneAccumulatorJson>>;
  /** Largest stored longest gap of any valid pixel, days. */
  readonly longestGapMax: number;
}

/** Exact union of zone sums of different tiles; the order cannot matter. */
export class ZoneTable {
  readonly #rows = new Map<
    string,
    { zone: number; landcover: number; sums: Map<ZoneVariable, ZoneAccumulator>; gap: number }
  >();

  merge(entries: readonly ZoneSum[]): void {
    for (const { zone, landcover, sums, longestGapMax } of entries) {
      const row = this.row(zone, landcover);
      row.gap = Math.max(row.gap, longestGapMax);
      for (const variable of ZONE_VARIABLES) row.sums.get(variable)?.merge(ZoneAccumulator.fromJSON(sums[variable]));
    }
  }

  /** The row of a zone and class; made when absent. */
  row(zone: number, landcover: number) {
    const key = `${zone} ${landcover}`;
    const known = this.#rows.get(key);
    if (known) return known;
    const sums = new Map(ZONE_VARIABLES.map((variable) => [variable, new ZoneAccumulator()]));
    const made = { zone, landcover, sums, gap: 0 };
    this.#rows.set(key, made);
    return made;
  }

  /** Basin first, then zones in plan order; all classes first, then by code. */
  entries(): ZoneSum[] {
    return [...this.#rows.values()]
      .sort((a, b) => a.zone - b.zone || a.landcover - b.landcover)
      .map(({ zone, landcover, sums, gap }) => ({
        zone,
        landcover,
        longestGapMax: gap,
        sums: Object.fromEntries([...sums].map(([name, sum]) => [name, sum.toJSON()])) as ZoneSum['sums'],
      }));
  }
}
