import type { MethodName } from '../../contract/calibration.ts';
import type { InputPlane, PixelInputs, PixelOutputs } from '../planes.ts';

/** What holds for a whole pass. */
export interface PassParameters {
  /** Elevation to which surface temperatures are carried, m. */
  readonly datumElevation: number;
  /** K m-1. */
  readonly lapse: number;
  /** Kt of the clear-sky transmissivity, 0.5..1. */
  readonly turbidity: number;
  /** Temperature in the downwelling longwave term. */
  readonly longwaveTemperature: 'air' | 'surface';
  /** 1 / d^2, d the distance to the sun in AU. */
  readonly inverseSquaredDistance: number;
  /** Declination of the sun, rad. */
  readonly declination: number;
  /** False: the land is flat, and all that slopes do is left out. */
  readonly terrain: boolean;
}

/** dT = slope * (datum temperature - zeroTemperature). */
export interface CalibrationLine {
  readonly slope: number;
  readonly zeroTemperature: number;
}

/** Everything of the balance that does not depend on the calibration. */
export interface PixelSurface {
  readonly ndvi: number;
  readonly lai: number;
  readonly emissivity: number;
  readonly pressureKPa: number;
  /** W m-2 of horizontal area. */
  readonly shortwave: number;
  readonly tau: number;
  readonly netRadiation: number;
  readonly soilHeat: number;
  /** m. */
  readonly roughness: number;
  /** m s-1, after the correction for elevation. */
  readonly wind200: number;
  /** K. */
  readonly datumTemperature: number;
}

/**
 * An energy balance method: the readable scalar form, in double precision, of what the kernel computes. It is the
 * reference that the kernel is held to, and what anchors are solved with.
 */
export interface Method {
  readonly name: MethodName;
  /** Input planes that the method cannot do without. */
  readonly needs: readonly InputPlane[];
  surface(inputs: PixelInputs, parameters: PassParameters): PixelSurface;
  /** Latent heat, W m-2, that an anchor has by definition. */
  anchorLatentHeat(
    role: 'hot' | 'cold',
    inputs: PixelInputs,
    surface: PixelSurface,
    fractions: AnchorFractions,
  ): number;
  /** ET of the day over tall reference ET of the day. */
  dayFraction(inputs: PixelInputs, surface: PixelSurface, latentHeat: number, parameters: PassParameters): number;
}

/** ETrF at the anchors. */
export interface AnchorFractions {
  readonly coldFraction: number;
  readonly hotFraction: number;
}

/** Latent heat of vaporisation, J kg-1 (Allen et al. 2007): (2.501 - 0.00236 Tc) 1e6. */
export function vaporisationHeat(surfaceK: number): number {
  return (2.501 - 0.00236 * (surfaceK - 273.15)) * 1e6;
}

export type { PixelInputs, PixelOutputs };
