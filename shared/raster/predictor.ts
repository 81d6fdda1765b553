import type { RasterSamples } from './sample-type.ts';

// One loop for each width of sample: a shared one meets every type of array, and then runs some twenty times slower.
// Signed and float samples are taken as whole numbers of their width; the bits come out the same.

/**
 * Predictor 2 (TIFF 6.0 section 14) in place: each sample becomes the difference to the one before it in its row.
 *
 * @param samples of 1, 2 or 4 bytes
 */
export function difference({ buffer, byteOffset, length, BYTES_PER_ELEMENT }: RasterSamples, rowLength: number): void {
  if (BYTES_PER_ELEMENT === 1) difference8(new Uint8Array(buffer, byteOffset, length), rowLength);
  else if (BYTES_PER_ELEMENT === 2) difference16(new Uint16Array(buffer, byteOffset, length), rowLength);
  else if (BYTES_PER_ELEMENT === 4) difference32(new Uint32Array(buffer, byteOffset, length), rowLength);
  else throw new RangeError(`no differences of samples of ${BYTES_PER_ELEMENT} bytes`);
}

function difference8(samples: Uint8Array, rowLength: number): void {
  for (let end = samples.length; end > 0; end -= rowLength) {
    for (let i = end - 1; i > end - rowLength; i--) samples[i] -= samples[i - 1];
  }
}

function difference16(samples: Uint16Array, rowLength: number): void {
  for (let end = samples.length; end > 0; end -= rowLength) {
    for (let i = end - 1; i > end - rowLength; i--) samples[i] -= samples[i - 1];
  }
}

function difference32(samples: Uint32Array, rowLength: number): void {
  for (let end = samples.length; end > 0; end -= rowLength) {
    for (let i = end - 1; i > end - rowLength; i--) samples[i] -= samples[i - 1];
  }
}

/**
 * Undoes predictor 2 in place.
 *
 * @param rowLength samples of a row, all bands counted; `samples` holds whole rows
 * @param interleaved samples of one pixel that lie together: each is the difference to that of the pixel before
 */
export function undoDifference(
  { buffer, byteOffset, length, BYTES_PER_ELEMENT }: RasterSamples,
  rowLength: number,
  interleaved: number,
): void {
  if (BYTES_PER_ELEMENT === 1) undo8(new Uint8Array(buffer, byteOffset, length), rowLength, interleaved);
  else if (BYTES_PER_ELEMENT === 2) undo16(new Uint16Array(buffer, byteOffset, length), rowLength, interleaved);
  else if (BYTES_PER_ELEMENT === 4) undo32(new Uint32Array(buffer, byteOffset, length), rowLength, interleaved);
  else undo64(new BigUint64Array(buffer, byteOffset, length), rowLength, interleaved);
}

function undo8(samples: Uint8Array, rowLength: number, interleaved: number): void {
  for (let start = 0; start < samples.length; start += rowLength) {
    for (let i = start + interleaved; i < start + rowLength; i++) samples[i] += samples[i - interleaved];
  }
}

function undo16(samples: Uint16Array, rowLength: number, interleaved: number): void {
  for (let start = 0; start < samples.length; start += rowLength) {
    for (let i = start + interleaved; i < start + rowLength; i++) samples[i] += samples[i - interleaved];
  }
}

function undo32(samples: Uint32Array, rowLength: number, interleaved: number): void {
  for (let start = 0; start < samples.length; start += rowLength) {
    for (let i = start + interleaved; i < start + rowLength; i++) samples[i] += samples[i - interleaved];
  }
}

function undo64(samples: BigUint64Array, rowLength: number, interleaved: number): void {
  for (let start = 0; start < samples.length; start += rowLength) {
    for (let i = start + interleaved; i < start + rowLength; i++) samples[i] += samples[i - interleaved];
  }
}
