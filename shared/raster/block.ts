import { constants, deflateSync, zstdCompressSync } from 'node:zlib';
import { floatPredictor } from './float-predictor.ts';
import { difference } from './predictor.ts';
import type { RasterSamples, SampleType } from './sample-type.ts';

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
