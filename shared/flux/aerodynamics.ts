import { AIR_HEAT, BLENDING_HEIGHT, GRAVITY, LOWER_HEIGHT, UPPER_HEIGHT, VON_KARMAN } from './constants.ts';

/**
 * Stability corrections of Paulson 1970 (J. Appl. Meteorol. 9:857) with the Businger-Dyer gamma 16, unstable air.
 *
 * @param zeta z / L, negative
 */
export function psiMomentumUnstable(zeta: number): number {
  const x = (1 - 16 * zeta) ** 0.25;
  return 2 * Math.log((1 + x) / 2) + Math.log((1 + x * x) / 2) - 2 * Math.atan(x) + Math.PI / 2;
}

export function psiHeatUnstable(zeta: number): number {
  return 2 * Math.log((1 + Math.sqrt(1 - 16 * zeta)) / 2);
}

/** Stable air, momentum and heat: -5 z / L (Webb 1970, Q. J. R. Meteorol. Soc. 96:67). */
export function psiStable(zeta: number): number {
  return -5 * zeta;
}

/** Air density, kg m-3, from pressure (kPa) and near-surface temperature (Allen et al. 2007). */
export function airDensity(pressureKPa: number, temperatureK: number): number {
  return (1000 * pressureKPa) / (1.01 * temperatureK * 287);
}

/** ln(z2 / z1) of the two heights of the temperature difference. */
export const HEIGHT_RATIO = Math.log(UPPER_HEIGHT / LOWER_HEIGHT);

/** Largest z / L at the upper height that the stable correction follows; beyond it very stable air is cut off. */
const MOST_STABLE = 1;

/**
 * Profile terms for a given stability, written with w = -16 / L: A = ln(200 / z0m) - psi_m(200) and
 * B = ln(z2 / z1) - psi_h(z2) + psi_h(z1). Stable air takes psi_m at 2 m instead of 200 m, as METRIC does, and z/L
 * there at most 1.
 */
export function profileTerms(w: number, logRoughness: number): { a: number; b: number } {
  if (w > 0) {
    const zetaOf = (height: number) => (-w * height) / 16;
    return {
      a: logRoughness - psiMomentumUnstable(zetaOf(BLENDING_HEIGHT)),
      b: HEIGHT_RATIO - psiHeatUnstable(zetaOf(UPPER_HEIGHT)) + psiHeatUnstable(zetaOf(LOWER_HEIGHT)),
    };
  }
  const zeta = Math.min(MOST_STABLE, (-w * UPPER_HEIGHT) / 16);
  return {
    a: logRoughness - psiStable(zeta),
    b: HEIGHT_RATIO - psiStable(zeta) + psiStable((zeta * LOWER_HEIGHT) / UPPER_HEIGHT),
  };
}

/** How the air carries heat away from a pixel. */
export interface HeatTransfer {
  /** s m-1, between 0.1 and 2 m. */
  readonly resistance: number;
  /** m s-1. */
  readonly frictionVelocity: number;
  /** Obukhov length, m; infinite in neutral air. */
  readonly obukhovLength: number;
}

/**
 * Aerodynamic resistance in balance with the heat that it lets through. With H = rho cp dT / rah and
 * L = -rho cp u*^3 Ts / (k g H), density and heat capacity cancel: w = -16 / L solves
 * w = 16 g dT A(w)^2 / (Ts u200^2 B(w)). Solved by secant steps to 1e-12, whatever the start.
 *
 * @param dT near-surface temperature difference, K
 * @param wind200 m s-1, above 0
 */
export function heatTransfer(dT: number, surfaceK: number, wind200: number, roughness: number): HeatTransfer {
  const logRoughness = Math.log(BLENDING_HEIGHT / roughness);
  const drive = (16 * GRAVITY * dT) / (surfaceK * wind200 * wind200);
  const next = (w: number): number => {
    const { a, b } = profileTerms(w, logRoughness);
    return (drive * a * a) / b;
  };
  const w = fixedPoint(next, next(0));
  const { a, b } = profileTerms(w, logRoughness);
  const frictionVelocity = (VON_KARMAN * wind200) / a;
  return {
    resistance: b / (VON_KARMAN * frictionVelocity),
    frictionVelocity,
    obukhovLength: w === 0 ? Number.POSITIVE_INFINITY : -16 / w,
  };
}

/** Bounds of 1 / (F' - 1) over all stabilities: they keep a secant step sane where differences are rounding noise. */
const STEEPEST = -1.6;
const FLATTEST = -0.25;
const MOST_STEPS = 60;

/** Solves w = next(w) for a smooth, falling or nearly flat function. */
function fixedPoint(next: (w: number) => number, start: number): number {
  let w0 = start;
  let g0 = next(w0) - w0;
  let w1 = w0 + 0.5 * g0;
  for (let step = 0; step < MOST_STEPS; step++) {
    const g1 = next(w1) - w1;
    if (Math.abs(g1) <= 1e-13 * Math.abs(w1)) return w1;
    const ratio = g1 === g0 ? -0.5 : (w1 - w0) / (g1 - g0);
    const bounded = Math.min(FLATTEST, Math.max(STEEPEST, ratio));
    [w0, g0, w1] = [w1, g1, w1 - g1 * bounded];
  }
  return w1;
}

/** Sensible heat flux, W m-2, up positive. */
export function sensibleHeat(density: number, dT: number, resistance: number): number {
  return (density * AIR_HEAT * dT) / resistance;
}
