import type { WorldScale } from './options.ts';
import type { Site } from './weather.ts';

/** Number of terms. */
export const TERMS = 5;

/**
 * A quantity of the weather as a function of place: c0 + c1 X + c2 Y + c3 Z + c4 Z^2, with X, Y from -1 to 1 over the
 * basin and Z in km. Temperature, vapour and wind change so little and so evenly over the basin that this follows
 * the full computation to a few parts in ten thousand.
 */
export type Surface = Float64Array;

/** Elevations that the fit goes through, m. */
const LEVELS = [100, 400, 700] as const;

export function fitSurface(scale: WorldScale, quantity: (site: Site) => number): Surface {
  const at = (u: number, v: number, elevation: number) =>
    quantity({ x: u * scale.halfWidth, y: v * scale.halfHeight, elevation });
  const [q1, q2, q3] = LEVELS.map((elevation) => at(0, 0, elevation));
  const [z1, z2, z3] = LEVELS.map((elevation) => elevation / 1000);
  // Newton's divided differences.
  const d12 = (q2 - q1) / (z2 - z1);
  const d123 = ((q3 - q2) / (z3 - z2) - d12) / (z3 - z1);
  return Float64Array.of(
    q1 - d12 * z1 + d123 * z1 * z2,
    (at(1, 0, LEVELS[0]) - at(-1, 0, LEVELS[0])) / 2,
    (at(0, 1, LEVELS[0]) - at(0, -1, LEVELS[0])) / 2,
    d12 - d123 * (z1 + z2),
    d123,
  );
}

export function surfaceAt(surface: Surface, scale: WorldScale, x: number, y: number, elevation: number): number {
  const z = elevation / 1000;
  return (
    surface[0] +
    (surface[1] * x) / scale.halfWidth +
    (surface[2] * y) / scale.halfHeight +
    surface[3] * z +
    surface[4] * z * z
  );
}
