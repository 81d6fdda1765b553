import { writeFile } from 'node:fs/promises';
import { join } from 'node:path';
import { deflateSync, zstdCompressSync } from 'node:zlib';
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { BasinloomError } from '../../../shared/contract/errors.ts';
import { openFile } from '../../../shared/raster/file-source.ts';
import { ascii, doubles, shorts } from '../../../shared/raster/ifd-writer.ts';
import { memorySource } from '../../../shared/raster/memory-source.ts';
import { openRaster } from '../../../shared/raster/raster-file.ts';
import type { RasterSamples } from '../../../shared/raster/sample-type.ts';
import { temporaryFolder } from '../../support/run-cli.ts';
import { encodeLzw, packBits, type TestTiff, testTiff } from './tiff-writer.ts';

const width = 13;
const samples = Uint16Array.from({ length: width * 11 }, (_, i) => Math.imul(i, 40503) >>> 3);
const plain: TestTiff = { samples, type: 'uint16', width };
const ways: Record<string, Partial<TestTiff>> = {
  none: { compression: 1 },
  lzw: { compression: 5, encode: encodeLzw },
  deflate: { compression: 8, encode: (block) => deflateSync(block) },
  'old deflate': { compression: 32946, encode: (block) => deflateSync(block) },
  packbits: { compression: 32773, encode: packBits },
  zstd: { compression: 50000, encode: (block) => zstdCompressSync(block) },
};

const open = (tiff: Uint8Array) => openRaster(memorySource(tiff, 'a.tif'));
async function readAll(tiff: Uint8Array): Promise<RasterSamples> {
  const raster = await open(tiff);
  const { width: columns, height: rows } = raster.header;
  return raster.readWindow({ row: 0, column: 0, rows, columns });
}
const failing = (code: string, detail: RegExp | string = /./) =>
  expect.objectContaining({ code: expect.stringMatching(`^${code}$`), message: expect.stringMatching(detail) });

describe('a raster', () => {
  it.each(Object.entries(ways))('of strips is read in full: %s', async (_, way) => {
    for (const rowsPerStrip of [1, 4, 11]) {
      expect(await readAll(testTiff({ ...plain, ...way, rowsPerStrip }))).toEqual(samples);
    }
  });

  it('is read by windows that equal the crop of the whole', async () => {
    const raster = await open(testTiff({ ...plain, ...ways.deflate, rowsPerStrip: 3 }));
    await fc.assert(
      fc.asyncProperty(fc.nat(10), fc.nat(12), fc.nat(10), fc.nat(12), async (row, column, more, wider) => {
        const rows = Math.min(more + 1, 11 - row);
        const columns = Math.min(wider + 1, width - column);
        const part = await raster.readWindow({ row, column, rows, columns });
        for (let r = 0; r < rows; r++) {
          const from = (row + r) * width + column;
          expect(part.subarray(r * columns, (r + 1) * columns)).toEqual(samples.subarray(from, from + columns));
        }
      }),
      { seed: 13, numRuns: 200 },
    );
  });

  it('is not read outside', async () => {
    const raster = await open(testTiff(plain));
    for (const window of [
      { row: -1, column: 0, rows: 2, columns: 2 },
      { row: 0, column: 12, rows: 1, columns: 2 },
      { row: 10, column: 0, rows: 2, columns: 1 },
    ]) {
      await expect(raster.readWindow(window)).rejects.toThrow(RangeError);
    }
  });

  it('says where it lies', async () => {
    const { header } = await open(testTiff(plain));
    expect(header.georeference).toMatchObject({
      width: 13,
      height: 11,
      originX: 500000,
      originY: 4600000,
      pixelWidth: 30,
      pixelHeight: 30,
      proj4: expect.stringContaining('+proj=utm +zone=33'),
    });
  });

  it('with pixel-is-point keys begins half a pixel further up and left', async () => {
    const keys = [1, 1, 0, 3, 1024, 0, 1, 1, 1025, 0, 1, 2, 3072, 0, 1, 32633];
    const { header } = await open(testTiff({ ...plain, tags: [shorts(34735, keys)] }));
    expect(header.georeference).toMatchObject({ originX: 499985, originY: 4600015 });
  });

  it('with a tie point elsewhere than in the corner is placed from there', async () => {
    const tie = doubles(33922, [2, 3, 0, 500060, 4599910, 0]);
    const { header } = await open(testTiff({ ...plain, tags: [tie] }));
    expect(header.georeference).toMatchObject({ originX: 500000, originY: 4600000 });
  });

  it('decodes a block once for readers at the same time, and gives copies', async () => {
    const tiff = testTiff({ ...plain, ...ways.zstd });
    const raster = await open(tiff);
    const window = { row: 0, column: 0, rows: 11, columns: width };
    const [first, second] = await Promise.all([raster.readWindow(window), raster.readWindow(window)]);
    expect(first).toEqual(second);
    // Windows are copies: changing one must not change what is kept.
    first.fill(1);
    expect(await raster.readWindow(window)).toEqual(samples);
  });
});

