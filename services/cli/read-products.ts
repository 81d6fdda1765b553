import { access, readFile } from 'node:fs/promises';
import { join } from 'node:path';
import { parse } from 'csv-parse/sync';
import type { Plan } from '../../shared/contract/plan.ts';
import { productKey } from '../../shared/contract/product-key.ts';
import { PRODUCTS } from '../../shared/contract/products.ts';
import { openFile } from '../../shared/raster/file-source.ts';
import { physicalValues } from '../../shared/raster/physical.ts';
import { openRaster } from '../../shared/raster/raster-file.ts';

/** Daily ET of a date over the whole grid, mm, NaN where there is none; null when the date was not published. */
export async function readDay({ grid, basin }: Plan, date: string): Promise<Float32Array | null> {
  const path = join(basin.store, productKey('et-day', date));
  const there = await access(path).then(
    () => true,
    () => false,
  );
  if (!there) return null;
  const raster = await openRaster(await openFile(path));
  const stored = await raster.readWindow({ row: 0, column: 0, rows: grid.rows, columns: grid.columns });
  await raster.close();
  const { nodata, scale, offset } = PRODUCTS['et-day'];
  return physicalValues(stored, { scale, offset, fill: nodata });
}

export interface ZoneVolume {
  readonly zone: string;
  readonly period: string;
  readonly volumeM3: number;
}

/** Volumes of tables/zones.csv over all land cover, scaled to the whole zone where some of it has no value. */
export async function readZoneVolumes({ basin }: Plan): Promise<ZoneVolume[]> {
  const text = await readFile(join(basin.store, 'tables/zones.csv'), 'utf8');
  const rows = parse(text, { columns: true }) as Record<string, string>[];
  return rows
    .filter((row) => row.land_cover === 'all')
    .map((row) => ({
      zone: row.zone,
      period: row.period,
      volumeM3: Number(row.et_volume_m3) / Number(row.valid_fraction),
    }));
}
