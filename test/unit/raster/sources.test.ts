import { mkdtemp, rm, utimes, writeFile } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { ByteSource } from '../../../shared/raster/byte-source.ts';
import { openFile } from '../../../shared/raster/file-source.ts';
import { memorySource } from '../../../shared/raster/memory-source.ts';
import { openRaster } from '../../../shared/raster/raster-file.ts';
import { fingerprintFile } from '../../../shared/raster/raster-fingerprint.ts';
import { viewSamples } from '../../../shared/raster/sample-type.ts';
import { tinyTiff } from '../scenes/tiny-tiff.ts';

let folder: string;
beforeAll(async () => {
  folder = await mkdtemp(join(tmpdir(), 'basinloom-sources-'));
});
afterAll(() => rm(folder, { recursive: true, force: true }));

const CONTENT = Uint8Array.from({ length: 1000 }, (_, i) => i % 251);
async function fileOf(name: string, content: Uint8Array): Promise<string> {
  const path = join(folder, name);
  await writeFile(path, content);
  return path;
}

describe.each([
  ['a file', async () => openFile(await fileOf('content.bin', CONTENT))],
  ['memory', async () => memorySource(CONTENT)],
] as const)('bytes of %s', (_, make) => {
  it('are given exactly as asked for', async () => {
    const source = await make();
    expect(source.size).toBe(1000);
    expect([...(await source.read(998, 2))]).toEqual([998 % 251, 999 % 251]);
    expect(await source.read(1000, 0)).toHaveLength(0);
    await source.close();
  });

  it('end where they end: RASTER_TRUNCATED, however much is asked for', async () => {
    const source = await make();
    for (const length of [3, 2 ** 40, Number.NaN]) {
      await expect(source.read(998, length)).rejects.toMatchObject({ code: 'RASTER_TRUNCATED' });
    }
    await source.close();
  });

  it('are the reader’s own: changing them changes nothing for the next', async () => {
    const source = await make();
    (await source.read(0, 4)).fill(99);
    expect([...(await source.read(0, 4))]).toEqual([0, 1, 2, 3]);
    await source.close();
  });
});

describe('a file', () => {
  it('that is not there is RASTER_MISSING; a folder is RASTER_READ', async () => {
    await expect(openFile(join(folder, 'none.tif'))).rejects.toMatchObject({ code: 'RASTER_MISSING' });
    const source = await openFile(folder);
    await expect(source.read(0, 1)).rejects.toMatchObject({ code: 'RASTER_READ' });
    await source.close();
  });

  it('whose header is of no use is closed at once', async () => {
    const closed: string[] = [];
    const source: ByteSource = { ...memorySource(CONTENT), close: async () => void closed.push('closed') };
    await expect(openRaster(source)).rejects.toMatchObject({ code: 'RASTER_CORRUPT' });
    expect(closed).toEqual(['closed']);
  });
});

it('samples at an odd place of a Buffer are copied, not misread', () => {
  const bytes = Buffer.from([0, 1, 0, 2, 0, 9]).subarray(1, 5);
  expect([...viewSamples('uint16', bytes)]).toEqual([1, 2]);
});

describe('decoded blocks', () => {
  /** 40 rows, one strip each: what is read says which strips. */
  const raster = async (strips: number[]) => {
    const values = Uint16Array.from({ length: 40 * 8 }, (_, i) => i);
    const bytes = tinyTiff({ width: 8, height: 40, originX: 0, originY: 0, pixel: 30, epsg: 32633, values });
    const source = memorySource(bytes);
    return openRaster({
      ...source,
      read: (offset, length) => {
        if (offset === 8) strips.push(length);
        return source.read(offset, length);
      },
    });
  };

  it('are kept for the next window, also while they are still being read', async () => {
    const strips: number[] = [];
    const file = await raster(strips);
    const window = { row: 3, column: 1, rows: 2, columns: 3 };
    const [one, two] = await Promise.all([file.readWindow(window), file.readWindow(window)]);
    expect([...one]).toEqual([25, 26, 27, 33, 34, 35]);
    expect(two).toEqual(one);
    await file.readWindow({ row: 30, column: 0, rows: 10, columns: 8 });
    expect(strips).toEqual([640]);
  });
});

describe('the fingerprint of a file', () => {
  const big = Uint8Array.from({ length: 400_000 }, (_, i) => (i * 7) % 256);
  const at = new Date('2025-06-12T10:00:00Z');
  const print = async (content: Uint8Array, time = at) => {
    const path = await fileOf('print.bin', content);
    await utimes(path, time, time);
    return fingerprintFile(path);
  };
  const changed = (place: number) => {
    const copy = big.slice();
    copy[place] ^= 1;
    return copy;
  };

  it('is the same for the same bytes and time, wherever they lie', async () => {
    const other = await fileOf('other.bin', big);
    await utimes(other, at, at);
    expect(await print(big)).toBe(await fingerprintFile(other));
    expect(await print(big)).toMatch(/^[0-9a-f]{32}$/);
  });

  it('changes with the size, the time and the first, middle and last bytes', async () => {
    const prints = [
      await print(big),
      await print(big.subarray(0, -1)),
      await print(big, new Date('2025-06-12T10:00:01Z')),
      await print(changed(0)),
      await print(changed(200_000)),
      await print(changed(399_999)),
      await print(new Uint8Array()),
    ];
    expect(new Set(prints).size).toBe(prints.length);
  });

  it('of a file that is not there is RASTER_MISSING', async () => {
    await expect(fingerprintFile(join(folder, 'none.tif'))).rejects.toMatchObject({ code: 'RASTER_MISSING' });
  });
});
