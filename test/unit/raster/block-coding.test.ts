import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { type BlockCompression, encodeBlock, predictorOf } from '../../../shared/raster/block.ts';
import { floatPredictor, undoFloatPredictor } from '../../../shared/raster/float-predictor.ts';
import { decodeLzw } from '../../../shared/raster/lzw.ts';
import { unpackBits } from '../../../shared/raster/pack-bits.ts';
import { difference, undoDifference } from '../../../shared/raster/predictor.ts';
import type { RasterSamples, SampleType } from '../../../shared/raster/sample-type.ts';
import { decodeBlock } from '../../support/decode-block.ts';
import { encodeLzw, packBits } from './tiff-writer.ts';

const hex = (samples: RasterSamples) =>
  Buffer.from(samples.buffer, samples.byteOffset, samples.byteLength).toString('hex');

describe('a finished block', () => {
  const noise = (i: number) => Math.imul(i + 1, 2654435761);
  const samplesOf: Record<Exclude<SampleType, 'float64'>, RasterSamples> = {
    uint8: Uint8Array.from({ length: 1024 }, (_, i) => noise(i)),
    int8: Int8Array.from({ length: 1024 }, (_, i) => noise(i)),
    int16: Int16Array.from({ length: 1024 }, (_, i) => noise(i)),
    uint16: Uint16Array.from({ length: 1024 }, (_, i) => noise(i)),
    int32: Int32Array.from({ length: 1024 }, (_, i) => noise(i)),
    uint32: Uint32Array.from({ length: 1024 }, (_, i) => noise(i)),
    float32: Float32Array.from({ length: 1024 }, (_, i) => (i % 7 === 0 ? Number.NaN : noise(i) / 1e3)),
  };
  const cases = (Object.keys(samplesOf) as (keyof typeof samplesOf)[]).flatMap((type) =>
    (['deflate', 'zstd'] as const).map((compression): [keyof typeof samplesOf, BlockCompression] => [
      type,
      compression,
    ]),
  );
  it.each(cases)('comes back bit for bit and leaves its input alone: %s, %s', (type, compression) => {
    const samples = samplesOf[type];
    const before = hex(samples);
    const block = encodeBlock(samples, 32, compression);
    expect(hex(samples)).toBe(before);
    expect(encodeBlock(samples, 32, compression)).toEqual(block);
    expect(hex(decodeBlock(block, type, 32, compression))).toBe(before);
  });

  it('uses predictor 3 for floats and 2 for whole numbers', () => {
    expect(predictorOf('float32')).toBe(3);
    expect(predictorOf('uint8')).toBe(2);
  });

  it('is not made of float64', () => {
    expect(() => encodeBlock(new Float64Array(16), 4, 'zstd')).toThrow('float64');
  });
});

describe('predictors', () => {
  it('2 comes back, for any width of row and sample', () => {
    const arrays = fc.oneof(fc.uint8Array(), fc.int16Array(), fc.uint32Array()) as fc.Arbitrary<RasterSamples>;
    fc.assert(
      fc.property(fc.integer({ min: 1, max: 9 }), arrays, (rowLength, all) => {
        const samples = all.slice(0, all.length - (all.length % rowLength));
        const before = hex(samples);
        difference(samples, rowLength);
        undoDifference(samples, rowLength, 1);
        expect(hex(samples)).toBe(before);
      }),
      { seed: 8, numRuns: 200 },
    );
  });

  it('2 takes float samples as whole numbers of their width', () => {
    const samples = Float64Array.of(1.5, -2.25, Number.NaN, 1e300);
    const bits = new BigUint64Array(samples.slice().buffer);
    for (let i = 3; i > 0; i--) bits[i] -= bits[i - 1];
    const coded = new Float64Array(bits.buffer);
    undoDifference(coded, 4, 1);
    expect(hex(coded)).toBe(hex(samples));
  });

  it('3 comes back, bit for bit', () => {
    fc.assert(
      fc.property(fc.integer({ min: 1, max: 9 }), fc.float32Array({ maxLength: 80 }), (rowLength, all) => {
        const samples = all.slice(0, all.length - (all.length % rowLength));
        const bytes = undoFloatPredictor(floatPredictor(samples, rowLength), rowLength, 4, 1);
        expect(hex(bytes)).toBe(hex(samples));
      }),
      { seed: 9, numRuns: 200 },
    );
  });
});

const bytes = fc.oneof(
  fc.uint8Array({ maxLength: 300 }),
  // Long runs and few letters: strings of many bytes, and the code that stands for itself.
  fc.array(fc.constantFrom(0, 0, 0, 1), { maxLength: 2000 }).map((list) => Uint8Array.from(list)),
);

describe('decoders against plain encoders', () => {
  it('LZW', () => {
    fc.assert(
      fc.property(bytes, (plain) => {
        expect(decodeLzw(encodeLzw(plain), plain.length)).toEqual(plain);
      }),
      { seed: 10, numRuns: 200 },
    );
  });

  it('LZW over every width of code and a full table', () => {
    const plain = Uint8Array.from({ length: 60_000 }, (_, i) => Math.imul(i, 2654435761) >>> 24);
    expect(decodeLzw(encodeLzw(plain), plain.length)).toEqual(plain);
  });

  it('PackBits', () => {
    fc.assert(
      fc.property(bytes, (plain) => {
        expect(unpackBits(packBits(plain), plain.length)).toEqual(plain);
      }),
      { seed: 11, numRuns: 200 },
    );
  });

  it('give what there is when the input ends early, and never more than asked for', () => {
    const plain = Uint8Array.from({ length: 500 }, (_, i) => i % 7);
    for (const [decode, coded] of [
      [decodeLzw, encodeLzw(plain)],
      [unpackBits, packBits(plain)],
    ] as const) {
      const part = decode(coded.subarray(0, coded.length >> 1), 500);
      expect(part.length).toBeLessThan(500);
      expect(part).toEqual(plain.subarray(0, part.length));
      expect(decode(coded, 123)).toEqual(plain.subarray(0, 123));
      expect(decode(new Uint8Array(0), 10)).toHaveLength(0);
    }
  });

  it('LZW refuses a code that was not made yet', () => {
    // 9-bit codes: clear, 65, 300.
    const coded = Uint8Array.of(0b10000000, 0b00010000, 0b01100101, 0b10000000);
    expect(() => decodeLzw(coded, 10)).toThrow(/code 300/);
  });

  it('any bytes decode or are refused: no endless loop, nothing beyond the length', () => {
    fc.assert(
      fc.property(fc.uint8Array({ maxLength: 400 }), (coded) => {
        expect(unpackBits(coded, 200).length).toBeLessThanOrEqual(200);
        try {
          expect(decodeLzw(coded, 200).length).toBeLessThanOrEqual(200);
        } catch (error) {
          expect((error as Error).message).toMatch(/LZW code/);
        }
      }),
      { seed: 12, numRuns: 500 },
    );
  });
});
