import { ZERO_CELSIUS } from './constants.ts';

/** Share of net radiation that open water takes up: turbid or shallow water (Allen et al. 2007). */
const WATER_SHARE = 0.5;

/**
 * Soil heat flux of METRIC, W m-2 (Tasumi 2003; Allen et al. 2007 eqs 26-27): Rn (0.05 + 0.18 exp(-0.521 LAI)) from
 * LAI 0.5 on, 1.80 Tc + 0.084 Rn below.
 */
export function soilHeatMetric(rn: number, lai: number, surfaceK: number, ndvi: number): number {
  if (ndvi < 0) return WATER_SHARE * rn;
  if (lai >= 0.5) return rn * (0.05 + 0.18 * Math.exp(-0.521 * lai));
  return 1.8 * (surfaceK - ZERO_CELSIUS) + 0.084 * rn;
}

/** Soil heat flux of SEBAL, W m-2 (Bastiaanssen 2000, J. Hydrol. 229:87): Rn Tc (0.0038 + 0.0074 a)(1 - 0.98 NDVI^4). */
export function soilHeatSebal(rn: number, albedo: number, surfaceK: number, ndvi: number): number {
  if (ndvi < 0) return WATER_SHARE * rn;
  return rn * (surfaceK - ZERO_CELSIUS) * (0.0038 + 0.0074 * albedo) * (1 - 0.98 * ndvi ** 4);
}
