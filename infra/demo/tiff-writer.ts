import { writeFile } from 'node:fs/promises';
import { promisify } from 'node:util';
import { deflate } from 'node:zlib';

/** A one-band raster. */
export interface TiffImage {
  readonly samples: Uint8Array | Uint16Array | Float32Array;
  readonly width: number;
  readonly height: number;
  /** EPSG code of a projected system, or 4326. */
  readonly epsg: number;
  /** Upper-left corner of the first pixel. */
  readonly left: number;
  readonly top: number;
  readonly pixelWidth: number;
  readonly pixelHeight: number;
  /** Give the tie point at the centre of the first pixel (RasterPixelIsPoint), as Landsat files do. */
  readonly pixelIsPoint?: boolean;
  readonly nodata?: number;
}

const EDGE = 256;
const compress = promisify(deflate);

/**
 * Writes a tiled GeoTIFF (TIFF 6.0, OGC 19-008r4), deflate compressed, whole numbers with predictor 2. Kept apart
 * from the product's own writer on purpose: what reads the demo is tested against another hand.
 */
export async function writeTiff(file: string, image: TiffImage): Promise<void> {
  const across = Math.ceil(image.width / EDGE);
  const down = Math.ceil(image.height / EDGE);
  const blocks = await Promise.all(
    Array.from({ length: across * down }, (_, k) =>
      compress(blockBytes(image, (k % across) * EDGE, Math.floor(k / across) * EDGE), { level: 1 }),
    ),
  );
  const header = headerBytes(image, blocks);
  await writeFile(file, [header, ...blocks]);
}

/** The samples of one tile, edges filled up with the last value, predictor applied. */
function blockBytes(image: TiffImage, column0: number, row0: number): Uint8Array {
  const { samples, width, height } = image;
  const block = new (samples.constructor as new (length: number) => typeof samples)(EDGE * EDGE);
  const columns = Math.min(EDGE, width - column0);
  for (let r = 0; r < EDGE; r++) {
    const from = Math.min(row0 + r, height - 1) * width + column0;
    block.set(samples.subarray(from, from + columns), r * EDGE);
    block.fill(samples[from + columns - 1], r * EDGE + columns, (r + 1) * EDGE);
  }
  if (block instanceof Uint16Array) difference(block);
  else if (block instanceof Uint8Array) difference(block);
  return new Uint8Array(block.buffer);
}

/** Predictor 2: every sample but the first of a row becomes the step from its left neighbour. */
function difference(block: Uint8Array | Uint16Array): void {
  for (let at = block.length - 1; at > 0; at--) if (at % EDGE !== 0) block[at] -= block[at - 1];
}

type Field = readonly [tag: number, type: 'ascii' | 'short' | 'long' | 'double', values: readonly number[] | string];

const TYPES = { ascii: [2, 1], short: [3, 2], long: [4, 4], double: [12, 8] } as const;

function headerBytes(image: TiffImage, blocks: readonly Buffer[]): Buffer {
  // Once with offsets of 0 to learn the header's length, then with the true ones.
  const length = layOut(fields(image, blocks, 0)).length;
  return layOut(fields(image, blocks, length));
}

function fields(image: TiffImage, blocks: readonly Buffer[], start: number): Field[] {
  let at = start;
  const offsets = blocks.map((block) => {
    at += block.length;
    return at - block.length;
  });
  const float = image.samples instanceof Float32Array;
  const half = image.pixelIsPoint ? 0.5 : 0;
  const tie = [0, 0, 0, image.left + half * image.pixelWidth, image.top - half * image.pixelHeight, 0];
  return [
    [256, 'long', [image.width]],
    [257, 'long', [image.height]],
    [258, 'short', [8 * image.samples.BYTES_PER_ELEMENT]],
    [259, 'short', [8]],
    [262, 'short', [1]],
    [277, 'short', [1]],
    [284, 'short', [1]],
    [317, 'short', [float ? 1 : 2]],
    [322, 'short', [EDGE]],
    [323, 'short', [EDGE]],
    [324, 'long', offsets],
    [325, 'long', blocks.map(({ length }) => length)],
    [339, 'short', [float ? 3 : 1]],
    [33550, 'double', [image.pixelWidth, image.pixelHeight, 0]],
    [33922, 'double', tie],
    [34735, 'short', geoKeys(image)],
    ...(image.nodata === undefined ? [] : [[42113, 'ascii', `${image.nodata}\0`] as Field]),
  ];
}

/** GeoKeyDirectory: model type, raster type, and the EPSG code of the system. */
function geoKeys({ epsg, pixelIsPoint }: TiffImage): number[] {
  const raster = pixelIsPoint ? 2 : 1;
  const keys =
    epsg === 4326
      ? [
          [1024, 2],
          [1025, raster],
          [2048, 4326],
          [2054, 9102],
        ]
      : [
          [1024, 1],
          [1025, raster],
          [3072, epsg],
          [3076, 9001],
        ];
  return [1, 1, 0, keys.length, ...keys.flatMap(([key, value]) => [key, 0, 1, value])];
}

/** A little-endian classic TIFF up to the first block: header, directory, values that do not fit into it. */
function layOut(entries: readonly Field[]): Buffer {
  const directory = 8;
  const values = directory + 2 + 12 * entries.length + 4;
  const parts: Buffer[] = [];
  let at = values;
  const head = Buffer.alloc(values);
  head.write('II', 'latin1');
  head.writeUInt16LE(42, 2);
  head.writeUInt32LE(directory, 4);
  head.writeUInt16LE(entries.length, directory);
  entries.forEach(([tag, type, content], index) => {
    const [code, size] = TYPES[type];
    const bytes = valueBytes(type, content);
    const entry = directory + 2 + 12 * index;
    head.writeUInt16LE(tag, entry);
    head.writeUInt16LE(code, entry + 2);
    head.writeUInt32LE(bytes.length / size, entry + 4);
    if (bytes.length <= 4) {
      bytes.copy(head, entry + 8);
      return;
    }
    head.writeUInt32LE(at, entry + 8);
    const padded = bytes.length % 2 ? Buffer.concat([bytes, Buffer.alloc(1)]) : bytes;
    parts.push(padded);
    at += padded.length;
  });
  return Buffer.concat([head, ...parts]);
}

function valueBytes(type: Field[1], content: Field[2]): Buffer {
  if (typeof content === 'string') return Buffer.from(content, 'latin1');
  const [, size] = TYPES[type];
  const bytes = Buffer.alloc(size * content.length);
  content.forEach((value, k) => {
    if (type === 'double') bytes.writeDoubleLE(value, size * k);
    else bytes.writeUIntLE(value, size * k, size);
  });
  return bytes;
}
