import { sunOnSlope } from '../../shared/flux/radiation.ts';
import type { SunVector } from '../../shared/flux/sun/sun-position.ts';

/** `sunOnSlope` of a sun vector, 0 when the sun is below the horizon. */
export function incidenceOnGradient(sun: SunVector, gradientEast: number, gradientNorth: number): number {
  return sun.up <= 0 ? 0 : sunOnSlope(sun.east, sun.north, sun.up, gradientEast, gradientNorth);
}

/**
 * Cosine of the incidence angle on a slope in the trigonometric form of Duffie & Beckman 1991 (Solar Engineering of
 * Thermal Processes, eq. 1.6.2), for each unit of SLOPE area. Not clipped. Angles in radians.
 *
 * @param aspect where the slope faces: 0 south, -pi/2 east, pi/2 west, pi north
 * @param hourAngle negative in the morning
 */
export function cosIncidence(
  latitude: number,
  declination: number,
  slope: number,
  aspect: number,
  hourAngle: number,
): number {
  const [sinP, cosP] = [Math.sin(latitude), Math.cos(latitude)];
  const [sinD, cosD] = [Math.sin(declination), Math.cos(declination)];
  const [sinS, cosS] = [Math.sin(slope), Math.cos(slope)];
  const [sinG, cosG] = [Math.sin(aspect), Math.cos(aspect)];
  const [sinW, cosW] = [Math.sin(hourAngle), Math.cos(hourAngle)];
  return (
    sinD * sinP * cosS -
    sinD * cosP * sinS * cosG +
    cosD * cosP * cosS * cosW +
    cosD * sinP * sinS * cosG * cosW +
    cosD * sinG * sinS * sinW
  );
}

/** Gradient (rise for each metre toward east and north) of a slope of given steepness and aspect (as above). */
export function gradientOf(slope: number, aspect: number): { east: number; north: number } {
  // A slope facing south (aspect 0) falls toward the south, so it rises toward the north.
  const steepness = Math.tan(slope);
  return { east: steepness * Math.sin(aspect), north: steepness * Math.cos(aspect) };
}
