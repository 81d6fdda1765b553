import { type StacItemInput, stacItem, stacText } from '../../services/mosaicker/stac.ts';
import type { GridSpec } from '../../shared/contract/grid.ts';

export const grid: GridSpec = {
  crs: {
    code: 'laea:45.5,10.25',
    proj4: '+proj=laea +lat_0=45.5 +lon_0=10.25 +x_0=0 +y_0=0 +datum=WGS84 +units=m +no_defs',
    kind: 'laea',
    latitudeOfOriginDeg: 45.5,
    longitudeOfOriginDeg: 10.25,
  },
  originX: -30_000,
  originY: 21_000,
  resolution: 30,
  rows: 1400,
  columns: 2000,
  tileSize: 512,
};

export const input: StacItemInput = {
  id: '2025-06-12',
  title: 'Orrin, 12 June 2025',
  collectionId: 'orrin-evapotranspiration',
  grid,
  time: { datetime: '2025-06-12T17:21:03Z' },
  assets: [
    { product: 'quality-day', size: 777, sha256: 'AB'.repeat(32), statistics: null },
    {
      product: 'et-day',
      size: 1234,
      sha256: 'cd'.repeat(32),
      statistics: {
        minimum: 0.1,
        maximum: 8.2,
        mean: 4.1,
        standardDeviation: 1.3,
        validPercent: 81.5,
        count: 2_282_000,
      },
    },
    { product: 'et-fraction', size: 99, sha256: 'ef'.repeat(32), statistics: null },
  ],
  scenes: [
    { id: 'LC09_B', href: '../../scenes/LC09_B_MTL.txt' },
    { id: 'LC08_A', href: '../../scenes/LC08_A_MTL.json' },
  ],
  processing: { software: { node: '24.21.0', basinloom: '0.1.0' }, lineage: 'Surface energy balance by METRIC.' },
};

// biome-ignore lint/suspicious/noExplicitAny: the test looks at a document as a reader of JSON sees it
export const read = (document: object): any => JSON.parse(stacText(document));
export const item = read(stacItem(input));
export const RFC3339 = /^\d{4}-\d{2}-\d{2}T\d{2}:\d{2}:\d{2}(\.\d+)?Z$/;
