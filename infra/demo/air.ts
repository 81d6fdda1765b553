/** Air and radiation of the clear sky, from the published forms; SI units but where the name says otherwise. */

export const SOLAR_CONSTANT = 1367;
export const STEFAN_BOLTZMANN = 5.67e-8;
export const KELVIN = 273.15;
/** Fall of the air temperature with height, K/m. */
export const LAPSE = 0.0065;

/** Tetens, kPa (FAO-56 eq. 11). */
export function saturationVapour(celsius: number): number {
  return 0.6108 * Math.exp((17.27 * celsius) / (celsius + 237.3));
}

/** kPa (FAO-56 eq. 7). */
export function pressureAt(elevation: number): number {
  return 101.3 * (1 - (0.0065 * elevation) / 293) ** 5.26;
}

/**
 * Clear-sky transmissivity as the sum of beam and diffuse parts (ASCE-EWRI 2005, appendix D, eqs D.1 to D.6; clean
 * air). Zero when the sun is down.
 */
export function clearSky(pressureKPa: number, vapourKPa: number, cosine: number): number {
  if (cosine <= 0.01) return 0;
  const water = 0.14 * vapourKPa * pressureKPa + 2.1;
  const beam = 0.98 * Math.exp((-0.00146 * pressureKPa) / cosine - 0.075 * (water / cosine) ** 0.4);
  const diffuse = beam >= 0.15 ? 0.35 - 0.36 * beam : 0.18 + 0.82 * beam;
  return beam + diffuse;
}

/** Downwelling longwave radiation of a clear sky (Allen 2000 data, in METRIC: 0.85 (-ln tau)^0.09), W m-2. */
export function skyLongwave(tau: number, airKelvin: number): number {
  return 0.85 * (-Math.log(tau)) ** 0.09 * STEFAN_BOLTZMANN * airKelvin ** 4;
}

/** Latent heat of vaporisation, J/kg. */
export function vaporisation(surfaceKelvin: number): number {
  return 2.501e6 - 2360 * (surfaceKelvin - KELVIN);
}

/** Wind over short grass by the logarithmic law: roughness of the ground around the masts, m. */
export const MAST_ROUGHNESS = 0.03;

export function windAtHeight(wind200: number, height: number): number {
  return (wind200 * Math.log(height / MAST_ROUGHNESS)) / Math.log(200 / MAST_ROUGHNESS);
}
