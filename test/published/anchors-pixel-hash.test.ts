import { describe, expect, it } from 'vitest';
import { pixelHash } from '../../shared/anchors/summary.ts';

/**
 * Outside check: the published test vectors of MurmurHash3 x86 32-bit, seed 0, for the eight bytes
 * 00 11 22 33 44 55 66 77 (the public vectors of the Bitcoin reference client), read as two little-endian integers.
 */
describe('pixel hash', () => {
  it('is MurmurHash3 of row and column', () => {
    expect(pixelHash(0x33221100, 0x77665544)).toBe(0x8034d2a0);
  });

  it('spreads neighbouring pixels evenly', () => {
    // common practice, no source: chi-square of 16 classes over 256 x 256 neighbours, 15 degrees of freedom
    const classes = new Array<number>(16).fill(0);
    for (let row = 0; row < 256; row += 1) {
      for (let column = 0; column < 256; column += 1) classes[pixelHash(row, column) >>> 28] += 1;
    }
    const expected = 4096;
    const chiSquare = classes.reduce((sum, count) => sum + (count - expected) ** 2 / expected, 0);
    expect(chiSquare).toBeLessThan(37.7); // 99.9 %
  });
});
