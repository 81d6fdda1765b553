import { readFile } from 'node:fs/promises';
import { describe, expect, it } from 'vitest';
import { DAY_QUALITY } from '../../shared/contract/quality.ts';
import { memorySource } from '../../shared/raster/memory-source.ts';
import { openRaster } from '../../shared/raster/raster-file.ts';
import { readScene } from '../../shared/scenes/landsat-level-2/scene.ts';
import type { SurfaceRole } from '../../shared/scenes/qa.ts';
import { SURFACE_ROLES } from '../../shared/scenes/qa.ts';
import { type OpenBand, readSurface } from '../../shared/scenes/read-surface.ts';
import { markInvalid } from '../../shared/scenes/valid-input.ts';
import { clearDn, temporaryFolders, writeScene } from '../unit/scenes/scene-fixture.ts';

/*
 * Scaling of Landsat Collection 2 Level-2 science products: surface reflectance DN * 2.75e-5 - 0.2, surface
 * temperature DN * 0.00341802 + 149.0 K, fill 0, valid reflectance 7273..43636 (USGS LSDS-1618 and LSDS-1619,
 * Collection 2 Level 2 Science Product Guides; from memory). Expected values are those formulas by hand.
 */
const folder = temporaryFolders();

/** One pixel with the given DN in one band, read through the whole chain. */
async function readOne(band: string, value: number) {
  const dn = (name: string, row: number, column: number) => (name === band ? value : clearDn(name, row, column));
  const scene = await readScene(await writeScene(await folder(), { dn }));
  const { originX, originY, proj4 } = scene.georeference;
  const grid = {
    crs: { code: 'EPSG:32632', proj4, kind: 'epsg', epsg: 32632 } as const,
    ...{ originX, originY, resolution: 30, rows: 48, columns: 48, tileSize: 128 },
  };
  const window = { row: 20, column: 20, rows: 1, columns: 1 };
  const weights = { blue: 1, green: 0, red: 0, nir: 0, swir1: 0, swir2: 0 };
  const read: OpenBand = async ({ file }) => openRaster(memorySource(await readFile(file)));
  const planes = await readSurface(scene, grid, window, read, weights);
  if (!planes) throw new Error('the scene was not found');
  const { red, albedo, lst, quality } = planes;
  return { red: red[0], blue: albedo[0], lst: lst[0], quality: quality[0] };
}

describe('surface reflectance (USGS LSDS-1618, LSDS-1619)', () => {
  it.each([
    [7273, 0.0000075],
    [18182, 0.300005],
    [43636, 0.99999],
  ])('L1-L3: DN %i is %f', async (dn, expected) => {
    expect((await readOne('SR_B4', dn)).red).toBeCloseTo(expected, 7);
    expect((await readOne('SR_B2', dn)).blue).toBeCloseTo(expected, 7);
  });
});

describe('surface temperature (USGS LSDS-1618, LSDS-1619)', () => {
  it.each([
    [44177, 299.99787],
    [44178, 300.00129],
    [36270, 272.97159],
  ])('L4, L5: DN %i is %f K', async (dn, expected) => {
    expect((await readOne('ST_B10', dn)).lst).toBeCloseTo(expected, 4);
  });

  it('L6: DN 65535 is 372.99994 K, beyond any land surface: not used', async () => {
    expect(65535 * 0.00341802 + 149).toBeCloseTo(372.99994, 5);
    expect(await readOne('ST_B10', 65535)).toMatchObject({ lst: Number.NaN, quality: DAY_QUALITY.invalidInput });
  });
});

describe('fill (USGS LSDS-1618, LSDS-1619)', () => {
  it.each(['SR_B2', 'SR_B4', 'SR_B7', 'ST_B10'])('L7: DN 0 of %s is no data, never -0.2 or 149 K', async (band) => {
    const nothing = { red: Number.NaN, blue: Number.NaN, lst: Number.NaN, quality: DAY_QUALITY.fill };
    expect(await readOne(band, 0)).toEqual(nothing);
  });

  it('the whole valid range of reflectance is accepted', () => {
    const bands = Object.fromEntries(
      SURFACE_ROLES.map((role) => {
        const isThermal = role === 'surface-temperature';
        const [scale, offset] = isThermal ? [0.00341802, 149] : [2.75e-5, -0.2];
        return [role, { file: role, scale, offset, fill: 0, fingerprint: '' }];
      }),
    ) as Record<SurfaceRole, { file: string; scale: number; offset: number; fill: number; fingerprint: string }>;
    const range = Uint16Array.from({ length: 43636 - 7273 + 1 }, (_, i) => 7273 + i);
    const stored = Object.fromEntries(
      SURFACE_ROLES.map((role) => [role, role === 'surface-temperature' ? range.map(() => 44177) : range]),
    ) as Record<SurfaceRole, Uint16Array>;
    const flags = new Uint16Array(range.length);
    markInvalid(stored, bands, flags);
    expect(flags.every((bits) => bits === 0)).toBe(true);
  });
});
