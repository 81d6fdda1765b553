/** A little-endian, uncompressed, single-strip uint16 GeoTIFF in a UTM zone: the smallest band file there is. */
export interface TinyTiff {
  readonly width: number;
  readonly height: number;
  readonly originX: number;
  readonly originY: number;
  readonly pixel: number;
  readonly epsg: number;
  readonly values: Uint16Array;
  /** 1 unsigned, 2 signed. */
  readonly sampleFormat?: number;
}

type Entry = readonly [tag: number, type: 2 | 3 | 4 | 12, values: readonly number[]];

const BYTES = { 2: 1, 3: 2, 4: 4, 12: 8 } as const;

export function tinyTiff({ width, height, originX, originY, pixel, epsg, values, sampleFormat = 1 }: TinyTiff): Buffer {
  const data = Buffer.from(values.buffer, values.byteOffset, values.byteLength);
  const entries: Entry[] = [
    [256, 3, [width]],
    [257, 3, [height]],
    [258, 3, [16]],
    [259, 3, [1]],
    [262, 3, [1]],
    [273, 4, [8]],
    [277, 3, [1]],
    [278, 3, [height]],
    [279, 4, [data.length]],
    [339, 3, [sampleFormat]],
    [33550, 12, [pixel, pixel, 0]],
    [33922, 12, [0, 0, 0, originX, originY, 0]],
    [34735, 3, [1, 1, 0, 3, 1024, 0, 1, 1, 1025, 0, 1, 1, 3072, 0, 1, epsg]],
  ];
  const ifdAt = 8 + data.length;
  const ifd = Buffer.alloc(2 + entries.length * 12 + 4);
  const extra: Buffer[] = [];
  let extraAt = ifdAt + ifd.length;
  ifd.writeUInt16LE(entries.length, 0);
  for (const [index, [tag, type, list]] of entries.entries()) {
    const at = 2 + index * 12;
    ifd.writeUInt16LE(tag, at);
    ifd.writeUInt16LE(type, at + 2);
    ifd.writeUInt32LE(list.length, at + 4);
    const bytes = Buffer.alloc(Math.max(4, list.length * BYTES[type]));
    for (const [k, value] of list.entries()) {
      if (type === 12) bytes.writeDoubleLE(value, k * 8);
      else bytes.writeUIntLE(value, k * BYTES[type], BYTES[type]);
    }
    if (bytes.length === 4) bytes.copy(ifd, at + 8);
    else {
      ifd.writeUInt32LE(extraAt, at + 8);
      extra.push(bytes);
      extraAt += bytes.length;
    }
  }
  const header = Buffer.from([0x49, 0x49, 42, 0, 0, 0, 0, 0]);
  header.writeUInt32LE(ifdAt, 4);
  return Buffer.concat([header, data, ifd, ...extra]);
}
