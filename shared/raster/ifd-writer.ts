import { FIELD } from './tiff-tags.ts';

/** One tag of a TIFF directory. `offset` values take 4 bytes in a classic TIFF and 8 in a BigTIFF. */
export interface IfdEntry {
  readonly tag: number;
  readonly kind: 'short' | 'long' | 'offset' | 'double' | 'ascii';
  readonly values: ArrayLike<number>;
}

export const shorts = (tag: number, values: ArrayLike<number>): IfdEntry => ({ tag, kind: 'short', values });
export const longs = (tag: number, values: ArrayLike<number>): IfdEntry => ({ tag, kind: 'long', values });
export const offsets = (tag: number, values: ArrayLike<number>): IfdEntry => ({ tag, kind: 'offset', values });
export const doubles = (tag: number, values: ArrayLike<number>): IfdEntry => ({ tag, kind: 'double', values });
/** Text with the closing NUL that TIFF asks for, as UTF-8. */
export const ascii = (tag: number, text: string): IfdEntry => ({
  tag,
  kind: 'ascii',
  values: Buffer.from(`${text}\0`),
});

const BYTES = { short: 2, long: 4, double: 8, ascii: 1 } as const;

/**
 * Lays directories out one behind the other, each followed by the values that do not fit into it.
 *
 * @param start where the first directory goes in the file
 */
export function layOut(
  directories: readonly (readonly IfdEntry[])[],
  start: number,
  big: boolean,
): { bytes: Uint8Array; end: number; offsetsOfDirectories: number[] } {
  const pointer = big ? 8 : 4;
  const sizeOf = ({ kind, values }: IfdEntry) => values.length * (kind === 'offset' ? pointer : BYTES[kind]);
  const places: { offset: number; outside: number[] }[] = [];
  let at = start;
  for (const entries of directories) {
    const offset = at;
    at += (big ? 8 : 2) + entries.length * (big ? 20 : 12) + pointer;
    const outside = entries.map((entry) => {
      const size = sizeOf(entry);
      if (size <= pointer) return 0;
      const place = at;
      at += size + (size % 2);
      return place;
    });
    at += (8 - (at % 8)) % 8;
    places.push({ offset, outside });
  }
  const bytes = Buffer.alloc(at - start);
  directories.forEach((entries, d) => {
    const { offset, outside } = places[d];
    let p = offset - start;
    p = big ? bytes.writeBigUInt64LE(BigInt(entries.length), p) : bytes.writeUInt16LE(entries.length, p);
    entries.forEach((entry, e) => {
      p = bytes.writeUInt16LE(entry.tag, p);
      p = bytes.writeUInt16LE(fieldType(entry, big), p);
      p = writePointer(bytes, entry.values.length, p, big);
      if (outside[e] > 0) {
        writeValues(bytes, entry, outside[e] - start, big);
        writePointer(bytes, outside[e], p, big);
      } else {
        writeValues(bytes, entry, p, big);
      }
      p += pointer;
    });
    writePointer(bytes, places[d + 1]?.offset ?? 0, p, big);
  });
  return { bytes, end: at, offsetsOfDirectories: places.map(({ offset }) => offset) };
}

function fieldType({ kind }: IfdEntry, big: boolean): number {
  if (kind === 'offset') return big ? FIELD.long8 : FIELD.long;
  return FIELD[kind];
}

function writePointer(bytes: Buffer, value: number, at: number, big: boolean): number {
  return big ? bytes.writeBigUInt64LE(BigInt(value), at) : bytes.writeUInt32LE(value, at);
}

function writeValues(bytes: Buffer, { kind, values }: IfdEntry, at: number, big: boolean): void {
  let p = at;
  for (let i = 0; i < values.length; i++) {
    const value = values[i];
    if (kind === 'short') p = bytes.writeUInt16LE(value, p);
    else if (kind === 'long') p = bytes.writeUInt32LE(value, p);
    else if (kind === 'offset') p = writePointer(bytes, value, p, big);
    else if (kind === 'double') p = bytes.writeDoubleLE(value, p);
    else p = bytes.writeUInt8(value, p);
  }
}