describe('nodata, scale and offset', () => {
  it.each([
    ['0', 'uint16', 0],
    ['65535', 'uint16', 65535],
    [' -9999 ', 'float32', -9999],
    ['nan', 'float32', Number.NaN],
    ['-3.40282346638529e+38', 'float32', -3.4028234663852886e38],
    ['0.1', 'float32', Math.fround(0.1)],
    ['0.1', 'float64', 0.1],
    ['-inf', 'float64', Number.NEGATIVE_INFINITY],
    ['-9999', 'uint16', null],
    ['none', 'uint16', null],
    ['', 'uint16', null],
  ] as const)('nodata "%s" of %s is %s', async (nodata, type, expected) => {
    const arrays = { uint16: Uint16Array, float32: Float32Array, float64: Float64Array };
    const { header } = await open(testTiff({ samples: new arrays[type](4), type, width: 2, nodata }));
    expect(header.nodata).toBe(expected);
  });

  it('without the tag there is none', async () => {
    expect((await open(testTiff(plain))).header).toMatchObject({ nodata: null, scale: 1, offset: 0 });
  });

  it('scale and offset of the first band are taken from the metadata', async () => {
    const metadata =
      '<GDALMetadata><Item name="SCALE" sample="1" role="scale">7</Item>' +
      '<Item name="OFFSET" sample="0" role="offset">-0.2</Item>' +
      '<Item name="SCALE" sample="0" role="scale">2.75e-05</Item></GDALMetadata>';
    expect((await open(testTiff({ ...plain, metadata }))).header).toMatchObject({ scale: 2.75e-5, offset: -0.2 });
  });

  it('strips left out of the file are nodata', async () => {
    const tiff = testTiff({ ...plain, rowsPerStrip: 4, sparse: [1], nodata: '7' });
    const whole = await readAll(tiff);
    expect(new Set(whole.subarray(4 * width, 8 * width))).toEqual(new Set([7]));
    expect(whole.subarray(8 * width)).toEqual(samples.subarray(8 * width));
  });
});

