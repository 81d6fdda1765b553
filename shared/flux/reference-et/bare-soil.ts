/** Reference ET and rain of one day. */
export interface BareSoilDay {
  /** ASCE reference ET of the tall surface, mm/d. */
  readonly referenceTallMm: number;
  readonly precipitationMm: number;
}

/** Evaporable water of the surface layer (FAO-56 table 19), mm. */
export interface SurfaceLayer {
  readonly totalEvaporableWaterMm: number;
  readonly readilyEvaporableWaterMm: number;
}

/**
 * Evaporation of bare soil on the last of the days as a fraction of tall reference ET, from the daily water balance
 * of the surface layer (Allen et al. 1998, FAO-56, eqs 71-77; its use for the hot end-member: Allen, Tasumi & Trezza
 * 2007, J. Irrig. Drain. Eng. 133:380-394). Against the tall reference the upper limit Kc,max is 1. The layer starts
 * dry. Rain is taken to fall early in its day, as the paper does, and is thus already seen by that day's fraction.
 *
 * @param days consecutive, oldest first; too short a record leaves rain before it unseen
 * @returns 0..1; 0 for no days
 */
export function bareSoilFraction(days: readonly BareSoilDay[], layer: SurfaceLayer): number {
  const { totalEvaporableWaterMm } = layer;
  let depletion = totalEvaporableWaterMm;
  let fraction = 0;
  for (const { referenceTallMm, precipitationMm } of days) {
    const wetted = Math.max(0, depletion - precipitationMm);
    fraction = evaporationReduction(wetted, layer);
    depletion = Math.min(totalEvaporableWaterMm, wetted + fraction * Math.max(0, referenceTallMm));
  }
  return fraction;
}

/** Kr of FAO-56 eq. 74: 1 while readily evaporable water lasts, then falling in a straight line to 0. */
export function evaporationReduction(depletionMm: number, layer: SurfaceLayer): number {
  const { totalEvaporableWaterMm: total, readilyEvaporableWaterMm: readily } = layer;
  if (depletionMm >= total) return 0;
  if (depletionMm <= readily) return 1;
  return (total - depletionMm) / (total - readily);
}

/**
 * Total evaporable water of a surface layer, mm (FAO-56 eq. 73).
 *
 * @param fieldCapacity m3/m3
 * @param wiltingPoint m3/m3
 * @param depthM of the layer that dries by evaporation, 0.10-0.15 m
 */
export function totalEvaporableWater(fieldCapacity: number, wiltingPoint: number, depthM: number): number {
  return 1000 * (fieldCapacity - 0.5 * wiltingPoint) * depthM;
}
