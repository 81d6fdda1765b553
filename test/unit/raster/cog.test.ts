import { GeoTIFF } from 'geotiff';
import { describe, expect, it } from 'vitest';
import { encodeBlock } from '../../../shared/raster/block.ts';
import { type CogLayout, writeCog } from '../../../shared/raster/cog.ts';
import { memorySource } from '../../../shared/raster/memory-source.ts';
import { openRaster } from '../../../shared/raster/raster-file.ts';
import { decodeBlock } from '../../support/decode-block.ts';
import { laeaGrid } from './array-raster.ts';

const SIZE = 128;
const block = (start: number) => Int16Array.from({ length: SIZE * SIZE }, (_, i) => start + (i % 300));
/** Blocks of each level, row by row; level 0 is 2 blocks high and 3 across. */
const BLOCKS = [
  [0, 1, 2, 3, 4, 5].map((k) => encodeBlock(block(k * 1000), SIZE, 'deflate')),
  [encodeBlock(block(-4000), SIZE, 'deflate'), encodeBlock(block(-6000), SIZE, 'deflate')],
];
const LAYOUT: CogLayout = {
  levels: [
    { width: 300, height: 200, blockByteLengths: BLOCKS[0].map(({ length }) => length) },
    { width: 150, height: 100, blockByteLengths: BLOCKS[1].map(({ length }) => length) },
  ],
  blockSize: SIZE,
  sampleType: 'int16',
  compression: 'deflate',
  nodata: -32768,
  grid: laeaGrid,
  metadata: { description: 'ET', unit: 'mm', scale: 0.01, offset: 2, items: { note: 'a < b & "c"' } },
};

async function collect(layout: CogLayout, blocks = (level: number): Iterable<Uint8Array> => BLOCKS[level]) {
  const parts: Uint8Array[] = [];
  for await (const part of writeCog(layout, blocks)) parts.push(part);
  return parts;
}

describe('a COG', () => {
  it('is the same bytes every time', async () => {
    expect(Buffer.concat(await collect(LAYOUT))).toEqual(Buffer.concat(await collect(LAYOUT)));
  });

  it('puts the smallest level first, and each block between its length and its last four bytes', async () => {
    const [, ...parts] = await collect(LAYOUT);
    expect(parts).toHaveLength(8);
    const inOrder = [...BLOCKS[1], ...BLOCKS[0]];
    parts.forEach((part, k) => {
      const framed = Buffer.from(part);
      expect(framed.readUInt32LE(0)).toBe(inOrder[k].length);
      expect(framed.subarray(4, -4).equals(inOrder[k])).toBe(true);
      expect(framed.subarray(-4).equals(framed.subarray(-8, -4))).toBe(true);
    });
  });

  it('points its directories at the blocks, all behind the header', async () => {
    const parts = await collect(LAYOUT);
    const bytes = Buffer.concat(parts);
    const tiff = await GeoTIFF.fromSource({
      fileSize: bytes.length,
      fetch: async (wanted: readonly { offset: number; length: number }[]) =>
        wanted.map(({ offset, length }) => new Uint8Array(bytes.subarray(offset, offset + length)).buffer),
      close: async () => {},
    } as never);
    expect(await tiff.getImageCount()).toBe(2);
    for (const level of [0, 1]) {
      const { fileDirectory } = await tiff.getImage(level);
      const offsets = (await fileDirectory.loadValue('TileOffsets')) as ArrayLike<number>;
      BLOCKS[level].forEach((wanted, k) => {
        expect(offsets[k]).toBeGreaterThanOrEqual(parts[0].length);
        expect(bytes.subarray(offsets[k], offsets[k] + wanted.length).equals(wanted)).toBe(true);
      });
    }
  });

  it('gives its pixels, place, scale and nodata back to the reader', async () => {
    const raster = await openRaster(memorySource(Buffer.concat(await collect(LAYOUT))));
    const { originX, originY, resolution, crs } = laeaGrid;
    expect(raster.header).toMatchObject({
      width: 300,
      height: 200,
      nodata: -32768,
      scale: 0.01,
      offset: 2,
      predictor: 2,
    });
    expect(raster.header.georeference).toMatchObject({
      originX,
      originY,
      pixelWidth: resolution,
      pixelHeight: resolution,
    });
    expect(raster.header.georeference.proj4.split(' ').sort()).toEqual(crs.proj4.split(' ').sort());
    const corner = await raster.readWindow({ row: 127, column: 127, rows: 2, columns: 2 });
    const decoded = BLOCKS[0].map((bytes) => decodeBlock(bytes, 'int16', SIZE, 'deflate'));
    const last = SIZE * SIZE - 1;
    expect([...corner]).toEqual([decoded[0][last], decoded[1][last - SIZE + 1], decoded[3][SIZE - 1], decoded[4][0]]);
  });

  it('has nothing in it that depends on when it is made', async () => {
    const text = Buffer.concat(await collect(LAYOUT)).toString('latin1');
    expect(text).not.toMatch(/\b20\d\d[:-]\d\d[:-]\d\d/);
  });

  it('is a BigTIFF where 32-bit offsets would not reach', async () => {
    const big = { ...LAYOUT, levels: [{ width: 300, height: 200, blockByteLengths: new Array(6).fill(700_000_000) }] };
    const { value } = await writeCog(big, () => []).next();
    expect(Buffer.from(value as Uint8Array).readUInt16LE(2)).toBe(43);
    const [header] = await collect(LAYOUT);
    expect(Buffer.from(header).readUInt16LE(2)).toBe(42);
  });

  it('is refused when a block is not as long as was said, or blocks are missing', async () => {
    await expect(collect(LAYOUT, (level) => BLOCKS[level].slice(1))).rejects.toThrow();
    await expect(collect(LAYOUT, (level) => BLOCKS[level].slice(0, 1))).rejects.toThrow('1 blocks instead of 2');
  });
});
