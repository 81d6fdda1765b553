import { psiHeat, psiMomentum } from './stability.ts';

const KARMAN = 0.41;
const BLENDING = 200;
const UPPER = 2;
const LOWER = 0.1;
/** Most stable air that the profiles follow: z / L at the upper height. */
const MOST_STABLE = 1;

/**
 * Resistance to heat between 0.1 and 2 m times the wind at 200 m (no unit), as a function of the drive
 * q = g dT / (T u200^2) and the logarithm of the roughness length. Density and heat capacity cancel in the Obukhov
 * length, so nothing else enters.
 */
export type ResistanceFunction = (drive: number, logRoughness: number) => number;

/** Both profile terms at an inverse Obukhov length. In stable air momentum is corrected at 2 m, as METRIC does. */
function profiles(inverseLength: number, logRoughness: number): { momentum: number; heat: number } {
  const stable = inverseLength >= 0;
  const s = stable ? Math.min(inverseLength, MOST_STABLE / UPPER) : inverseLength;
  return {
    momentum: Math.log(BLENDING) - logRoughness - psiMomentum((stable ? UPPER : BLENDING) * s),
    heat: Math.log(UPPER / LOWER) - psiHeat(UPPER * s) + psiHeat(LOWER * s),
  };
}

/** Solves 1/L = -q A(1/L)^2 / B(1/L) by bisection on full precision. */
export const exactResistance: ResistanceFunction = (drive, logRoughness) => {
  const excess = (s: number): number => {
    const { momentum, heat } = profiles(s, logRoughness);
    return s + (drive * momentum * momentum) / heat;
  };
  // In neutral profiles the right side is largest in unstable air; in stable air it is bounded by the cut-off.
  const bound = (s: number) => Math.abs(excess(s) - s);
  const [low, high] = drive > 0 ? [-bound(0), 0] : [0, Math.max(bound(0), bound(MOST_STABLE))];
  const { momentum, heat } = profiles(bisect(excess, low, high), logRoughness);
  return (momentum * heat) / (KARMAN * KARMAN);
};

/** Root of a function that is negative at `low` or 0 at an end; halved until it cannot get smaller. */
function bisect(excess: (s: number) => number, low: number, high: number): number {
  for (let step = 0; step < 200; step++) {
    const middle = (low + high) / 2;
    if (middle === low || middle === high) return middle;
    if (excess(middle) < 0) low = middle;
    else high = middle;
  }
  return (low + high) / 2;
}

/** Nodes lie evenly over asinh(drive / SCALE): dense around neutral air, where resistance changes fastest. */
const SCALE = 2e-4;
const DRIVE = { from: -6.4, step: 0.02, count: 671 };
const ROUGHNESS = { from: Math.log(0.004), step: 0.1, count: 46 };
/** Index of the node of exactly neutral air, where the resistance has a bend. */
const NEUTRAL = Math.round(-DRIVE.from / DRIVE.step);

/** The same from a table with linear interpolation, for millions of pixels: a few parts in 10 000 from the exact one. */
export function tabulateResistance(): ResistanceFunction {
  const table = new Float64Array(DRIVE.count * ROUGHNESS.count);
  for (let i = 0; i < DRIVE.count; i++) {
    const drive = SCALE * Math.sinh((i - NEUTRAL) * DRIVE.step);
    for (let j = 0; j < ROUGHNESS.count; j++) {
      table[i * ROUGHNESS.count + j] = exactResistance(drive, ROUGHNESS.from + j * ROUGHNESS.step);
    }
  }
  return (drive, logRoughness) => {
    const x = Math.abs(drive) / SCALE;
    const stretched = Math.log(x + Math.sqrt(x * x + 1));
    const p = NEUTRAL + (drive < 0 ? -stretched : stretched) / DRIVE.step;
    const q = (logRoughness - ROUGHNESS.from) / ROUGHNESS.step;
    if (!(p > 0 && q > 0 && p < DRIVE.count - 1 && q < ROUGHNESS.count - 1))
      return exactResistance(drive, logRoughness);
    const i = Math.floor(p);
    const j = Math.floor(q);
    const at = i * ROUGHNESS.count + j;
    const next = at + ROUGHNESS.count;
    const below = table[at] + (table[at + 1] - table[at]) * (q - j);
    const above = table[next] + (table[next + 1] - table[next]) * (q - j);
    return below + (above - below) * (p - i);
  };
}
