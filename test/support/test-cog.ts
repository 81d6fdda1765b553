import { writeFile } from 'node:fs/promises';
import type { GridSpec } from '../../shared/contract/grid.ts';
import { encodeBlock } from '../../shared/raster/block.ts';
import { writeCog } from '../../shared/raster/cog.ts';
import { openFile } from '../../shared/raster/file-source.ts';
import { halve, overviewLevels } from '../../shared/raster/pyramid.ts';
import { openRaster, type RasterSamples } from '../../shared/raster/raster-file.ts';

/** All samples of a file by our reader. */
export async function readAll(file: string): Promise<RasterSamples> {
  const raster = await openRaster(await openFile(file));
  const { width, height } = raster.header;
  const samples = await raster.readWindow({ row: 0, column: 0, rows: height, columns: width });
  await raster.close();
  return samples;
}

/** Writes samples as a COG of ours, with overviews. @returns the samples of every level */
export async function writeTestCog(
  file: string,
  grid: GridSpec,
  samples: RasterSamples,
  type: 'int16' | 'uint16' | 'uint8' | 'float32',
  compression: 'deflate' | 'zstd',
  nodata: number | null,
) {
  const { rows, columns, tileSize } = grid;
  const sizes = [{ rows, columns }, ...overviewLevels(rows, columns)];
  const images = [samples];
  for (let level = 1; level < sizes.length; level++) {
    images.push(
      halve(
        images[level - 1],
        sizes[level - 1].rows,
        sizes[level - 1].columns,
        nodata,
        type === 'float32' ? 'nearest' : 'average',
      ),
    );
  }
  const blocks = images.map((image, level) => {
    const made: Uint8Array[] = [];
    const size = sizes[level];
    for (let y = 0; y < size.rows; y += tileSize) {
      for (let x = 0; x < size.columns; x += tileSize) {
        const block = new (image.constructor as new (n: number) => RasterSamples)(tileSize * tileSize).fill(
          nodata ?? 0,
        );
        for (let r = 0; r < Math.min(tileSize, size.rows - y); r++) {
          const from = (y + r) * size.columns + x;
          block.set(image.subarray(from, from + Math.min(tileSize, size.columns - x)) as never, r * tileSize);
        }
        made.push(encodeBlock(block, tileSize, compression));
      }
    }
    return made;
  });
  const levels = sizes.map((size, level) => ({
    width: size.columns,
    height: size.rows,
    blockByteLengths: blocks[level].map(({ length }) => length),
  }));
  const metadata = {
    description: 'a test',
    unit: 'mm',
    scale: 0.01,
    offset: 0,
    statistics: { minimum: -3, maximum: 9, mean: 1.5, standardDeviation: 2, validPercent: 98 },
    items: { note: 'less < more & "quoted"' },
  };
  const parts: Uint8Array[] = [];
  for await (const part of writeCog(
    { levels, blockSize: tileSize, sampleType: type, compression, nodata, grid, metadata },
    (level) => blocks[level],
  ))
    parts.push(part);
  await writeFile(file, Buffer.concat(parts));
  return images;
}
