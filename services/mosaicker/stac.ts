import type { GridSpec } from '../../shared/contract/grid.ts';
import { PRODUCT_NAMES, type ProductName } from '../../shared/contract/products.ts';
import { assetDefinition, type ProductAsset, productAsset, type SideAsset, sideAsset } from './stac/asset.ts';
import { projectionFields } from './stac/crs.ts';
import { gridFootprint } from './stac/footprint.ts';
import { type ItemTime, timeProperties } from './stac/time.ts';

export type { ProductAsset, SideAsset } from './stac/asset.ts';
export { type ItemTime, overpassTime, periodTime } from './stac/time.ts';

const STAC_VERSION = '1.1.0';
const extension = (name: string, version: string): string =>
  `https://stac-extensions.github.io/${name}/v${version}/schema.json`;
const PROJECTION = extension('projection', '2.0.0');
const RASTER = extension('raster', '2.0.0');
const FILE = extension('file', '2.1.0');
const PROCESSING = extension('processing', '1.2.0');
const CLASSIFICATION = extension('classification', '2.0.0');

/** A scene that an item was made from. */
export interface SourceScene {
  /** Product identifier from the scene's metadata. */
  readonly id: string;
  /** Where its metadata are: an address, or a path relative to the item. */
  readonly href: string;
  /** @defaultValue "application/geo+json" for an .json href, "text/plain" for a .txt, "application/xml" for an .xml */
  readonly mediaType?: string;
}

export interface ProcessingFacts {
  /** Program name to version, for example { basinloom: "0.1.0" }. */
  readonly software: Readonly<Record<string, string>>;
  /** How the data were made, in words (CommonMark). No time of day, no machine: the text is part of the product. */
  readonly lineage: string;
}

export interface StacItemInput {
  /** Unique in the collection: the date or the period. */
  readonly id: string;
  readonly title: string;
  readonly collectionId: string;
  readonly grid: GridSpec;
  readonly time: ItemTime;
  readonly assets: readonly ProductAsset[];
  readonly sideAssets?: readonly SideAsset[];
  readonly scenes: readonly SourceScene[];
  readonly processing: ProcessingFacts;
  /** Public address of the item. STAC asks for an absolute one; without it the link is left out. */
  readonly selfHref?: string;
  /** @defaultValue "../collection.json" */
  readonly collectionHref?: string;
}

/**
 * STAC 1.1.0 item of one date or period folder, one asset for each product. The same input gives the same text:
 * keys have a fixed order, products stand in the order of the product table, and no clock is read.
 */
export function stacItem(input: StacItemInput): object {
  const { grid } = input;
  const { geometry, bbox } = gridFootprint(grid);
  const products = inTableOrder(input.assets);
  const hasFlags = products.some(({ product }) => product.startsWith('quality-'));
  return {
    type: 'Feature',
    stac_version: STAC_VERSION,
    stac_extensions: [PROJECTION, RASTER, FILE, PROCESSING, ...(hasFlags ? [CLASSIFICATION] : [])],
    id: input.id,
    collection: input.collectionId,
    geometry,
    bbox: [...bbox],
    properties: {
      title: input.title,
      ...timeProperties(input.time),
      ...projectionFields(grid.crs),
      ...gridFields(grid),
      'processing:level': 'L4',
      'processing:software': sortedRecord(input.processing.software),
      'processing:lineage': input.processing.lineage,
    },
    links: itemLinks(input),
    assets: Object.fromEntries([
      ...products.map((asset) => [asset.product, productAsset(asset, grid.resolution)]),
      ...(input.sideAssets ?? []).map((asset) => [asset.key, sideAsset(asset)]),
    ]),
  };
}

export interface StacCollectionInput {
  readonly id: string;
  readonly title: string;
  readonly description: string;
  /** SPDX identifier, or "other". @defaultValue "other": the agency decides */
  readonly license?: string;
  readonly grid: GridSpec;
  /** First and last moment of the items, UTC. */
  readonly interval: readonly [string, string];
  readonly items: readonly { readonly id: string; readonly title: string }[];
  readonly products: readonly ProductName[];
  readonly software: Readonly<Record<string, string>>;
  readonly selfHref?: string;
}

/** STAC 1.1.0 collection above the items; it is the root of its own small catalogue. */
export function stacCollection(input: StacCollectionInput): object {
  const { bbox } = gridFootprint(input.grid);
  const names = PRODUCT_NAMES.filter((name) => input.products.includes(name));
  return {
    type: 'Collection',
    stac_version: STAC_VERSION,
    stac_extensions: [PROJECTION, RASTER, PROCESSING],
    id: input.id,
    title: input.title,
    description: input.description,
    keywords: ['evapotranspiration', 'water accounting', 'surface energy balance'],
    license: input.license ?? 'other',
    extent: { spatial: { bbox: [[...bbox]] }, temporal: { interval: [[...input.interval]] } },
    summaries: {
      'processing:level': ['L4'],
      'processing:software': [sortedRecord(input.software)],
      'proj:code': [input.grid.crs.kind === 'epsg' ? `EPSG:${input.grid.crs.epsg}` : null],
    },
    item_assets: Object.fromEntries(names.map((name) => [name, assetDefinition(name, input.grid.resolution)])),
    links: [
      ...(input.selfHref ? [{ rel: 'self', href: input.selfHref, type: 'application/json' }] : []),
      { rel: 'root', href: './collection.json', type: 'application/json', title: input.title },
      ...input.items.map(({ id, title }) => ({
        rel: 'item',
        href: `./${id}/item.json`,
        type: 'application/geo+json',
        title,
      })),
    ],
  };
}

/** JSON text of an item or a collection, with a last line end. */
export function stacText(document: object): string {
  return `${JSON.stringify(document, null, 2)}\n`;
}

function gridFields(grid: GridSpec): Record<string, unknown> {
  const { originX, originY, resolution, rows, columns } = grid;
  return {
    'proj:shape': [rows, columns],
    'proj:transform': [resolution, 0, originX, 0, -resolution, originY, 0, 0, 1],
    'proj:bbox': [originX, originY - rows * resolution, originX + columns * resolution, originY],
  };
}

function itemLinks(input: StacItemInput): object[] {
  const collection = input.collectionHref ?? '../collection.json';
  const json = 'application/json';
  return [
    ...(input.selfHref ? [{ rel: 'self', href: input.selfHref, type: 'application/geo+json' }] : []),
    { rel: 'root', href: collection, type: json },
    { rel: 'parent', href: collection, type: json },
    { rel: 'collection', href: collection, type: json },
    ...input.scenes
      .toSorted((a, b) => (a.id < b.id ? -1 : a.id > b.id ? 1 : 0))
      .map(({ id, href, mediaType }) => ({
        rel: 'derived_from',
        href,
        type: mediaType ?? mediaTypeOf(href),
        title: id,
      })),
  ];
}

function mediaTypeOf(href: string): string {
  if (/\.txt$/i.test(href)) return 'text/plain';
  if (/\.xml$/i.test(href)) return 'application/xml';
  return /_MTL\.json$/i.test(href) ? 'application/json' : 'application/geo+json';
}

function inTableOrder(assets: readonly ProductAsset[]): readonly ProductAsset[] {
  return PRODUCT_NAMES.flatMap((name) => assets.filter(({ product }) => product === name));
}

function sortedRecord(record: Readonly<Record<string, string>>): Record<string, string> {
  return Object.fromEntries(Object.entries(record).sort(([a], [b]) => (a < b ? -1 : 1)));
}
