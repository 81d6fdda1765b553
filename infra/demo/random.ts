/**
 * Repeatable noise. Everything random in the demo is a pure function of a seed and a place, so the same seed gives
 * the same bytes in whatever order things are made.
 */

/** A well-mixed 32-bit hash of two whole numbers and a seed (the finaliser of MurmurHash3). */
export function hash32(x: number, y: number, seed: number): number {
  let h = Math.imul(x, 0x27d4eb2d) ^ Math.imul(y, 0x165667b1) ^ Math.imul(seed + 0x632be5ab, 0x9e3779b1);
  h = Math.imul(h ^ (h >>> 16), 0x85ebca6b);
  h = Math.imul(h ^ (h >>> 13), 0xc2b2ae35);
  return (h ^ (h >>> 16)) >>> 0;
}

/** A number from 0 (included) to 1 (excluded). */
export function hashUnit(x: number, y: number, seed: number): number {
  return hash32(x, y, seed) / 4294967296;
}

/** Nearly Gaussian noise of mean 0 and standard deviation 1: the sum of the four bytes of a hash. */
export function hashGaussian(x: number, y: number, seed: number): number {
  const h = hash32(x, y, seed);
  return ((h & 255) + ((h >>> 8) & 255) + ((h >>> 16) & 255) + (h >>> 24) - 510) / 147.8;
}

/** Quintic fade: 0 to 1 with first and second derivatives 0 at both ends. */
function fade(t: number): number {
  return t * t * t * (t * (t * 6 - 15) + 10);
}

/** Smooth noise from -1 to 1 with a wavelength of about one unit, twice differentiable. */
export function valueNoise(x: number, y: number, seed: number): number {
  const ix = Math.floor(x);
  const iy = Math.floor(y);
  const fx = fade(x - ix);
  const fy = fade(y - iy);
  const a = hashUnit(ix, iy, seed);
  const b = hashUnit(ix + 1, iy, seed);
  const c = hashUnit(ix, iy + 1, seed);
  const d = hashUnit(ix + 1, iy + 1, seed);
  const top = a + (b - a) * fx;
  return 2 * (top + (c + (d - c) * fx - top) * fy) - 1;
}

const TURN = { cos: Math.cos(0.7), sin: Math.sin(0.7) };

/** Two turned layers of smooth noise, coarse and fine: -1 to 1 without a grid that the eye could find. */
export function roughNoise(x: number, y: number, seed: number): number {
  const u = x * TURN.cos - y * TURN.sin;
  const v = x * TURN.sin + y * TURN.cos;
  return 0.7 * valueNoise(u, v, seed) + 0.3 * valueNoise(2.3 * y + 0.4 * x, 2.3 * x - 0.4 * y, seed + 1);
}

/** 0 below `from`, 1 above `to`, smooth between. */
export function smoothStep(from: number, to: number, value: number): number {
  const t = Math.min(1, Math.max(0, (value - from) / (to - from)));
  return t * t * (3 - 2 * t);
}

/** A copy of a list in an order that depends on the seed alone (Fisher and Yates). */
export function shuffled<T>(list: readonly T[], seed: number): T[] {
  const out = [...list];
  for (let i = out.length - 1; i > 0; i--) {
    const j = Math.floor(hashUnit(i, 0, seed) * (i + 1));
    [out[i], out[j]] = [out[j], out[i]];
  }
  return out;
}
