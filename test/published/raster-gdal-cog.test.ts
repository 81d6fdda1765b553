import { execFileSync } from 'node:child_process';
import { writeFile } from 'node:fs/promises';
import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { GridSpec } from '../../shared/contract/grid.ts';
import { encodeBlock } from '../../shared/raster/block.ts';
import { writeCog } from '../../shared/raster/cog.ts';
import {
  mergeStatistics,
  NO_STATISTICS,
  type ProductSamples,
  physicalStatistics,
  productTile,
  quantise,
} from '../../shared/raster/product-tile.ts';
import { overviewLevels, PyramidBuilder } from '../../shared/raster/pyramid.ts';
import { tilesOf, tileWindow } from '../../shared/region/tiles.ts';
import { checkCog, gdalJson, hasGdal } from '../support/gdal.ts';
import { temporaryFolder } from '../support/run-cli.ts';

// A product written tile by tile as a run writes it, and what GDAL (gdalinfo, its own statistics) says of it.

const grid: GridSpec = {
  crs: {
    code: 'laea:-17.5,178.2',
    proj4: '+proj=laea +lat_0=-17.5 +lon_0=178.2 +x_0=0 +y_0=0 +datum=WGS84 +units=m +no_defs',
    kind: 'laea',
    latitudeOfOriginDeg: -17.5,
    longitudeOfOriginDeg: 178.2,
  },
  originX: -30000,
  originY: 24000,
  resolution: 30,
  rows: 1111,
  columns: 1303,
  tileSize: 128,
};
const PIXELS = grid.rows * grid.columns;

const physical = Float32Array.from({ length: PIXELS }, (_, i) => {
  const [row, column] = [Math.floor(i / grid.columns), i % grid.columns];
  if ((row - 600) ** 2 + (column - 700) ** 2 > 560 ** 2 || (row * 7 + column) % 97 === 0) return Number.NaN;
  return 295 + 20 * Math.sin(row / 40) * Math.cos(column / 31);
});

async function writeProduct(file: string): Promise<ProductSamples> {
  const stored = quantise('surface-temperature', physical);
  const sizes = [{ rows: grid.rows, columns: grid.columns }, ...overviewLevels(grid.rows, grid.columns)];
  const blocks: Uint8Array[][] = sizes.map(() => []);
  const builder = new PyramidBuilder<Int16Array>({
    levels: sizes.slice(1),
    blockSize: grid.tileSize,
    nodata: -32768,
    mode: 'average',
    allocate: (length) => new Int16Array(length),
    empty: -32768,
    block: (level, samples) => blocks[level + 1].push(encodeBlock(samples, grid.tileSize, 'deflate')),
  });
  let statistics = NO_STATISTICS;
  for (const address of tilesOf(grid)) {
    const window = tileWindow(grid, address);
    const part = new Int16Array(window.rows * window.columns);
    for (let r = 0; r < window.rows; r++) {
      const from = (window.row + r) * grid.columns + window.column;
      part.set(stored.subarray(from, from + window.columns), r * window.columns);
    }
    const tile = productTile('surface-temperature', part, window, grid, 'deflate');
    blocks[0].push(tile.block);
    statistics = mergeStatistics(statistics, tile.statistics);
    builder.add({
      row: window.row / 2,
      column: window.column / 2,
      rows: Math.ceil(window.rows / 2),
      columns: Math.ceil(window.columns / 2),
      samples: tile.half as Int16Array,
    });
  }
  builder.end();
  const layout = {
    levels: sizes.map(({ rows, columns }, level) => ({
      width: columns,
      height: rows,
      blockByteLengths: blocks[level].map(({ length }) => length),
    })),
    blockSize: grid.tileSize,
    sampleType: 'int16' as const,
    compression: 'deflate' as const,
    nodata: -32768,
    grid,
    metadata: {
      description: 'Surface temperature <K> & "more"',
      unit: 'K',
      scale: 0.01,
      offset: 273.15,
      statistics: physicalStatistics('surface-temperature', statistics, PIXELS) ?? undefined,
      items: { run: 'äöü <a & b>' },
    },
  };
  const parts: Uint8Array[] = [];
  for await (const piece of writeCog(layout, (level) => blocks[level])) parts.push(piece);
  await writeFile(file, Buffer.concat(parts));
  return stored;
}

