import { type BlockCompression, predictorOf } from '../../shared/raster/block.ts';
import { decodeRasterBlock } from '../../shared/raster/decode-block.ts';
import type { BlockLayout } from '../../shared/raster/raster-header.ts';
import type { RasterSamples, SampleType } from '../../shared/raster/sample-type.ts';
import { COMPRESSION } from '../../shared/raster/tiff-tags.ts';

/** Samples of a block that `encodeBlock` made, as the reader of rasters has them. */
export function decodeBlock(
  bytes: Uint8Array,
  sampleType: SampleType,
  size: number,
  compression: BlockCompression,
): RasterSamples {
  const header = {
    blockWidth: size,
    sampleType,
    predictor: predictorOf(sampleType),
    compression: COMPRESSION[compression],
  };
  return decodeRasterBlock(bytes, { header, interleaved: 1, littleEndian: true } as BlockLayout, size);
}
