import { readFile, writeFile } from 'node:fs/promises';
import { deflateSync } from 'node:zlib';

interface Field {
  readonly type: number;
  readonly count: number;
  /** Where the value stands, or its offset. */
  readonly valueAt: number;
}

/** A tag of the first directory of a little-endian classic TIFF. */
function fieldOf(tiff: Buffer, wanted: number): Field {
  const ifd = tiff.readUInt32LE(4);
  for (let k = 0; k < tiff.readUInt16LE(ifd); k++) {
    const at = ifd + 2 + k * 12;
    if (tiff.readUInt16LE(at) === wanted) {
      return { type: tiff.readUInt16LE(at + 2), count: tiff.readUInt32LE(at + 4), valueAt: at + 8 };
    }
  }
  throw new Error(`no tag ${wanted}`);
}

/** Moves a TIFF by its tie point (tag 33922). */
export async function moveEast(path: string, metres: number): Promise<void> {
  const tiff = await readFile(path);
  const at = tiff.readUInt32LE(fieldOf(tiff, 33922).valueAt) + 24;
  tiff.writeDoubleLE(tiff.readDoubleLE(at) + metres, at);
  await writeFile(path, tiff);
}

/**
 * Makes every pixel of a little-endian, tiled, deflated uint16 TIFF one value: all blocks point to one new block.
 * Predictor 2 is kept: a row of equal values is the value followed by zeros.
 */
export async function rewriteUniform(path: string, value: number): Promise<void> {
  const tiff = await readFile(path);
  const number = (wanted: number) => {
    const { type, valueAt } = fieldOf(tiff, wanted);
    return type === 3 ? tiff.readUInt16LE(valueAt) : tiff.readUInt32LE(valueAt);
  };
  const [width, height] = [number(322), number(323)];
  const predictor = number(317);
  const samples = new Uint16Array(width * height).fill(predictor === 2 ? 0 : value);
  if (predictor === 2) for (let row = 0; row < height; row++) samples[row * width] = value;
  const block = deflateSync(new Uint8Array(samples.buffer));
  for (const [tag, content] of [
    [324, tiff.length],
    [325, block.length],
  ]) {
    const { type, count, valueAt } = fieldOf(tiff, tag);
    if (type !== 4) throw new Error(`${path}: tag ${tag} is not of type LONG`);
    const start = count === 1 ? valueAt : tiff.readUInt32LE(valueAt);
    for (let k = 0; k < count; k++) tiff.writeUInt32LE(content, start + 4 * k);
  }
  await writeFile(path, Buffer.concat([tiff, block]));
}
