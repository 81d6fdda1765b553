import { hashGaussian } from './random.ts';
import { PIXEL, type SceneGrid } from './scene-grid.ts';

/** Shares of the noise: one part is smooth over three pixels, as thermal detectors are coarser than the grid. */
const SMOOTH_SHARE = 0.8;
const WHITE_SHARE = 0.6;
/** Standard deviation of white noise after the 1-2-1 filter in both directions: (6/16). */
const FILTERED_SD = 0.375;
/** Of the sum of both parts, which share the pixel's own hash. */
const TOTAL_SD = Math.sqrt(
  SMOOTH_SHARE ** 2 + WHITE_SHARE ** 2 + 2 * SMOOTH_SHARE * WHITE_SHARE * (0.25 / FILTERED_SD),
);

/**
 * Noise of mean 0 and standard deviation 1, correlated with the neighbours. A function of the pixel's place in its
 * UTM zone, so that two rows of a pass agree where they overlap, as one strip of scan would.
 */
export function sensorNoise(grid: SceneGrid, seed: number): Float32Array {
  const { width, height } = grid;
  const firstColumn = Math.round((grid.left + PIXEL / 2) / PIXEL);
  const firstRow = Math.round((grid.top - PIXEL / 2) / PIXEL);
  const stride = width + 2;
  const white = new Float32Array(stride * (height + 2));
  for (let row = -1, at = 0; row <= height; row++) {
    for (let column = -1; column <= width; column++, at++) {
      white[at] = hashGaussian(firstColumn + column, firstRow - row, seed);
    }
  }
  const noise = new Float32Array(width * height);
  for (let row = 0, at = 0; row < height; row++) {
    let middle = (row + 1) * stride + 1;
    for (let column = 0; column < width; column++, at++, middle++) {
      const above = middle - stride;
      const below = middle + stride;
      const corners = white[above - 1] + white[above + 1] + white[below - 1] + white[below + 1];
      const sides = white[above] + white[below] + white[middle - 1] + white[middle + 1];
      const smooth = (corners + 2 * sides + 4 * white[middle]) / 16;
      noise[at] = (SMOOTH_SHARE * (smooth / FILTERED_SD) + WHITE_SHARE * white[middle]) / TOTAL_SD;
    }
  }
  return noise;
}
