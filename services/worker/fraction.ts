import type { PassAdjustment } from '../../shared/contract/calibration.ts';
import { DAY_QUALITY, DAY_UNUSABLE } from '../../shared/contract/quality.ts';
import type { WorkerContext } from './context.ts';

/**
 * Bounds of the published fraction. Below 0 and above 1.3 of tall reference ET lies calibration noise, not water
 * (Allen et al. 2007; common practice): the value is set to the bound, a quality bit and the report say so.
 */
export const FRACTION_BOUNDS = [0, 1.3] as const;

export interface FractionTile {
  /** Index of the pass in the plan. */
  readonly pass: number;
  /** Day fraction as the kernel left it; NaN where there is none. */
  readonly raw: Float32Array;
  /** After adjustment and clipping. */
  readonly fraction: Float32Array;
  /** Clipping and adjustment bits added. */
  readonly quality: Uint16Array;
  readonly origin: Uint8Array;
  readonly planes: Readonly<Record<string, unknown>>;
}

/** Reads a flux tile and applies the adjustment of its pass. */
export async function readFraction(
  flux: { readonly pass: number; readonly key: string; readonly adjustment: PassAdjustment },
  context: WorkerContext,
): Promise<FractionTile> {
  const { planes } = await context.planes(flux.key);
  const raw = planes.dayFraction as Float32Array;
  const quality = planes.quality as Uint16Array;
  const { gain, offset } = flux.adjustment;
  const adjusted = gain !== 1 || offset !== 0;
  const fraction = clipped(raw, gain, offset, quality);
  if (adjusted) {
    for (let i = 0; i < quality.length; i++) {
      if ((quality[i] & DAY_UNUSABLE) === 0) quality[i] |= DAY_QUALITY.adjusted;
    }
  }
  return { pass: flux.pass, raw, fraction, quality, origin: planes.origin as Uint8Array, planes };
}

/** gain * raw + offset within the bounds; sets the clipping bits when a quality plane is given. */
export function clipped(raw: Float32Array, gain: number, offset: number, quality?: Uint16Array): Float32Array {
  const [low, high] = FRACTION_BOUNDS;
  const out = new Float32Array(raw.length);
  for (let i = 0; i < raw.length; i++) {
    const value = gain * raw[i] + offset;
    out[i] = Math.min(high, Math.max(low, value));
    if (!quality) continue;
    if (value < low) quality[i] |= DAY_QUALITY.clippedLow;
    else if (value > high) quality[i] |= DAY_QUALITY.clippedHigh;
  }
  return out;
}
