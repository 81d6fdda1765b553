import {
  crossEdge,
  type EdgeStrips,
  type SeamEntry,
  SeamStats,
  type SeamStatsJson,
  SeamTable,
} from '../../shared/anchors/seam.ts';
import type { GridSpec, TileAddress } from '../../shared/contract/grid.ts';
import type { TallyJob, TileKeys } from '../../shared/contract/jobs.ts';
import { PRODUCTS, type ProductName } from '../../shared/contract/products.ts';
import type { BlockHeader, QualityCounts } from '../../shared/raster/block-header.ts';
import { type ZoneSum, ZoneTable } from '../../shared/region/zone-table.ts';
import type { MosaickerContext } from './context.ts';

/** All tile edges along one line of the grid. */
export interface TileEdgeEntry {
  /** "row": the line between two pixel rows; "column": between two pixel columns. */
  readonly along: 'row' | 'column';
  /** Global index of the first pixel row or column after the line. */
  readonly at: number;
  readonly stats: SeamStatsJson;
}

export interface TalliedSeams {
  readonly product: ProductName;
  readonly stage: 'before' | 'after';
  /** Seams between origins: scenes and passes of a day, swaths of a period. */
  readonly origins: readonly SeamEntry[];
  readonly tileEdges: readonly TileEdgeEntry[];
}

export interface TallyRecord {
  readonly quality: QualityCounts;
  readonly seams: readonly TalliedSeams[];
  readonly zones: readonly ZoneSum[];
}

/** Adds up the seams and zone sums of all tiles; memory holds the edges of one row of tiles. */
export async function runTally(job: TallyJob, context: MosaickerContext): Promise<void> {
  const { tiles, grid } = await context.plan(job.planKey);
  const tileKeys = await context.json<TileKeys>(job.tilesKey);
  const seams = new Map<string, SeamTally>();
  const zones = new ZoneTable();
  let quality: QualityCounts = { regionPixels: 0, usable: 0, bits: [] };
  for (const [index, tile] of tiles.entries()) {
    const key = tileKeys[index];
    if (!key) continue;
    const { header } = await context.planes(key, []);
    const { seams: variables, zones: sums, quality: counts } = header as BlockHeader;
    quality = addCounts(quality, counts);
    if (sums) zones.merge(sums);
    for (const { product, stage, inside, edges } of variables) {
      const name = `${product} ${stage}`;
      const tally = seams.get(name) ?? new SeamTally(product, stage, grid);
      seams.set(name, tally);
      tally.add(tile, inside, edges);
    }
  }
  const record: TallyRecord = {
    quality,
    seams: [...seams.values()].map((tally) => tally.result()),
    zones: zones.entries(),
  };
  await context.store.put(job.outputKey, Buffer.from(JSON.stringify(record)));
}

function addCounts(a: QualityCounts, b: QualityCounts): QualityCounts {
  return {
    regionPixels: a.regionPixels + b.regionPixels,
    usable: a.usable + b.usable,
    bits: b.bits.map((count, bit) => count + (a.bits[bit] ?? 0)),
  };
}

class SeamTally {
  readonly #product: ProductName;
  readonly #stage: 'before' | 'after';
  readonly #grid: GridSpec;
  readonly #origins = new SeamTable();
  readonly #lines = new Map<string, { along: 'row' | 'column'; at: number; stats: SeamStats }>();
  /** Strips that the next tiles need: of the tile to the left, and of the row above by tile column. */
  #left: { tile: TileAddress; edges: EdgeStrips } | undefined;
  readonly #above = new Map<number, { tile: TileAddress; edges: EdgeStrips }>();

  constructor(product: ProductName, stage: 'before' | 'after', grid: GridSpec) {
    this.#product = product;
    this.#stage = stage;
    this.#grid = grid;
  }

  /** Tiles come row by row. */
  add(tile: TileAddress, inside: readonly SeamEntry[], edges: EdgeStrips): void {
    const nodata = PRODUCTS[this.#product].nodata as number;
    const { tileSize } = this.#grid;
    this.#origins.merge(inside);
    const left = this.#left;
    if (left && left.tile.tileRow === tile.tileRow && left.tile.tileColumn === tile.tileColumn - 1) {
      const line = this.#line('column', tile.tileColumn * tileSize);
      crossEdge(left.edges.right, edges.left, nodata, this.#origins, line);
    }
    const above = this.#above.get(tile.tileColumn);
    if (above && above.tile.tileRow === tile.tileRow - 1) {
      const line = this.#line('row', tile.tileRow * tileSize);
      crossEdge(above.edges.bottom, edges.top, nodata, this.#origins, line);
    }
    this.#left = { tile, edges };
    this.#above.set(tile.tileColumn, { tile, edges });
  }

  result(): TalliedSeams {
    const tileEdges = [...this.#lines.values()]
      .filter(({ stats }) => stats.result().count > 0)
      .sort((a, b) => (a.along === b.along ? a.at - b.at : a.along < b.along ? -1 : 1))
      .map(({ along, at, stats }) => ({ along, at, stats: stats.toJSON() }));
    return { product: this.#product, stage: this.#stage, origins: this.#origins.entries(), tileEdges };
  }

  #line(along: 'row' | 'column', at: number): SeamStats {
    const key = `${along} ${at}`;
    const known = this.#lines.get(key) ?? { along, at, stats: new SeamStats() };
    this.#lines.set(key, known);
    return known.stats;
  }
}
