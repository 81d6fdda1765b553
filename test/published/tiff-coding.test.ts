import { describe, expect, it } from 'vitest';
import { decodeLzw } from '../../shared/raster/lzw.ts';
import { unpackBits } from '../../shared/raster/pack-bits.ts';
import { undoDifference } from '../../shared/raster/predictor.ts';

/** Codes of a fixed width as bytes, most significant bit first. */
function packed(codes: readonly number[], width: number): Uint8Array {
  const bits = codes.map((code) => code.toString(2).padStart(width, '0')).join('');
  return Uint8Array.from(bits.match(/.{1,8}/g) ?? [], (eight) => Number.parseInt(eight.padEnd(8, '0'), 2));
}

describe('LZW (TIFF 6.0, section 13)', () => {
  it('decodes the example of the text: 7 7 7 8 8 7 7 6 6', () => {
    // "The string of codes": clear, 7, 258, 8, 8, 258, 6, 6, end.
    const codes = packed([256, 7, 258, 8, 8, 258, 6, 6, 257], 9);
    expect(Array.from(decodeLzw(codes, 9))).toEqual([7, 7, 7, 8, 8, 7, 7, 6, 6]);
  });
});

describe('PackBits (TIFF 6.0, section 9)', () => {
  it('decodes the example of Apple Technical Note TN1023', () => {
    const coded = Buffer.from('FEAA0280002AFDAA0380002A22F7AA', 'hex');
    const plain = Buffer.from('AAAAAA80002AAAAAAAAA80002A22AAAAAAAAAAAAAAAAAAAA', 'hex');
    expect(Buffer.from(unpackBits(coded, plain.length)).toString('hex')).toBe(plain.toString('hex'));
  });

  it('takes -128 as no operation, as the section says', () => {
    expect(Array.from(unpackBits(Uint8Array.of(0x80, 0x00, 5, 0x80, 0xff, 6), 3))).toEqual([5, 6, 6]);
  });
});

describe('horizontal differencing (TIFF 6.0, section 14)', () => {
  it('adds each sample to the same component of the pixel before, row by row, modulo the sample width', () => {
    const grey = Uint8Array.of(10, 246, 1, 5, 0, 255);
    undoDifference(grey, 3, 1);
    expect(Array.from(grey)).toEqual([10, 0, 1, 5, 5, 4]);
    const rgb = Uint16Array.of(1, 2, 3, 10, 20, 65535);
    undoDifference(rgb, 6, 3);
    expect(Array.from(rgb)).toEqual([1, 2, 3, 11, 22, 2]);
  });
});
