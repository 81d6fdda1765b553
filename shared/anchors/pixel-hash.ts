/**
 * A fixed pseudo-random order of the pixels of a grid, so that "a few pixels at random" means the same pixels
 * whatever the tiling, the order or the machine.
 *
 * The hash is MurmurHash3 x86 32-bit (Austin Appleby, public domain, seed 0) of the eight bytes of row and
 * column, both as little-endian 32-bit integers.
 */
const mixBlock = (hash: number, block: number): number => {
  let k = Math.imul(block, 0xcc9e2d51);
  k = (k << 15) | (k >>> 17);
  k = Math.imul(k, 0x1b873593);
  const h = hash ^ k;
  return (Math.imul((h << 13) | (h >>> 19), 5) + 0xe6546b64) | 0;
};

const BYTES = 8;

/**
 * Hash of a global pixel address, an unsigned 32-bit integer.
 *
 * Two pixels may share a hash; `comparePixels` then goes on to row and column, so the order is total.
 */
export const pixelHash = (row: number, column: number): number => {
  let h = mixBlock(mixBlock(0, row | 0), column | 0) ^ BYTES;
  h = Math.imul(h ^ (h >>> 16), 0x85ebca6b);
  h = Math.imul(h ^ (h >>> 13), 0xc2b2ae35);
  return (h ^ (h >>> 16)) >>> 0;
};

interface PixelAddress {
  readonly row: number;
  readonly column: number;
}

/** Order by hash, then row, then column: negative when `a` comes first. */
export const comparePixels = (a: PixelAddress, b: PixelAddress): number =>
  pixelHash(a.row, a.column) - pixelHash(b.row, b.column) || a.row - b.row || a.column - b.column;
