import { utimes, writeFile } from 'node:fs/promises';
import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { fingerprintFile } from '../../../shared/raster/raster-fingerprint.ts';
import { temporaryFolder } from '../../support/run-cli.ts';

let folder: string;
let remove: () => Promise<void>;
beforeAll(async () => {
  [folder, remove] = await temporaryFolder();
});
afterAll(() => remove());

/** Always with the same time of change, so that only the bytes can make a difference. */
async function fingerprint(bytes: Uint8Array, seconds = 1e9): Promise<string> {
  const file = join(folder, 'a.tif');
  await writeFile(file, bytes);
  await utimes(file, seconds, seconds);
  return fingerprintFile(file);
}

describe('the fingerprint of a file', () => {
  const bytes = Uint8Array.from({ length: 400_000 }, (_, i) => Math.imul(i, 40503) >>> 5);
  const changed = (at: number) => {
    const copy = Uint8Array.from(bytes);
    copy[at] ^= 1;
    return copy;
  };

  it('is the same for the same file', async () => {
    expect(await fingerprint(bytes)).toBe(await fingerprint(bytes));
    expect(await fingerprint(bytes)).toMatch(/^[0-9a-f]{32}$/);
  });

  it.each([0, 65535, 200_000, 265_535, 399_999])('changes with byte %i', async (at) => {
    expect(await fingerprint(changed(at))).not.toBe(await fingerprint(bytes));
  });

  it('changes with size and with time of change', async () => {
    const known = await fingerprint(bytes);
    expect(await fingerprint(bytes.subarray(0, -1))).not.toBe(known);
    expect(await fingerprint(bytes, 1e9 + 1)).not.toBe(known);
  });

  it('exists for small and empty files', async () => {
    const prints = [
      await fingerprint(new Uint8Array(0)),
      await fingerprint(Uint8Array.of(1)),
      await fingerprint(bytes),
    ];
    expect(new Set(prints).size).toBe(3);
  });

  it('of a file that is not there is an error of the table', async () => {
    await expect(fingerprintFile(join(folder, 'no.tif'))).rejects.toMatchObject({ code: 'RASTER_MISSING' });
    await expect(fingerprintFile(folder)).rejects.toMatchObject({ code: 'RASTER_READ' });
  });
});
