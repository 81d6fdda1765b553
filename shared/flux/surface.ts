/** Normalised difference vegetation index. */
export function ndvi(red: number, nir: number): number {
  return (nir - red) / (nir + red);
}

/** Soil-adjusted vegetation index (Huete 1988, Remote Sens. Environ. 25:295). @param l 0.5 general, 0.1 METRIC */
export function savi(red: number, nir: number, l: number): number {
  return ((1 + l) * (nir - red)) / (l + nir + red);
}

/** Above this index the logarithm runs away: leaf area index 6. */
const SAVI_FULL = 0.687;
const LAI_FULL = 6;

/**
 * Leaf area index from SAVI, 0..6: -ln((0.69 - SAVI) / 0.59) / 0.91 (Bastiaanssen 1998; Allen et al. 2007 eq. 18).
 */
export function leafAreaIndex(saviValue: number): number {
  if (saviValue > SAVI_FULL) return LAI_FULL;
  return Math.min(LAI_FULL, Math.max(0, -Math.log((0.69 - saviValue) / 0.59) / 0.91));
}

/**
 * Broadband surface emissivity (Tasumi 2003; Allen et al. 2007): 0.95 + 0.01 LAI up to LAI 3, 0.98 above; water
 * (NDVI below 0) 0.985.
 */
export function broadbandEmissivity(lai: number, ndviValue: number): number {
  if (ndviValue < 0) return 0.985;
  return lai > 3 ? 0.98 : 0.95 + 0.01 * lai;
}

/** Smooth bare soil, m. */
const ROUGHNESS_FLOOR = 0.005;

/** Momentum roughness length, m: 0.018 LAI, at least 0.005 m (Tasumi 2003; Allen et al. 2007). */
export function roughnessLength(lai: number): number {
  return Math.max(0.018 * lai, ROUGHNESS_FLOOR);
}
