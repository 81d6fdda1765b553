import type { GridSpec } from '../contract/grid.ts';
import { type BlockCompression, predictorOf } from './block.ts';
import { gdalMetadataXml, type TiffMetadata } from './gdal-metadata.ts';
import { geoKeyDirectory } from './geo-key-writer.ts';
import { ascii, doubles, type IfdEntry, layOut, longs, offsets, shorts } from './ifd-writer.ts';
import { bytesPerSample, type SampleType, sampleFormat } from './sample-type.ts';
import { COMPRESSION, TAG } from './tiff-tags.ts';

/** One resolution level of a COG; level 0 is full resolution. */
export interface CogLevel {
  readonly width: number;
  readonly height: number;
  /** Compressed bytes of each block, row by row. */
  readonly blockByteLengths: ArrayLike<number>;
}

export interface CogLayout {
  readonly levels: readonly CogLevel[];
  /** Edge of the square blocks, pixels. */
  readonly blockSize: number;
  readonly sampleType: SampleType;
  readonly compression: BlockCompression;
  readonly nodata: number | null;
  readonly grid: Pick<GridSpec, 'crs' | 'originX' | 'originY' | 'resolution'>;
  readonly metadata: TiffMetadata;
}

/**
 * The structural promise that GDAL reads first (COG driver documentation): headers before data, blocks in row-major
 * order, each with its size before it and its last four bytes repeated behind it.
 */
const GHOST_LINES =
  'LAYOUT=IFDS_BEFORE_DATA\nBLOCK_ORDER=ROW_MAJOR\nBLOCK_LEADER=SIZE_AS_UINT4\n' +
  'BLOCK_TRAILER=LAST_4_BYTES_REPEATED\nKNOWN_INCOMPATIBLE_EDITION=NO\n ';
const GHOST = Buffer.from(
  `GDAL_STRUCTURAL_METADATA_SIZE=${String(GHOST_LINES.length).padStart(6, '0')} bytes\n${GHOST_LINES}`,
);

/** Above this a classic TIFF's 32-bit offsets would not do. */
const CLASSIC_LIMIT = 4_000_000_000;
const LEADER = 4;
const TRAILER = 4;

/**
 * A Cloud Optimized GeoTIFF (OGC 21-026) as a stream of bytes: header, levels from small to large. Blocks are
 * written as they come; nothing is decoded.
 *
 * @param blocks compressed blocks of a level, row by row; asked for from the smallest level to level 0
 */
export async function* writeCog(
  layout: CogLayout,
  blocks: (level: number) => AsyncIterable<Uint8Array> | Iterable<Uint8Array>,
): AsyncGenerator<Uint8Array> {
  yield cogHeader(layout);
  for (let level = layout.levels.length - 1; level >= 0; level--) {
    const expected = layout.levels[level].blockByteLengths;
    let index = 0;
    for await (const block of blocks(level)) {
      if (block.length !== expected[index]) throw new Error(`level ${level}: block ${index} has another length`);
      index++;
      const framed = new Uint8Array(LEADER + block.length + TRAILER);
      new DataView(framed.buffer).setUint32(0, block.length, true);
      framed.set(block, LEADER);
      framed.set(block.subarray(block.length - TRAILER), LEADER + block.length);
      yield framed;
    }
    if (index !== expected.length) throw new Error(`level ${level}: ${index} blocks instead of ${expected.length}`);
  }
}

function cogHeader(layout: CogLayout): Uint8Array {
  const data = layout.levels.reduce((sum, { blockByteLengths }) => sum + dataBytes(blockByteLengths), 0);
  const big = data > CLASSIC_LIMIT;
  const start = (big ? 16 : 8) + GHOST.length;
  const first = start + (start % 2);
  // Offsets have a fixed width, so the size of the header does not depend on their values.
  const dataStart = layOut(
    directories(layout, () => 0),
    first,
    big,
  ).end;
  const starts = levelStarts(layout, dataStart);
  const { bytes, offsetsOfDirectories } = layOut(
    directories(layout, (level) => starts[level]),
    first,
    big,
  );
  const prefix = Buffer.alloc(first);
  prefix.write('II', 0, 'latin1');
  if (big) {
    prefix.writeUInt16LE(43, 2);
    prefix.writeUInt16LE(8, 4);
    prefix.writeBigUInt64LE(BigInt(offsetsOfDirectories[0]), 8);
  } else {
    prefix.writeUInt16LE(42, 2);
    prefix.writeUInt32LE(offsetsOfDirectories[0], 4);
  }
  GHOST.copy(prefix, big ? 16 : 8);
  return Buffer.concat([prefix, bytes]);
}

/** Where the data of each level begin: the smallest level first. */
function levelStarts({ levels }: CogLayout, dataStart: number): number[] {
  const starts = new Array<number>(levels.length);
  let at = dataStart;
  for (let level = levels.length - 1; level >= 0; level--) {
    starts[level] = at;
    at += dataBytes(levels[level].blockByteLengths);
  }
  return starts;
}

function dataBytes(lengths: ArrayLike<number>): number {
  let sum = 0;
  for (let i = 0; i < lengths.length; i++) sum += lengths[i] + LEADER + TRAILER;
  return sum;
}

function directories(layout: CogLayout, startOf: (level: number) => number): IfdEntry[][] {
  return layout.levels.map((level, index) => {
    const { blockSize, sampleType, compression, nodata } = layout;
    let at = startOf(index);
    const blockOffsets = Array.from(level.blockByteLengths, (length) => {
      const offset = at + LEADER;
      at += length + LEADER + TRAILER;
      return offset;
    });
    const entries = [
      ...(index > 0 ? [longs(TAG.newSubfileType, [1])] : []),
      longs(TAG.imageWidth, [level.width]),
      longs(TAG.imageLength, [level.height]),
      shorts(TAG.bitsPerSample, [bytesPerSample(sampleType) * 8]),
      shorts(TAG.compression, [COMPRESSION[compression]]),
      shorts(TAG.photometric, [1]),
      shorts(TAG.samplesPerPixel, [1]),
      shorts(TAG.planarConfiguration, [1]),
      shorts(TAG.predictor, [predictorOf(sampleType)]),
      longs(TAG.tileWidth, [blockSize]),
      longs(TAG.tileLength, [blockSize]),
      offsets(TAG.tileOffsets, blockOffsets),
      longs(TAG.tileByteCounts, level.blockByteLengths),
      shorts(TAG.sampleFormat, [sampleFormat(sampleType)]),
      ...(index === 0 ? georeference(layout) : []),
      ...(nodata === null ? [] : [ascii(TAG.gdalNodata, String(nodata))]),
    ];
    return entries.sort((a, b) => a.tag - b.tag);
  });
}

function georeference({ grid, metadata }: CogLayout): IfdEntry[] {
  const keys = geoKeyDirectory(grid.crs);
  return [
    doubles(TAG.modelPixelScale, [grid.resolution, grid.resolution, 0]),
    doubles(TAG.modelTiepoint, [0, 0, 0, grid.originX, grid.originY, 0]),
    shorts(TAG.geoKeyDirectory, keys.directory),
    ...(keys.doubles.length > 0 ? [doubles(TAG.geoDoubleParams, keys.doubles)] : []),
    ascii(TAG.geoAsciiParams, keys.ascii),
    ascii(TAG.gdalMetadata, gdalMetadataXml(metadata)),
  ];
}
