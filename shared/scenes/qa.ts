import { DAY_QUALITY } from '../contract/quality.ts';
import type { AlbedoModel, BandRole } from '../contract/scene.ts';

/** Roles whose saturation spoils a pixel: all surface bands. */
export type SurfaceRole = Exclude<BandRole, 'qa-pixel' | 'qa-radsat'>;

export const SURFACE_ROLES: readonly SurfaceRole[] = [
  'blue',
  'green',
  'red',
  'nir',
  'swir1',
  'swir2',
  'surface-temperature',
];

/** What bits 0-5 and 7 of QA_PIXEL say (USGS LSDS-1619 for OLI/TIRS, LSDS-1618 for TM and ETM+). */
const QA_PIXEL_BITS: readonly { readonly bit: number; readonly quality: number; readonly only?: AlbedoModel }[] = [
  { bit: 0, quality: DAY_QUALITY.fill },
  { bit: 1, quality: DAY_QUALITY.cloud }, // dilated cloud; set together with bit 6 "clear" over land
  { bit: 2, quality: DAY_QUALITY.cloud, only: 'oli' }, // cirrus; unused on TM and ETM+
  { bit: 3, quality: DAY_QUALITY.cloud },
  { bit: 4, quality: DAY_QUALITY.cloudShadow },
  { bit: 5, quality: DAY_QUALITY.snow },
  { bit: 7, quality: DAY_QUALITY.water },
];

/**
 * Bit of QA_RADSAT for each band (same sources). TIRS has none. ETM+ has two bits for band 6; bit 8, the high gain, is
 * passed over: it saturates near 320 K, where the low gain still measures.
 */
const SATURATION_BIT: Readonly<Record<AlbedoModel, Partial<Record<SurfaceRole, number>>>> = {
  tm: { blue: 0, green: 1, red: 2, nir: 3, swir1: 4, 'surface-temperature': 5, swir2: 6 },
  oli: { blue: 1, green: 2, red: 3, nir: 4, swir1: 5, swir2: 6 },
};

/** TM and ETM+: the detector gave nothing; like a gap of the sensor. */
const DROPPED_PIXEL_BIT = 9;
/** OLI: terrain hides the pixel from the sensor. */
const TERRAIN_OCCLUSION_BIT = 11;

/**
 * Day quality bits of a pixel's QA_PIXEL and QA_RADSAT values. Bit 6 ("clear") and the confidences are not used: the
 * flags 0-5 already are their outcome, and dilated cloud carries bit 6 too.
 *
 * @param used bands whose saturation counts
 */
export function qualityFromQa(
  qaPixel: number,
  qaRadsat: number,
  model: AlbedoModel,
  used: readonly SurfaceRole[] = SURFACE_ROLES,
): number {
  return qualityOfPixelFlags(qaPixel, model) | qualityOfSaturation(qaRadsat, model, used);
}

function qualityOfPixelFlags(value: number, model: AlbedoModel): number {
  return QA_PIXEL_BITS.filter(({ bit, only }) => (value >> bit) & 1 && (only ?? model) === model).reduce(
    (bits, { quality }) => bits | quality,
    0,
  );
}

function qualityOfSaturation(value: number, model: AlbedoModel, used: readonly SurfaceRole[]): number {
  const isSet = (bit: number | undefined) => bit !== undefined && ((value >> bit) & 1) === 1;
  let quality = used.some((role) => isSet(SATURATION_BIT[model][role])) ? DAY_QUALITY.saturated : 0;
  if (model === 'oli' && isSet(TERRAIN_OCCLUSION_BIT)) quality |= DAY_QUALITY.saturated;
  if (model === 'tm' && isSet(DROPPED_PIXEL_BIT)) quality |= DAY_QUALITY.fill;
  return quality;
}

/** Day quality bits by the 16-bit value of each flag band; a pixel has those of both. */
export interface QaTables {
  readonly pixel: Uint16Array;
  readonly radsat: Uint16Array;
}

const VALUES = 1 << 16;
const tables = new Map<AlbedoModel, QaTables>();

/** `qualityFromQa` of all surface bands as tables. Made once for each model. */
export function qaTables(model: AlbedoModel): QaTables {
  const known = tables.get(model);
  if (known) return known;
  const made: QaTables = {
    pixel: Uint16Array.from({ length: VALUES }, (_, value) => qualityOfPixelFlags(value, model)),
    radsat: Uint16Array.from({ length: VALUES }, (_, value) => qualityOfSaturation(value, model, SURFACE_ROLES)),
  };
  tables.set(model, made);
  return made;
}
