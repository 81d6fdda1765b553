import { undoDifference } from './predictor.ts';

// Predictor 3 (Adobe Photoshop TIFF Technical Note 3): the bytes of a row are split into planes, most significant
// first, and stored as differences. The machine is taken to be little-endian.

/** Predictor 3 of rows of float32 samples. */
export function floatPredictor(samples: Float32Array, rowLength: number): Uint8Array {
  const source = new Uint8Array(samples.buffer, samples.byteOffset, samples.byteLength);
  const out = new Uint8Array(source.length);
  const rowBytes = rowLength * 4;
  for (let start = 0; start < source.length; start += rowBytes) {
    for (let plane = 0; plane < 4; plane++) {
      const from = start + 3 - plane;
      const to = start + plane * rowLength;
      for (let i = 0; i < rowLength; i++) out[to + i] = source[from + i * 4];
    }
    for (let i = start + rowBytes - 1; i > start; i--) out[i] -= out[i - 1];
  }
  return out;
}

/**
 * Undoes predictor 3; `bytes` is used as scratch.
 *
 * @param rowSamples samples of a row, all bands counted; `bytes` holds whole rows
 * @param sampleBytes 4 or 8
 * @returns the bytes of the samples, least significant first
 */
export function undoFloatPredictor(
  bytes: Uint8Array,
  rowSamples: number,
  sampleBytes: number,
  interleaved: number,
): Uint8Array {
  const rowBytes = rowSamples * sampleBytes;
  undoDifference(bytes, rowBytes, interleaved);
  const out = new Uint8Array(bytes.length);
  for (let start = 0; start < bytes.length; start += rowBytes) {
    for (let plane = 0; plane < sampleBytes; plane++) {
      const from = start + plane * rowSamples;
      const to = start + sampleBytes - 1 - plane;
      for (let i = 0; i < rowSamples; i++) out[to + i * sampleBytes] = bytes[from + i];
    }
  }
  return out;
}
