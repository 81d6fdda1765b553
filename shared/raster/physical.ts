import type { RasterSamples } from './sample-type.ts';

/** How stored values become physical ones: stored * scale + offset, and NaN for `fill`. */
export interface ToFloat {
  readonly scale: number;
  readonly offset: number;
  readonly fill: number | null;
}

export function physicalValues(stored: RasterSamples, { scale, offset, fill }: ToFloat): Float32Array {
  const out = new Float32Array(stored.length);
  for (let i = 0; i < stored.length; i++) out[i] = stored[i] === fill ? Number.NaN : stored[i] * scale + offset;
  return out;
}
