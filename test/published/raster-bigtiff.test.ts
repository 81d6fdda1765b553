import { open } from 'node:fs/promises';
import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { encodeBlock } from '../../shared/raster/block.ts';
import { writeCog } from '../../shared/raster/cog.ts';
import { openFile } from '../../shared/raster/file-source.ts';
import { openRaster } from '../../shared/raster/raster-file.ts';
import { gdalJson, hasGdal } from '../support/gdal.ts';
import { temporaryFolder } from '../support/run-cli.ts';
import { laeaGrid } from '../unit/raster/array-raster.ts';

const BLOCK = 128;
const BLOCKS_ACROSS = 50;
const SIDE = BLOCK * BLOCKS_ACROSS;
/** Bytes claimed for the blocks that are never looked at: 2500 of them come to 5 GB. */
const CLAIMED = 2_000_000;

/** A block between its length and its last four bytes. */
function framed(block: Uint8Array): Buffer {
  const length = Buffer.alloc(4);
  length.writeUInt32LE(block.length);
  return Buffer.concat([length, block, block.subarray(-4)]);
}

/**
 * A file of 5 GB of which only the header, the overview and two blocks are written: the rest is a hole that takes no
 * disk. Read by GDAL: the BigTIFF layout as it is, beyond the reach of 32-bit offsets.
 */
describe.skipIf(!hasGdal)('a COG of more than 4 GB', () => {
  let file: string;
  let remove: () => Promise<void>;
  const samples = (start: number) => Int16Array.from({ length: BLOCK * BLOCK }, (_, i) => start + (i % 977));

  beforeAll(async () => {
    const [folder, removeFolder] = await temporaryFolder();
    remove = removeFolder;
    file = join(folder, 'big.tif');
    const first = encodeBlock(samples(5), BLOCK, 'deflate');
    const last = encodeBlock(samples(-900), BLOCK, 'deflate');
    const lengths = new Uint32Array(BLOCKS_ACROSS * BLOCKS_ACROSS).fill(CLAIMED);
    lengths[0] = first.length;
    lengths[lengths.length - 1] = last.length;
    const layout = {
      levels: [
        { width: SIDE, height: SIDE, blockByteLengths: lengths },
        { width: BLOCK, height: BLOCK, blockByteLengths: [first.length] },
      ],
      blockSize: BLOCK,
      sampleType: 'int16',
      compression: 'deflate',
      nodata: -32768,
      grid: laeaGrid,
      metadata: { description: 'big', unit: 'mm', scale: 1, offset: 0, items: {} },
    } as const;
    // The header alone is asked for: to stream 5 GB of nothing would take long.
    const header = (await writeCog(layout, () => []).next()).value as Uint8Array;
    const handle = await open(file, 'w');
    await handle.write(header, 0, header.length, 0);
    let at = header.length;
    const put = async (block: Uint8Array) => {
      await handle.write(framed(block), 0, block.length + 8, at);
      at += block.length + 8;
    };
    await put(first);
    await put(first);
    at += (lengths.length - 2) * (CLAIMED + 8);
    await put(last);
    await handle.close();
    expect(at).toBeGreaterThan(4.9e9);
  });
  afterAll(() => remove());

  it('has its first and last block where GDAL looks for them, and its layout is that of a COG', () => {
    const found = gdalJson<{ blocks: number[][]; overview: number[]; layout: string }>(
      `
d = gdal.Open(sys.argv[1]); b = d.GetRasterBand(1)
read = lambda band, x, y: band.ReadAsArray(x, y, 128, 128).ravel().tolist()
print(json.dumps({'blocks': [read(b, 0, 0), read(b, 6400 - 128, 6400 - 128)], 'overview': read(b.GetOverview(0), 0, 0),
  'layout': d.GetMetadataItem('LAYOUT', 'IMAGE_STRUCTURE')}))
`,
      file,
    );
    expect(found.layout).toBe('COG');
    expect(Int16Array.from(found.blocks[0])).toEqual(samples(5));
    expect(Int16Array.from(found.blocks[1])).toEqual(samples(-900));
    expect(Int16Array.from(found.overview)).toEqual(samples(5));
  });

  it('is read by our reader too', async () => {
    const raster = await openRaster(await openFile(file));
    const at = SIDE - BLOCK;
    expect(await raster.readWindow({ row: at, column: at, rows: BLOCK, columns: BLOCK })).toEqual(samples(-900));
    await raster.close();
  });
});
