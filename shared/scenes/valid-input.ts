import { DAY_QUALITY, DAY_UNUSABLE } from '../contract/quality.ts';
import type { BandFile } from '../contract/scene.ts';
import type { RasterSamples } from '../raster/raster-file.ts';
import { SURFACE_ROLES, type SurfaceRole } from './qa.ts';

/**
 * Surface reflectance is valid from 0 to 1 (USGS LSDS-1618, LSDS-1619); atmospheric correction misses dark and bright
 * ground by a few hundredths, so that much is let pass (common practice, no source).
 */
const REFLECTANCE_RANGE: Range = [-0.05, 1.05];
/** Land surface under a clear sky, K: as the bounds of the product surface-temperature. */
const TEMPERATURE_RANGE: Range = [230, 345];

type Range = readonly [minimum: number, maximum: number];

/**
 * Adds to the source flags: `fill` where a band has no data, `invalidInput` where a value lies outside its physical
 * range. Red below 0, or red and near infrared that cancel out, have no vegetation index and are invalid too.
 *
 * @param flags day quality bits of the source pixels; pixels that are unusable already keep theirs
 */
export function markInvalid(
  stored: Readonly<Record<SurfaceRole, RasterSamples>>,
  bands: Readonly<Record<SurfaceRole, BandFile>>,
  flags: Uint16Array,
): void {
  const found = new Uint16Array(flags.length);
  for (const role of SURFACE_ROLES) {
    const range = role === 'surface-temperature' ? TEMPERATURE_RANGE : REFLECTANCE_RANGE;
    markBand(stored[role], bands[role], range, found);
  }
  markNoIndex(stored, bands, found);
  for (let i = 0; i < flags.length; i++) if ((flags[i] & DAY_UNUSABLE) === 0) flags[i] |= found[i];
}

function markBand(stored: RasterSamples, band: BandFile, [minimum, maximum]: Range, found: Uint16Array): void {
  const { scale, offset, fill } = band;
  for (let i = 0; i < found.length; i++) {
    const value = stored[i] * scale + offset;
    if (stored[i] === fill) found[i] |= DAY_QUALITY.fill;
    else if (value < minimum || value > maximum) found[i] |= DAY_QUALITY.invalidInput;
  }
}

function markNoIndex(
  stored: Readonly<Record<SurfaceRole, RasterSamples>>,
  bands: Readonly<Record<SurfaceRole, BandFile>>,
  found: Uint16Array,
): void {
  const [red, nir] = [bands.red, bands.nir];
  for (let i = 0; i < found.length; i++) {
    if (found[i] & DAY_QUALITY.fill) continue;
    const redValue = stored.red[i] * red.scale + red.offset;
    const nirValue = stored.nir[i] * nir.scale + nir.offset;
    if (redValue < 0 || redValue + nirValue <= 0) found[i] |= DAY_QUALITY.invalidInput;
  }
}
