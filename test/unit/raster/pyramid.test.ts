import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { halve, overviewLevels, PyramidBuilder } from '../../../shared/raster/pyramid.ts';

const NODATA = -32768;

describe('half the resolution', () => {
  it('is the rounded mean of the valid pixels, halves up', () => {
    const samples = Int16Array.of(1, 2, NODATA, NODATA, 2, 1, NODATA, 7, NODATA, -3, 5, 5);
    expect([...halve(samples, 3, 4, NODATA, 'average')]).toEqual([2, 7, -3, 5]);
  });

  it('of an odd size keeps the last row and column', () => {
    expect([...halve(Uint8Array.of(1, 3, 9, 5, 7, 11, 20, 30, 50), 3, 3, null, 'average')]).toEqual([4, 10, 25, 50]);
  });

  it('of bits is one of the pixels, never a mix', () => {
    expect([...halve(Uint16Array.of(1, 2, 4, 8), 2, 2, null, 'nearest')]).toEqual([1]);
  });

  it('of floats is not rounded, and NaN is never blended', () => {
    expect([...halve(Float32Array.of(0.5, Number.NaN, 0.25, 0.75), 2, 2, Number.NaN, 'average')]).toEqual([0.5]);
    expect([...halve(Float32Array.of(Number.NaN, Number.NaN), 1, 2, Number.NaN, 'average')]).toEqual([Number.NaN]);
  });
});

describe('levels', () => {
  it('halve until both sides are at most 256, whatever the tile size', () => {
    expect(overviewLevels(1000, 600)).toEqual([
      { rows: 500, columns: 300 },
      { rows: 250, columns: 150 },
    ]);
    expect(overviewLevels(1, 1)).toEqual([{ rows: 1, columns: 1 }]);
  });
});

/** Blocks of every level, built from pieces of a given tile size, put together to images again. */
function buildLevels(image: Int16Array, rows: number, columns: number, tile: number, mode: 'average' | 'nearest') {
  const levels = [];
  for (let size = { rows, columns }; size.rows > 4 || size.columns > 4; ) {
    size = { rows: Math.ceil(size.rows / 2), columns: Math.ceil(size.columns / 2) };
    levels.push(size);
  }
  const blocks: Int16Array[][] = levels.map(() => []);
  const builder = new PyramidBuilder<Int16Array>({
    levels,
    blockSize: tile,
    nodata: NODATA,
    mode,
    empty: NODATA,
    allocate: (length) => new Int16Array(length),
    block: (level, samples) => blocks[level].push(samples),
  });
  for (let y = 0; y < rows; y += tile) {
    for (let x = 0; x < columns; x += tile) {
      const size = { rows: Math.min(tile, rows - y), columns: Math.min(tile, columns - x) };
      const samples = new Int16Array(size.rows * size.columns);
      for (let r = 0; r < size.rows; r++) {
        const from = (y + r) * columns + x;
        samples.set(image.subarray(from, from + size.columns), r * size.columns);
      }
      const half = { rows: Math.ceil(size.rows / 2), columns: Math.ceil(size.columns / 2) };
      const smaller = halve(samples, size.rows, size.columns, NODATA, mode);
      builder.add({ row: y / 2, column: x / 2, ...half, samples: smaller });
    }
  }
  builder.end();
  return levels.map((size, level) => {
    const across = Math.ceil(size.columns / tile);
    expect(blocks[level]).toHaveLength(across * Math.ceil(size.rows / tile));
    const whole = new Int16Array(size.rows * size.columns);
    for (let i = 0; i < whole.length; i++) {
      const [y, x] = [Math.floor(i / size.columns), i % size.columns];
      const block = blocks[level][Math.floor(y / tile) * across + Math.floor(x / tile)];
      whole[i] = block[(y % tile) * tile + (x % tile)];
    }
    return whole;
  });
}

describe('the builder', () => {
  it('gives the same overviews from tiles of any size as from the whole image', () => {
    const size = fc.integer({ min: 5, max: 70 });
    fc.assert(
      fc.property(
        size,
        size,
        fc.integer(),
        fc.constantFrom('average' as const, 'nearest' as const),
        (rows, columns, seed, mode) => {
          const image = Int16Array.from({ length: rows * columns }, (_, i) => {
            const value = Math.imul(i + seed, 0x9e3779b1) >> 16;
            return value % 5 === 0 ? NODATA : value;
          });
          const small = buildLevels(image, rows, columns, 4, mode);
          expect(buildLevels(image, rows, columns, 8, mode)).toEqual(small);
          expect(buildLevels(image, rows, columns, 32, mode)).toEqual(small);
          let [above, height, width] = [image, rows, columns];
          for (const level of small) {
            above = halve(above, height, width, NODATA, mode);
            [height, width] = [Math.ceil(height / 2), Math.ceil(width / 2)];
            expect(level).toEqual(above);
          }
        },
      ),
      { numRuns: 40 },
    );
  });

  it('fills what no piece covers, and refuses a piece that reaches out of the level', () => {
    const made: number[][] = [];
    const builder = new PyramidBuilder<Uint8Array>({
      levels: [{ rows: 3, columns: 2 }],
      blockSize: 2,
      nodata: 255,
      mode: 'average',
      empty: 255,
      allocate: (length) => new Uint8Array(length),
      block: (_, samples) => made.push([...samples]),
    });
    const samples = Uint8Array.of(1);
    expect(() => builder.add({ row: 3, column: 0, rows: 1, columns: 1, samples })).toThrow(RangeError);
    builder.add({ row: 2, column: 1, rows: 1, columns: 1, samples });
    builder.end();
    expect(made).toEqual([
      [255, 255, 255, 255],
      [255, 1, 255, 255],
    ]);
  });
});
