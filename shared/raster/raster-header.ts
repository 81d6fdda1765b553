import { GeoTIFF, type GeoTIFFImage } from 'geotiff';
import { BasinloomError } from '../contract/errors.ts';
import type { RasterGeoreference } from '../contract/scene.ts';
import type { ByteSource } from './byte-source.ts';
import { nodataOf, scaling } from './gdal-tags.ts';
import { georeferenceOf } from './georeference.ts';
import { type SampleType, sampleTypeOf } from './sample-type.ts';
import { COMPRESSION, TAG } from './tiff-tags.ts';

export interface RasterHeader {
  readonly width: number;
  readonly height: number;
  readonly sampleType: SampleType;
  /** A number of the file, 0 included; null when the file names none, or one that its samples cannot hold. */
  readonly nodata: number | null;
  /** Physical value = stored value * scale + offset. */
  readonly scale: number;
  readonly offset: number;
  readonly georeference: RasterGeoreference;
  readonly blockWidth: number;
  readonly blockHeight: number;
  /** TIFF compression code. */
  readonly compression: number;
  readonly predictor: number;
}

/** How the blocks of a raster lie in its file. */
export interface BlockLayout {
  readonly header: RasterHeader;
  readonly littleEndian: boolean;
  /** Samples of one pixel that lie together in a block (1 when each band has its own). */
  readonly interleaved: number;
  readonly blocksAcross: number;
  readonly offsets: ArrayLike<number>;
  readonly lengths: ArrayLike<number>;
}

const KNOWN: ReadonlySet<number> = new Set(Object.values(COMPRESSION));

/**
 * Reads the header of a TIFF's first image.
 *
 * @throws BasinloomError RASTER_CORRUPT, RASTER_TRUNCATED, RASTER_READ, RASTER_UNSUPPORTED, RASTER_NO_CRS
 */
export async function readLayout(source: ByteSource): Promise<BlockLayout> {
  try {
    return await layoutOf(source);
  } catch (error) {
    // What the library throws of a header that it cannot follow is of any kind.
    if (error instanceof BasinloomError) throw error;
    throw corrupt(source, `not a readable TIFF header: ${(error as Error).message}`, error);
  }
}

async function layoutOf(source: ByteSource): Promise<BlockLayout> {
  const { image, littleEndian } = await parse(source);
  const directory = image.fileDirectory;
  const value = async (tag: number): Promise<unknown> => directory.loadValue(tag as never);
  const number = async (tag: number, fallback: number): Promise<number> => firstNumber(await value(tag)) ?? fallback;

  const width = await number(TAG.imageWidth, 0);
  const height = await number(TAG.imageLength, 0);
  const bits = await number(TAG.bitsPerSample, 1);
  const format = await number(TAG.sampleFormat, 1);
  const sampleType = sampleTypeOf(bits, format);
  if (!sampleType) throw unsupported(source, `samples of ${bits} bits in format ${format}`);
  const compression = await number(TAG.compression, COMPRESSION.none);
  if (!KNOWN.has(compression)) throw unsupported(source, `compression ${compression}`);
  const predictor = await number(TAG.predictor, 1);
  if (predictor > 3) throw unsupported(source, `predictor ${predictor}`);
  const tiled = directory.hasTag(TAG.tileOffsets as never);
  const blockWidth = tiled ? await number(TAG.tileWidth, width) : width;
  const blockHeight = tiled
    ? await number(TAG.tileLength, height)
    : Math.min(height, await number(TAG.rowsPerStrip, height));
  const samples = await number(TAG.samplesPerPixel, 1);
  const chunky = (await number(TAG.planarConfiguration, 1)) === 1;
  const [scale, offset] = scaling(await value(TAG.gdalMetadata));
  const offsets = (await value(tiled ? TAG.tileOffsets : TAG.stripOffsets)) as ArrayLike<number> | undefined;
  const lengths = (await value(tiled ? TAG.tileByteCounts : TAG.stripByteCounts)) as ArrayLike<number> | undefined;
  const blocksAcross = Math.ceil(width / blockWidth);
  const blocks = blocksAcross * Math.ceil(height / blockHeight);
  if (!(blocks > 0))
    throw corrupt(source, `an image of ${width} x ${height} in blocks of ${blockWidth} x ${blockHeight}`);
  if (!offsets || !lengths || offsets.length < blocks || lengths.length < blocks) {
    throw corrupt(source, `the places of its ${blocks} blocks are not all given`);
  }
  return {
    header: {
      width,
      height,
      sampleType,
      nodata: nodataOf(await value(TAG.gdalNodata), sampleType),
      scale,
      offset,
      georeference: await georeferenceOf(source, image, width, height),
      blockWidth,
      blockHeight,
      compression,
      predictor,
    },
    littleEndian,
    interleaved: chunky ? samples : 1,
    blocksAcross,
    offsets,
    lengths,
  };
}

async function parse(source: ByteSource): Promise<{ image: GeoTIFFImage; littleEndian: boolean }> {
  // The library reads headers in slices that may reach past the end of a small file.
  const slices = {
    fileSize: source.size,
    async fetch(wanted: readonly { offset: number; length: number }[]): Promise<ArrayBuffer[]> {
      return Promise.all(
        wanted.map(async ({ offset, length }) => {
          const bytes = await source.read(offset, Math.max(0, Math.min(length, source.size - offset)));
          return bytes.buffer.slice(bytes.byteOffset, bytes.byteOffset + bytes.byteLength) as ArrayBuffer;
        }),
      );
    },
    async close() {},
  };
  const tiff = await GeoTIFF.fromSource(slices as never);
  return { image: await tiff.getImage(0), littleEndian: tiff.littleEndian };
}

function corrupt(source: ByteSource, detail: string, cause?: unknown): BasinloomError {
  return new BasinloomError('RASTER_CORRUPT', { file: source.name, place: 'header', detail }, { cause });
}

function unsupported(source: ByteSource, detail: string): BasinloomError {
  return new BasinloomError('RASTER_UNSUPPORTED', { file: source.name, detail: `${detail} are not supported` });
}

function firstNumber(value: unknown): number | undefined {
  if (typeof value === 'number') return value;
  const first = (value as ArrayLike<number> | undefined)?.[0];
  return first === undefined ? undefined : Number(first);
}