describe('a raster that cannot be used', () => {
  it('is missing', async () => {
    const [folder, remove] = await temporaryFolder();
    try {
      await expect(openFile(join(folder, 'no.tif'))).rejects.toThrow(failing('RASTER_MISSING', 'no.tif'));
      await writeFile(join(folder, 'is.tif'), testTiff(plain));
      const raster = await openRaster(await openFile(join(folder, 'is.tif')));
      expect(await raster.readWindow({ row: 0, column: 0, rows: 11, columns: width })).toEqual(samples);
      await raster.close();
    } finally {
      await remove();
    }
  });

  it('is cut within its blocks: the block is named', async () => {
    const tiff = testTiff({ ...plain, ...ways.deflate, rowsPerStrip: 4 });
    await expect(readAll(tiff.subarray(0, -5))).rejects.toThrow(failing('RASTER_TRUNCATED', 'a.tif: block 2'));
  });

  it.each(Object.entries(ways))('has blocks that hold too little: %s', async (_, way) => {
    const encode = way.encode ?? ((block) => block);
    const short = testTiff({ ...plain, ...way, encode: (block) => encode(block.subarray(0, block.length - 8)) });
    await expect(readAll(short)).rejects.toThrow(failing('RASTER_CORRUPT', 'a.tif: block 0'));
  });

  it.each(['deflate', 'zstd'])('has a damaged block: %s', async (name) => {
    const spoil = (block: Uint8Array) => {
      const coded = Uint8Array.from(ways[name].encode?.(block) ?? block);
      // The last strip has three rows and not four.
      return block.length === 3 * width * 2 ? coded.fill(0xff, 0, 8) : coded;
    };
    const damaged = testTiff({ ...plain, ...ways[name], encode: spoil, rowsPerStrip: 4 });
    await expect(readAll(damaged)).rejects.toThrow(failing('RASTER_CORRUPT', 'a.tif: block 2'));
    // The blocks before it can still be read.
    const raster = await open(damaged);
    const sound = await raster.readWindow({ row: 0, column: 0, rows: 8, columns: width });
    expect(sound).toEqual(samples.subarray(0, 8 * width));
  });

  it('is no TIFF', async () => {
    await expect(open(Buffer.from('P5 12 12 255 and more words'))).rejects.toThrow(failing('RASTER_CORRUPT', 'header'));
    await expect(open(new Uint8Array(0))).rejects.toThrow(failing('RASTER_(CORRUPT|TRUNCATED)'));
    await expect(open(testTiff(plain).subarray(0, 60))).rejects.toThrow(failing('RASTER_(CORRUPT|TRUNCATED)'));
  });

  it.each([
    ['JPEG', [shorts(259, [7])], /compression 7/],
    ['1 bit', [shorts(258, [1])], /samples of 1 bits/],
    ['complex', [shorts(339, [5])], /samples of 16 bits/],
    ['predictor 4', [shorts(317, [4])], /predictor 4/],
  ] as const)('is of a kind that is not supported: %s', async (_, tags, detail) => {
    await expect(open(testTiff({ ...plain, tags }))).rejects.toThrow(failing('RASTER_UNSUPPORTED', detail));
  });

  it.each([
    ['no place', { place: false }, /not georeferenced/],
    ['no keys', { epsg: null }, /GeoKeys/],
    ['an unknown code', { epsg: 9 }, /EPSG:9 /],
    ['a turned matrix', { place: false, tags: [doubles(34264, [30, 1, 0, 5, 1, -30, 0, 5])] }, /rotated/],
    ['rows that go up', { tags: [doubles(33550, [30, -30, 0])] }, /wrong way/],
  ] as const)('has no place on earth: %s', async (_, changes, detail) => {
    await expect(open(testTiff({ ...plain, ...changes }))).rejects.toThrow(failing('RASTER_NO_CRS', detail));
  });

  it('with any bytes changed gives pixels or an error of the table, nothing else', async () => {
    const tiff = testTiff({ ...plain, ...ways.lzw, rowsPerStrip: 4, nodata: '0', tags: [ascii(42112, '<G/>')] });
    const seen = new Set<string>();
    await fc.assert(
      fc.asyncProperty(
        fc.array(fc.tuple(fc.nat(tiff.length - 1), fc.nat(255)), { minLength: 1, maxLength: 4 }),
        async (changes) => {
          const damaged = Uint8Array.from(tiff);
          for (const [at, value] of changes) damaged[at] = value;
          try {
            const raster = await open(damaged);
            const { width: w, height: h } = raster.header;
            await raster.readWindow({ row: 0, column: 0, rows: Math.min(11, h), columns: Math.min(width, w) });
          } catch (error) {
            if (!(error instanceof BasinloomError)) throw error;
            seen.add(error.code);
          }
        },
      ),
      { seed: 14, numRuns: 1500 },
    );
    expect([...seen].sort()).toEqual(['RASTER_CORRUPT', 'RASTER_NO_CRS', 'RASTER_TRUNCATED', 'RASTER_UNSUPPORTED']);
  });
});
