/** What the trade derives from red and near-infrared reflectance, in METRIC's forms (Allen, Tasumi & Trezza 2007). */

export function leafAreaOf(red: number, nir: number): number {
  const adjusted = (1.1 * (nir - red)) / (0.1 + nir + red);
  if (adjusted > 0.687) return 6;
  return Math.min(6, Math.max(0, -Math.log((0.69 - adjusted) / 0.59) / 0.91));
}

export function emissivityOf(leafArea: number, openWater: boolean): number {
  if (openWater) return 0.985;
  return leafArea > 3 ? 0.98 : 0.95 + 0.01 * leafArea;
}

/** Roughness of the canopy, raised on mountain slopes above 5 degrees, m. Slopes are rise over run. */
export function roughnessOf(leafArea: number, slopeEast: number, slopeNorth: number): number {
  const canopy = Math.max(0.018 * leafArea, 0.005);
  const gradient2 = slopeEast * slopeEast + slopeNorth * slopeNorth;
  if (gradient2 < 0.0075) return canopy;
  const degrees = (Math.atan(Math.sqrt(gradient2)) * 180) / Math.PI;
  return canopy * (1 + Math.max(0, degrees - 5) / 20);
}

/** Weights of surface reflectance, blue to second shortwave infrared, in the albedo that each sensor type shows. */
export const ALBEDO = {
  /** Tasumi, Allen & Trezza 2008. */
  tm: [0.254, 0.149, 0.147, 0.311, 0.103, 0.036],
  /** Ke, Im, Park & Gong 2016. */
  oli: [0.246, 0.146, 0.191, 0.304, 0.105, 0.008],
} as const;
