import { ascii, doubles, type IfdEntry, layOut, longs, offsets, shorts } from '../../../shared/raster/ifd-writer.ts';
import {
  bytesPerSample,
  type RasterSamples,
  type SampleType,
  sampleFormat,
} from '../../../shared/raster/sample-type.ts';
import { TAG } from '../../../shared/raster/tiff-tags.ts';

/** LZW as TIFF 6.0 section 13 writes it, by a table of texts: slow and plain. */
export function encodeLzw(plain: Uint8Array): Uint8Array {
  let bits = '';
  let width = 9;
  let next = 258;
  let table = new Map<string, number>();
  const emit = (code: number) => {
    bits += code.toString(2).padStart(width, '0');
  };
  const codeOf = (text: string) => (text.length === 1 ? text.charCodeAt(0) : (table.get(text) as number));
  emit(256);
  let held = '';
  for (const byte of plain) {
    const longer = held + String.fromCharCode(byte);
    if (longer.length === 1 || table.has(longer)) {
      held = longer;
      continue;
    }
    emit(codeOf(held));
    table.set(longer, next++);
    if (next === 1 << width && width < 12) width++;
    if (next === 4095) {
      emit(256);
      table = new Map();
      next = 258;
      width = 9;
    }
    held = String.fromCharCode(byte);
  }
  if (held) {
    emit(codeOf(held));
    // The reader has an entry more from here on.
    if (next + 1 === 1 << width && width < 12) width++;
  }
  emit(257);
  return Uint8Array.from(bits.match(/.{1,8}/g) ?? [], (eight) => Number.parseInt(eight.padEnd(8, '0'), 2));
}

/** PackBits: runs of three and more, literals between. */
export function packBits(plain: Uint8Array): Uint8Array {
  const out: number[] = [];
  for (let at = 0; at < plain.length; ) {
    let run = 1;
    while (run < 128 && at + run < plain.length && plain[at + run] === plain[at]) run++;
    if (run > 1) {
      out.push(257 - run, plain[at]);
      at += run;
      continue;
    }
    let end = at + 1;
    while (end < plain.length && end - at < 128 && plain[end] !== plain[end - 1]) end++;
    out.push(end - at - 1, ...plain.subarray(at, end));
    at = end;
  }
  return Uint8Array.from(out);
}

export interface TestTiff {
  readonly samples: RasterSamples;
  readonly type: SampleType;
  readonly width: number;
  /** TIFF code; `encode` makes the bytes of a block. */
  readonly compression?: number;
  readonly encode?: (block: Uint8Array) => Uint8Array;
  readonly predictor?: number;
  readonly rowsPerStrip?: number;
  readonly epsg?: number | null;
  readonly nodata?: string;
  readonly metadata?: string;
  readonly place?: boolean;
  /** Further or replaced tags. */
  readonly tags?: readonly IfdEntry[];
  /** Strips that are left out of the file. */
  readonly sparse?: readonly number[];
}

/** A small little-endian TIFF of strips in UTM zone 33 north, 30 m, corner at 500000, 4600000. */
export function testTiff(given: TestTiff): Uint8Array {
  const { samples, type, width, compression = 1, encode = (block) => block, predictor = 1, epsg = 32633 } = given;
  const height = samples.length / width;
  const { rowsPerStrip = height, place = true, sparse = [] } = given;
  const size = bytesPerSample(type);
  const raw = new Uint8Array(samples.buffer, samples.byteOffset, samples.byteLength);
  const strips: Uint8Array[] = [];
  for (let row = 0; row < height; row += rowsPerStrip) {
    const end = Math.min(height, row + rowsPerStrip);
    const strip = encode(raw.subarray(row * width * size, end * width * size));
    strips.push(sparse.includes(strips.length) ? new Uint8Array(0) : strip);
  }
  const tags = (starts: readonly number[]): IfdEntry[] => {
    const entries = [
      longs(TAG.imageWidth, [width]),
      longs(TAG.imageLength, [height]),
      shorts(TAG.bitsPerSample, [size * 8]),
      shorts(TAG.compression, [compression]),
      shorts(TAG.photometric, [1]),
      offsets(TAG.stripOffsets, starts),
      shorts(TAG.samplesPerPixel, [1]),
      longs(TAG.rowsPerStrip, [rowsPerStrip]),
      longs(
        TAG.stripByteCounts,
        strips.map(({ length }) => length),
      ),
      shorts(TAG.predictor, [predictor]),
      shorts(TAG.sampleFormat, [sampleFormat(type)]),
      ...(place ? [doubles(TAG.modelPixelScale, [30, 30, 0])] : []),
      ...(place ? [doubles(TAG.modelTiepoint, [0, 0, 0, 500000, 4600000, 0])] : []),
      ...(epsg ? [shorts(TAG.geoKeyDirectory, [1, 1, 0, 3, 1024, 0, 1, 1, 1025, 0, 1, 1, 3072, 0, 1, epsg])] : []),
      ...(given.metadata ? [ascii(TAG.gdalMetadata, given.metadata)] : []),
      ...(given.nodata === undefined ? [] : [ascii(TAG.gdalNodata, given.nodata)]),
    ];
    const replaced = new Set(given.tags?.map(({ tag }) => tag));
    return [...entries.filter(({ tag }) => !replaced.has(tag)), ...(given.tags ?? [])].sort((a, b) => a.tag - b.tag);
  };
  const dataStart = layOut([tags(strips.map(() => 0))], 8, false).end;
  let at = dataStart;
  const starts = strips.map(({ length }) => {
    const start = length === 0 ? 0 : at;
    at += length;
    return start;
  });
  return Buffer.concat([
    Buffer.from([0x49, 0x49, 42, 0, 8, 0, 0, 0]),
    layOut([tags(starts)], 8, false).bytes,
    ...strips,
  ]);
}
