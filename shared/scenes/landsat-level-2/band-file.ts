import { basename } from 'node:path';
import { BasinloomError } from '../../contract/errors.ts';
import type { BandRole, RasterGeoreference } from '../../contract/scene.ts';
import { openFile } from '../../raster/file-source.ts';
import { openRaster } from '../../raster/raster-file.ts';
import { fingerprintFile } from '../../raster/raster-fingerprint.ts';

export interface InspectedBand {
  readonly fingerprint: string;
  readonly georeference: RasterGeoreference;
}

/**
 * Reads the header of a band file.
 *
 * @throws BasinloomError SCENE_BAND_MISSING; RASTER_CORRUPT, RASTER_TRUNCATED, RASTER_UNSUPPORTED, RASTER_NO_CRS,
 *   RASTER_READ
 */
export async function inspectBand(file: string, role: BandRole, scene: string): Promise<InspectedBand> {
  const source = await openFile(file).catch((error: unknown) => {
    const isMissing = error instanceof BasinloomError && error.code === 'RASTER_MISSING';
    throw isMissing ? new BasinloomError('SCENE_BAND_MISSING', { file, role, scene }, { cause: error }) : error;
  });
  try {
    const { header } = await openRaster(source);
    // The scaling of the metadata belongs to the delivered numbers; a file of rescaled values would go wrong unseen.
    if (header.sampleType.startsWith('float')) {
      const detail = `its samples are ${header.sampleType}, a scene's are whole numbers, as delivered`;
      throw new BasinloomError('RASTER_UNSUPPORTED', { file, detail });
    }
    return { fingerprint: await fingerprintFile(file), georeference: header.georeference };
  } finally {
    await source.close();
  }
}

/** Part of a pixel by which the grids of two bands may differ: rounding of the header, no more. */
const TOLERANCE_PIXELS = 1e-6;

/** @throws BasinloomError SCENE_GRID_MISMATCH when a band does not lie on the grid of the scene's first band */
export function requireSameGrid(
  scene: string,
  expected: RasterGeoreference,
  file: string,
  found: RasterGeoreference,
): void {
  const difference = gridDifference(expected, found);
  if (!difference) return;
  throw new BasinloomError('SCENE_GRID_MISMATCH', { file, scene, detail: `${basename(file)} has ${difference}` });
}

function gridDifference(expected: RasterGeoreference, found: RasterGeoreference): string | undefined {
  const size = ({ width, height }: RasterGeoreference) => `${width} x ${height} pixels`;
  if (size(found) !== size(expected)) return `${size(found)} instead of ${size(expected)}`;
  if (found.proj4 !== expected.proj4) return `the projection ${found.proj4} instead of ${expected.proj4}`;
  for (const key of ['pixelWidth', 'pixelHeight', 'originX', 'originY'] as const) {
    const tolerance = TOLERANCE_PIXELS * expected.pixelWidth;
    if (Math.abs(found[key] - expected[key]) > tolerance) return `${key} ${found[key]} instead of ${expected[key]}`;
  }
  return undefined;
}
