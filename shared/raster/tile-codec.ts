import { constants, crc32, zstdCompressSync, zstdDecompressSync } from 'node:zlib';
import { BasinloomError } from '../contract/errors.ts';
import { bytesPerSample, type RasterSamples, type SampleType, viewSamples } from './sample-type.ts';

/** "BLT" and the version of the container. */
const MAGIC = 0x01544c42;
/** Magic, length of the head, and the checksum of all the other bytes; whole numbers of 4 bytes, little-endian. */
const PREFIX_BYTES = 12;
const CHECKSUM_AT = 8;

interface PlaneEntry {
  readonly name: string;
  readonly type: SampleType;
  readonly samples: number;
  /** Bytes after compression. */
  readonly bytes: number;
  /** Bytes were regrouped by significance before compression. */
  readonly shuffled: boolean;
}

export interface DecodedPlanes {
  readonly header: unknown;
  readonly planes: Readonly<Record<string, RasterSamples>>;
}

/**
 * Named planes and a JSON header as one byte string: the form of every artefact of tiles. Each plane is compressed
 * on its own (zstd), so a reader may take some and leave others. Equal content gives equal bytes.
 */
export function encodePlanes(header: unknown, planes: Readonly<Record<string, RasterSamples>>): Uint8Array {
  const entries: PlaneEntry[] = [];
  const bodies: Uint8Array[] = [];
  for (const [name, plane] of Object.entries(planes)) {
    const type = typeOf(plane);
    const size = bytesPerSample(type);
    const raw = new Uint8Array(plane.buffer, plane.byteOffset, plane.byteLength);
    const shuffled = size > 1;
    const body = zstdCompressSync(shuffled ? shuffle(raw, size) : raw, {
      params: { [constants.ZSTD_c_compressionLevel]: 1 },
    });
    entries.push({ name, type, samples: plane.length, bytes: body.length, shuffled });
    bodies.push(body);
  }
  const head = Buffer.from(JSON.stringify({ header, planes: entries }));
  const prefix = Buffer.alloc(PREFIX_BYTES);
  prefix.writeUInt32LE(MAGIC, 0);
  prefix.writeUInt32LE(head.length, 4);
  const checksum = [head, ...bodies].reduce((sum, part) => crc32(part, sum), crc32(prefix.subarray(0, CHECKSUM_AT)));
  prefix.writeUInt32LE(checksum >>> 0, CHECKSUM_AT);
  return Buffer.concat([prefix, head, ...bodies]);
}

/**
 * @param key name of the artefact, for messages
 * @param wanted names of the planes to decode; all when absent
 * @throws BasinloomError ARTEFACT_CORRUPT
 */
export function decodePlanes(bytes: Uint8Array, key: string, wanted?: readonly string[]): DecodedPlanes {
  const corrupt = (detail: string) => new BasinloomError('ARTEFACT_CORRUPT', { key, detail });
  const buffer = Buffer.from(bytes.buffer, bytes.byteOffset, bytes.byteLength);
  if (buffer.length < PREFIX_BYTES || buffer.readUInt32LE(0) !== MAGIC)
    throw corrupt('not an artefact of this version');
  const checksum = crc32(buffer.subarray(PREFIX_BYTES), crc32(buffer.subarray(0, CHECKSUM_AT)));
  if (checksum >>> 0 !== buffer.readUInt32LE(CHECKSUM_AT)) throw corrupt('checksum differs');
  const bodyStart = PREFIX_BYTES + buffer.readUInt32LE(4);
  const { header, planes: entries } = JSON.parse(buffer.toString('utf8', PREFIX_BYTES, bodyStart)) as {
    header: unknown;
    planes: PlaneEntry[];
  };
  const planes: [string, RasterSamples][] = [];
  let at = bodyStart;
  for (const { name, type, samples, bytes: length, shuffled } of entries) {
    if (!wanted || wanted.includes(name)) {
      const size = bytesPerSample(type);
      const raw = zstdDecompressSync(buffer.subarray(at, at + length), { chunkSize: samples * size + 64 });
      planes.push([name, viewSamples(type, shuffled ? unshuffle(raw, size) : raw)]);
    }
    at += length;
  }
  // Not by assignment: a plane named like a part of Object's prototype would be lost.
  return { header, planes: Object.fromEntries(planes) };
}

/** Groups the first bytes of all samples, then the second ones: like bytes lie together and compress better. */
function shuffle(bytes: Uint8Array, size: number): Uint8Array {
  const count = bytes.length / size;
  const out = new Uint8Array(bytes.length);
  for (let k = 0; k < size; k++) {
    for (let i = 0, from = k, to = k * count; i < count; i++, from += size, to++) out[to] = bytes[from];
  }
  return out;
}

function unshuffle(bytes: Uint8Array, size: number): Uint8Array {
  const count = bytes.length / size;
  const out = new Uint8Array(bytes.length);
  for (let k = 0; k < size; k++) {
    for (let i = 0, to = k, from = k * count; i < count; i++, to += size, from++) out[to] = bytes[from];
  }
  return out;
}

function typeOf(plane: RasterSamples): SampleType {
  // A Buffer is a Uint8Array by another name.
  if (plane instanceof Uint8Array) return 'uint8';
  return plane.constructor.name.replace('Array', '').toLowerCase() as SampleType;
}