interface Info {
  bands: {
    block: number[];
    type: string;
    noDataValue: number;
    scale: number;
    offset: number;
    unit: string;
    description: string;
    overviews: { size: number[] }[];
    metadata: Record<string, Record<string, string>>;
  }[];
  metadata: Record<string, Record<string, string>>;
  geoTransform: number[];
  size: number[];
}

let folder: string;
let remove: () => Promise<void>;
beforeAll(async () => {
  [folder, remove] = await temporaryFolder();
});
afterAll(() => remove());

describe.skipIf(!hasGdal)('a product put together from tiles', () => {
  it('is to GDAL what it was meant to be', async () => {
    const file = join(folder, 'product.tif');
    const stored = await writeProduct(file);
    await writeFile(join(folder, 'stored.bin'), stored);
    const { valid, text } = checkCog(file);
    expect(valid, text).toBe(true);

    const info = JSON.parse(execFileSync('gdalinfo', ['-json', file], { encoding: 'utf8' })) as Info;
    expect(info.size).toEqual([1303, 1111]);
    expect(info.geoTransform).toEqual([-30000, 30, 0, 24000, 0, -30]);
    expect(info.metadata.IMAGE_STRUCTURE).toMatchObject({ LAYOUT: 'COG', COMPRESSION: 'DEFLATE', PREDICTOR: '2' });
    expect(info.metadata[''].run).toBe('äöü <a & b>');
    const [band] = info.bands;
    expect(band).toMatchObject({
      block: [128, 128],
      type: 'Int16',
      noDataValue: -32768,
      scale: 0.01,
      offset: 273.15,
      unit: 'K',
      description: 'Surface temperature <K> & "more"',
    });
    expect(band.overviews.map(({ size }) => size)).toEqual([
      [652, 556],
      [326, 278],
      [163, 139],
    ]);

    // What the file says of itself against what GDAL computes from its pixels.
    const found = gdalJson<{ statistics: number[]; percent: number; different: number; levels: number[] }>(
      `
import numpy
d = gdal.Open(sys.argv[1]); b = d.GetRasterBand(1)
levels = [b] + [b.GetOverview(k) for k in range(b.GetOverviewCount())]
arrays = [l.ReadAsArray().astype('f8') for l in levels]
def smaller(a):
  a = numpy.where(a == -32768, numpy.nan, a)
  a = numpy.pad(a, ((0, a.shape[0] % 2), (0, a.shape[1] % 2)), constant_values=numpy.nan)
  four = numpy.stack([a[0::2, 0::2], a[0::2, 1::2], a[1::2, 0::2], a[1::2, 1::2]])
  n = (~numpy.isnan(four)).sum(axis=0); s = numpy.nansum(four, axis=0)
  return numpy.where(n == 0, -32768, numpy.floor(s / numpy.maximum(n, 1) + 0.5))
v = arrays[0][arrays[0] != -32768]
print(json.dumps({'statistics': [v.min(), v.max(), v.mean(), v.std()], 'percent': 100 * v.size / arrays[0].size,
  'different': int((arrays[0].ravel() != numpy.fromfile(sys.argv[2], '<i2')).sum()),
  'levels': [int((smaller(arrays[k]) != arrays[k + 1]).sum()) for k in range(len(arrays) - 1)]}))
`,
      file,
      join(folder, 'stored.bin'),
    );
    expect(found.different).toBe(0);
    const said = band.metadata[''];
    ['MINIMUM', 'MAXIMUM', 'MEAN', 'STDDEV'].forEach((name, k) => {
      expect(Math.abs(Number(said[`STATISTICS_${name}`]) - found.statistics[k])).toBeLessThan(1e-5);
    });
    expect(Number(said.STATISTICS_VALID_PERCENT)).toBeCloseTo(found.percent, 6);
    // Overviews, recomputed by numpy from the level above: no pixel differs.
    expect(found.levels).toEqual([0, 0, 0]);
  });
});
