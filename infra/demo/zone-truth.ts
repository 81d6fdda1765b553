import { MONTHS } from './calendar.ts';
import { type CellGrid, cellsAround, ringOfCells } from './cell-grid.ts';
import { type EtField, etAt, etField, termsAt } from './et-field.ts';
import { emptyPlace } from './land.ts';
import type { SubBasin } from './outline.ts';
import { toDegrees, trueAreaFactor } from './plane.ts';
import { TERMS } from './reference-surface.ts';
import { daysOf, type ZoneTruth } from './truth.ts';
import type { World } from './world.ts';

/** Maps and sums of the truth over the cells of the basin. */
export interface TruthMaps {
  readonly cells: CellGrid;
  /** True ET, mm; NaN outside the basin. By date of a pass, and "whole" for the period. */
  readonly maps: ReadonlyMap<string, Float32Array>;
  readonly zones: readonly ZoneTruth[];
  /** Mean over the basin, mm, by the keys of `maps`. */
  readonly means: ReadonlyMap<string, number>;
}

/** Integrates the true ET over the sub-basins, with the true area of every cell. */
export function integrateTruth(world: World, subBasins: readonly SubBasin[], dates: readonly string[]): TruthMaps {
  const rings = subBasins.map(({ ring }) => ring);
  const cells = cellsAround(rings, world.size === 'demo' ? 60 : 30);
  const zoneOfCell = ringOfCells(rings, cells);
  const keys = [...MONTHS.map(({ id }) => id), 'whole', ...dates];
  const fields = keys.map((key) => etField(world, daysOf(key)));
  const maps = new Map(keys.map((key) => [key, new Float32Array(zoneOfCell.length).fill(Number.NaN)]));
  const areas = new Float64Array(subBasins.length);
  const volumes = keys.map(() => new Float64Array(subBasins.length));
  const terms = new Float64Array(TERMS);
  const place = emptyPlace();
  for (let at = 0; at < zoneOfCell.length; at++) {
    const zone = zoneOfCell[at];
    if (zone < 0) continue;
    const x = cells.west + ((at % cells.columns) + 0.5) * cells.cell;
    const y = cells.north - (Math.floor(at / cells.columns) + 0.5) * cells.cell;
    const area = trueAreaFactor(toDegrees(x, y)[1]) * cells.cell ** 2;
    areas[zone] += area;
    termsAt(world, x, y, terms);
    world.land.placeAt(x, y, place);
    fields.forEach((field: EtField, k) => {
      const et = etAt(field, place, terms);
      (maps.get(keys[k]) as Float32Array)[at] = et;
      volumes[k][zone] += (et / 1000) * area;
    });
  }
  const total = (values: Float64Array) => values.reduce((sum, value) => sum + value, 0);
  return {
    cells,
    maps,
    zones: subBasins.map(({ name }, zone) => ({
      name,
      areaM2: areas[zone],
      periods: Object.fromEntries(
        keys.slice(0, MONTHS.length + 1).map((key, k) => {
          const volumeM3 = volumes[k][zone];
          return [key, { etMeanMm: (1000 * volumeM3) / areas[zone], volumeM3 }];
        }),
      ),
    })),
    means: new Map(keys.map((key, k) => [key, (1000 * total(volumes[k])) / total(areas)])),
  };
}
