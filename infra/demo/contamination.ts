import { STEFAN_BOLTZMANN, vaporisation } from './air.ts';
import type { CalibrationError } from './options.ts';
import type { Overpass } from './overpass.ts';
import { PASSES, type Pass } from './passes.ts';
import { smoothStep } from './random.ts';
import type { ResistanceFunction } from './resistance.ts';

/**
 * A wrong calibration, made on purpose. In one pass the land that a contextual method calibrates itself on (the
 * densest canopies and the barest soil) looks warmer than it is. Its anchors then lie too high, and everything
 * between them seems to evaporate more than it does, by nearly the same fraction.
 */
export function contaminationOf(
  error: CalibrationError | undefined,
  { pass, reference, layer, wind200 }: Overpass,
  resistance: ResistanceFunction,
): number {
  if (!error || passOf(error.pass) !== pass) return 0;
  if (error.kelvin !== undefined) return error.kelvin;
  // What each kelvin carries away from half-covered land by air (the warmer, the easier) and by radiation.
  const wind = wind200[0];
  const heatOf = (difference: number) =>
    (1.12 * 1004 * difference * wind) / resistance((9.81 * difference) / (305 * wind * wind), Math.log(0.02));
  const byAir = (heatOf(3) - heatOf(2)) * layer.ratio;
  const byRadiation = 4 * 0.96 * STEFAN_BOLTZMANN * 305 ** 3;
  const latent = (reference[0] * vaporisation(305)) / 3600;
  return ((error.fraction ?? 0.12) * latent) / (byAir + byRadiation);
}

/** @throws RangeError when there is no such pass */
export function passOf(wanted: string | number): Pass {
  const found = typeof wanted === 'number' ? PASSES[wanted] : PASSES.find(({ date }) => date === wanted);
  if (!found) {
    throw new RangeError(
      `no pass "${wanted}"; there are ${PASSES.length}: ${PASSES.map(({ date }) => date).join(', ')}`,
    );
  }
  return found;
}

/** How much a pixel looks like an anchor, 0..1. @param cover share under green canopy; @param field weight of a field */
export function anchorLikeness(cover: number, field: number): number {
  const dense = smoothStep(0.9, 0.97, cover);
  const bare = 1 - smoothStep(0.02, 0.08, cover);
  return field * Math.max(dense, bare);
}
