import { constants, deflateSync, inflateSync, zstdCompressSync, zstdDecompressSync } from 'node:zlib';
import { floatPredictor, undoFloatPredictor } from './float-predictor.ts';
import { difference, undoDifference } from './predictor.ts';
import { bytesPerSample, type RasterSamples, type SampleType, viewSamples } from './sample-type.ts';

export type BlockCompression = 'deflate' | 'zstd';

/** Predictor of a block: 3 for floats, 2 for whole numbers. */
export function predictorOf(type: SampleType): 2 | 3 {
  return type.startsWith('float') ? 3 : 2;
}

/**
 * A finished TIFF block: predictor, then compression. Levels are chosen for speed; a higher level saves a few
 * percent for several times the work. Equal samples give equal bytes.
 *
 * @param samples size x size samples, whole numbers of 1 to 4 bytes or float32
 */
export function encodeBlock(samples: RasterSamples, size: number, compression: BlockCompression): Uint8Array {
  return compress(predicted(samples, size), compression);
}

/** Samples of a block that `encodeBlock` made. @throws Error of the decompressor */
export function decodeBlock(
  bytes: Uint8Array,
  type: SampleType,
  size: number,
  compression: BlockCompression,
): RasterSamples {
  // A little more than the block holds, so that the decompressor ends within its first chunk.
  const options = { chunkSize: size * size * bytesPerSample(type) + 64 };
  const raw = compression === 'deflate' ? inflateSync(bytes, options) : zstdDecompressSync(bytes, options);
  if (predictorOf(type) === 3) return viewSamples(type, undoFloatPredictor(raw, size, bytesPerSample(type), 1));
  const samples = viewSamples(type, raw);
  undoDifference(samples, size, 1);
  return samples;
}

function predicted(samples: RasterSamples, size: number): Uint8Array {
  if (samples instanceof Float32Array) return floatPredictor(samples, size);
  if (samples instanceof Float64Array) throw new TypeError('blocks of float64 are not written');
  const copy = samples.slice();
  difference(copy, size);
  return new Uint8Array(copy.buffer, copy.byteOffset, copy.byteLength);
}

function compress(bytes: Uint8Array, compression: BlockCompression): Uint8Array {
  const chunkSize = bytes.length + 65536;
  if (compression === 'deflate') return deflateSync(bytes, { level: 1, memLevel: 9, chunkSize });
  return zstdCompressSync(bytes, { chunkSize, params: { [constants.ZSTD_c_compressionLevel]: 1 } });
}
