import { scanSeams, takeEdges } from '../../shared/anchors/seam.ts';
import type { PixelWindow } from '../../shared/contract/grid.ts';
import type { Plan } from '../../shared/contract/plan.ts';
import type { ProductName } from '../../shared/contract/products.ts';
import { PRODUCTS } from '../../shared/contract/products.ts';
import type { BlockHeader, QualityCounts, SeamVariable } from '../../shared/raster/block-header.ts';
import { type ProductSamples, productTile, type StoredStatistics } from '../../shared/raster/product-tile.ts';
import { encodePlanes } from '../../shared/raster/tile-codec.ts';
import type { ZoneSum } from '../../shared/region/zone-table.ts';

/** Gathers what a day or integrate job leaves on a tile: finished blocks, statistics, seams. */
export class BlockArtefact {
  readonly #plan: Plan;
  readonly #window: PixelWindow;
  readonly #planes: Record<string, ProductSamples | Uint8Array> = {};
  readonly #statistics: Partial<Record<ProductName, StoredStatistics>> = {};
  readonly #seams: SeamVariable[] = [];
  #quality: QualityCounts = { regionPixels: 0, usable: 0, bits: [] };
  #zones: readonly ZoneSum[] | undefined;

  constructor(plan: Plan, window: PixelWindow) {
    this.#plan = plan;
    this.#window = window;
  }

  addProduct(product: ProductName, stored: ProductSamples): void {
    const tile = productTile(product, stored, this.#window, this.#plan.grid, this.#plan.basin.compression);
    this.#planes[`${product}.block`] = tile.block;
    this.#planes[`${product}.half`] = tile.half;
    this.#statistics[product] = tile.statistics;
  }

  /** Seams of one variable: those inside the tile, and the strips from which those across tile edges follow. */
  addSeams(product: ProductName, stage: 'before' | 'after', stored: Int16Array, origin: Uint16Array): void {
    const nodata = PRODUCTS[product].nodata as number;
    const inside = scanSeams(stored, nodata, origin, this.#window);
    this.#seams.push({ product, stage, inside, edges: takeEdges(stored, nodata, origin, this.#window) });
  }

  /** Counts the quality bits of the pixels inside the region. @param unusable bits that leave no value */
  addQuality(quality: Uint16Array, inside: Uint8Array, unusable: number): void {
    const bits = new Array<number>(16).fill(0);
    let regionPixels = 0;
    let usable = 0;
    for (let i = 0; i < quality.length; i++) {
      if (!inside[i]) continue;
      regionPixels++;
      if ((quality[i] & unusable) === 0) usable++;
      for (let rest = quality[i]; rest !== 0; rest &= rest - 1) bits[31 - Math.clz32(rest & -rest)]++;
    }
    this.#quality = { regionPixels, usable, bits };
  }

  addZones(zones: readonly ZoneSum[]): void {
    this.#zones = zones;
  }

  encode(): Uint8Array {
    const header: BlockHeader = {
      statistics: this.#statistics,
      seams: this.#seams,
      quality: this.#quality,
      ...(this.#zones && { zones: this.#zones }),
    };
    return encodePlanes(header as never, this.#planes);
  }
}
