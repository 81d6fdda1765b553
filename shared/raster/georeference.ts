import type { GeoTIFFImage } from 'geotiff';
import { BasinloomError } from '../contract/errors.ts';
import type { RasterGeoreference } from '../contract/scene.ts';
import type { ByteSource } from './byte-source.ts';
import { type GeoKeys, proj4OfGeoKeys } from './geo-keys.ts';
import { TAG } from './tiff-tags.ts';

/**
 * Where an image lies: corner and pixel size from tie point and scale, or from an unrotated transformation matrix.
 *
 * @throws BasinloomError RASTER_NO_CRS
 */
export async function georeferenceOf(
  source: ByteSource,
  image: GeoTIFFImage,
  width: number,
  height: number,
): Promise<RasterGeoreference> {
  const noCrs = (detail: string) => new BasinloomError('RASTER_NO_CRS', { file: source.name, detail });
  const directory = image.fileDirectory;
  const numbers = async (tag: number) => (await directory.loadValue(tag as never)) as ArrayLike<number> | undefined;
  const scale = await numbers(TAG.modelPixelScale);
  const tie = await numbers(TAG.modelTiepoint);
  const matrix = await numbers(TAG.modelTransformation);
  let placed: { x: number; y: number; pixelWidth: number; pixelHeight: number };
  if (scale && tie) {
    placed = {
      x: tie[3] - tie[0] * scale[0],
      y: tie[4] + tie[1] * scale[1],
      pixelWidth: scale[0],
      pixelHeight: scale[1],
    };
  } else if (matrix) {
    if (matrix[1] !== 0 || matrix[4] !== 0) throw noCrs('the raster is rotated');
    placed = { x: matrix[3], y: matrix[7], pixelWidth: matrix[0], pixelHeight: -matrix[5] };
  } else {
    throw noCrs('it is not georeferenced');
  }
  if (!(placed.pixelWidth > 0 && placed.pixelHeight > 0)) throw noCrs('its rows or columns run the wrong way');
  // Without the directory array the library cannot resolve the keys.
  for (const tag of [TAG.geoKeyDirectory, TAG.geoDoubleParams, TAG.geoAsciiParams]) await numbers(tag);
  const keys = (directory.parseGeoKeyDirectory() ?? {}) as GeoKeys;
  const found = await proj4OfGeoKeys(keys);
  if ('reason' in found) throw noCrs(found.reason);
  // Pixel-is-point: the tie point is the centre of the first pixel.
  const half = keys.GTRasterTypeGeoKey === 2 ? 0.5 : 0;
  return {
    width,
    height,
    originX: placed.x - half * placed.pixelWidth,
    originY: placed.y + half * placed.pixelHeight,
    pixelWidth: placed.pixelWidth,
    pixelHeight: placed.pixelHeight,
    proj4: found.proj4,
  };
}
