import type { PixelWindow, TileAddress } from '../../shared/contract/grid.ts';
import type { MosaicJob, TileKeys } from '../../shared/contract/jobs.ts';
import type { MosaicRecord } from '../../shared/contract/mosaic-record.ts';
import type { Plan } from '../../shared/contract/plan.ts';
import { productKey, productMarkerKey } from '../../shared/contract/product-key.ts';
import { PRODUCTS, type ProductEntry } from '../../shared/contract/products.ts';
import type { BlockHeader } from '../../shared/raster/block-header.ts';
import { type CogLayout, writeCog } from '../../shared/raster/cog.ts';
import {
  emptyBlock,
  emptyValue,
  mergeStatistics,
  NO_STATISTICS,
  type ProductSamples,
  physicalStatistics,
  type StoredStatistics,
} from '../../shared/raster/product-tile.ts';
import { overviewLevels } from '../../shared/raster/pyramid.ts';
import { tileId, tilesOf, tileWindow } from '../../shared/region/tiles.ts';
import type { MosaickerContext } from './context.ts';
import { MosaicOverviews, previewKey } from './mosaic-overviews.ts';
import { cogMetadata, type ProductTime } from './product-metadata.ts';

/**
 * Stitches one product: blocks that the workers compressed are copied as they are, overviews are built from the
 * tiles' half-resolution parts row by row. Memory follows the width of the basin, not its height.
 */
export async function runMosaic(job: MosaicJob, context: MosaickerContext): Promise<void> {
  const plan = await context.plan(job.planKey);
  const { grid, basin } = plan;
  const entry: ProductEntry = PRODUCTS[job.product];
  const tiles = tilesWithKeys(plan, await context.json<TileKeys>(job.tilesKey));
  const empty = emptyBlock(job.product, grid.tileSize, basin.compression);
  const levels = overviewLevels(grid.rows, grid.columns);
  const overviews = new MosaicOverviews(job.product, levels, grid.tileSize, basin.compression);
  const lengths = new Uint32Array(tiles.length).fill(empty.length);
  let statistics = NO_STATISTICS;
  for (const [index, { address, key }] of tiles.entries()) {
    const window = tileWindow(grid, address);
    if (!key) {
      if (entry.nodata === null) statistics = mergeStatistics(statistics, uniform(emptyValue(job.product), window));
      continue;
    }
    const { header, planes } = await context.planes(key, [`${job.product}.block`, `${job.product}.half`]);
    lengths[index] = planes[`${job.product}.block`].length;
    overviews.add(window, planes[`${job.product}.half`] as ProductSamples);
    const found = (header as BlockHeader).statistics[job.product];
    if (found) statistics = mergeStatistics(statistics, found);
  }
  overviews.end();

  const physical = physicalStatistics(job.product, statistics, grid.rows * grid.columns);
  const layout: CogLayout = {
    levels: [
      { width: grid.columns, height: grid.rows, blockByteLengths: lengths },
      ...levels.map(({ rows, columns }, level) => ({
        width: columns,
        height: rows,
        blockByteLengths: overviews.blocks[level].map(({ length }) => length),
      })),
    ],
    blockSize: grid.tileSize,
    sampleType: entry.storage,
    compression: basin.compression,
    nodata: entry.nodata,
    grid,
    metadata: cogMetadata(job.product, productTime(plan, job), physical, {
      softwareVersion: context.softwareVersion,
      method: basin.method.use[0],
    }),
  };
  async function* blocksOf(level: number): AsyncGenerator<Uint8Array> {
    if (level > 0) yield* overviews.blocks[level - 1];
    else {
      for (const { key } of tiles) {
        const name = `${job.product}.block`;
        yield key ? ((await context.planes(key, [name])).planes[name] as Uint8Array) : empty;
      }
    }
  }
  const written = await context.store.putStream(productKey(job.product, job.when), writeCog(layout, blocksOf));
  const preview = overviews.preview();
  await context.store.put(previewKey(job.outputKey), preview.bytes);
  const record: MosaicRecord = {
    product: job.product,
    when: job.when,
    ...written,
    statistics: physical,
    preview: { key: previewKey(job.outputKey), ...preview.size },
  };
  await context.store.put(job.outputKey, Buffer.from(JSON.stringify(record)));
  await context.store.put(productMarkerKey(job.product, job.when), Buffer.from(job.outputKey));
}

/** Statistics of a tile that holds one value: in a bit field every pixel says something. */
function uniform(value: number, { rows, columns }: PixelWindow): StoredStatistics {
  const count = rows * columns;
  const sums = { sum: String(count * value), sumOfSquares: String(count * value * value) };
  return { count, minimum: value, maximum: value, ...sums, outOfBounds: 0 };
}

/** Every tile of the whole grid, row by row, with its artefact; null where none was computed. */
function tilesWithKeys({ grid, tiles }: Plan, tileKeys: TileKeys): { address: TileAddress; key: string | null }[] {
  const keys = new Map(tiles.map((tile, index) => [tileId(tile), tileKeys[index]]));
  return tilesOf(grid).map((address) => ({ address, key: keys.get(tileId(address)) ?? null }));
}

function productTime({ periods }: Plan, { product, when }: MosaicJob): ProductTime {
  if (PRODUCTS[product].per === 'day') return { date: when };
  const period = periods.find(({ id }) => id === when);
  if (!period) throw new Error(`no period ${when} in the plan`);
  return { period };
}
