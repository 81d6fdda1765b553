import { inflateSync, zstdDecompressSync } from 'node:zlib';
import { undoFloatPredictor } from './float-predictor.ts';
import { decodeLzw } from './lzw.ts';
import { unpackBits } from './pack-bits.ts';
import { undoDifference } from './predictor.ts';
import type { BlockLayout } from './raster-header.ts';
import { bytesPerSample, newSamples, type RasterSamples, viewSamples } from './sample-type.ts';
import { COMPRESSION } from './tiff-tags.ts';

/**
 * Samples of one block (first band), row by row, `blockWidth` wide.
 *
 * @throws Error of the decompressor, for the caller to name the file and block
 */
export function decodeRasterBlock(bytes: Uint8Array, layout: BlockLayout, rows: number): RasterSamples {
  const { header, interleaved, littleEndian } = layout;
  const { blockWidth, sampleType, predictor } = header;
  const rowSamples = blockWidth * interleaved;
  const size = bytesPerSample(sampleType);
  const length = rowSamples * rows * size;
  let raw = inflate(bytes, header.compression, length);
  if (raw.length < length) throw new Error(`${raw.length} bytes instead of ${length}`);
  if (predictor === 3) {
    // The float predictor stores bytes from most to least significant, whatever the file's byte order.
    raw = undoFloatPredictor(raw.subarray(0, length), rowSamples, size, interleaved);
  } else if (!littleEndian && size > 1) {
    raw = swapped(raw, size);
  }
  const samples = viewSamples(sampleType, raw.subarray(0, length));
  if (predictor === 2) undoDifference(samples, rowSamples, interleaved);
  return interleaved === 1 ? samples : firstBand(samples, header.sampleType, interleaved);
}

function inflate(bytes: Uint8Array, compression: number, length: number): Uint8Array {
  switch (compression) {
    case COMPRESSION.deflate:
    case COMPRESSION.oldDeflate:
      return inflateSync(bytes, { chunkSize: length + 64 });
    case COMPRESSION.zstd:
      return zstdDecompressSync(bytes, { chunkSize: length + 64 });
    case COMPRESSION.lzw:
      return decodeLzw(bytes, length);
    case COMPRESSION.packBits:
      return unpackBits(bytes, length);
    default:
      // A copy: predictors are undone in place, and the bytes may be the caller's. A Buffer's slice() would be a view.
      return new Uint8Array(bytes);
  }
}

function swapped(bytes: Uint8Array, size: number): Uint8Array {
  const out = new Uint8Array(bytes.length);
  for (let start = 0; start + size <= bytes.length; start += size) {
    for (let k = 0; k < size; k++) out[start + k] = bytes[start + size - 1 - k];
  }
  return out;
}

function firstBand(
  samples: RasterSamples,
  type: BlockLayout['header']['sampleType'],
  interleaved: number,
): RasterSamples {
  const out = newSamples(type, samples.length / interleaved);
  for (let i = 0; i < out.length; i++) out[i] = samples[i * interleaved];
  return out;
}
