import type { AnchorRole, MethodName } from '../contract/calibration.ts';
import { BasinloomError } from '../contract/errors.ts';
import { airDensity, heatTransfer, sensibleHeat } from './aerodynamics.ts';
import type {
  AnchorFractions,
  CalibrationLine,
  Method,
  PassParameters,
  PixelInputs,
  PixelSurface,
} from './methods/method.ts';
import { METHODS } from './methods/registry.ts';

export type AnchorInput = PixelInputs;

/** What an anchor pixel turned out to be. */
export interface SolvedAnchor {
  readonly lai: number;
  readonly netRadiation: number;
  readonly soilHeat: number;
  readonly sensibleHeat: number;
  readonly latentHeat: number;
  readonly temperatureDifference: number;
  readonly aerodynamicResistance: number;
}

export interface CalibratedLine extends CalibrationLine {
  /** 1 sigma, from the spread of the anchors of each role. */
  readonly slopeSd: number;
  readonly zeroTemperatureSd: number;
  /** In the order given: cold ones first. */
  readonly anchors: readonly SolvedAnchor[];
}

/** Hot anchors must be at least this much warmer than cold ones for a line through both to mean anything, K. */
const LEAST_CONTRAST_K = 2;

/**
 * The line dT = slope (T datum - zero) through the cold and the hot anchors. Each anchor pixel is solved for the
 * temperature difference that carries its sensible heat, with converged stability; the line goes through the means of
 * both groups.
 *
 * @throws BasinloomError PASS_CALIBRATION; it does not know the pass, the caller adds it
 */
export function calibrateLine(
  methodName: MethodName,
  cold: readonly AnchorInput[],
  hot: readonly AnchorInput[],
  options: PassParameters & AnchorFractions,
): CalibratedLine {
  const method = METHODS[methodName];
  if (cold.length === 0 || hot.length === 0) throw failure('one of the two groups of anchors is empty');
  const solved = {
    cold: cold.map((inputs) => solveAnchor(method, 'cold', inputs, options)),
    hot: hot.map((inputs) => solveAnchor(method, 'hot', inputs, options)),
  };
  const [c, h] = [groupMeans(solved.cold), groupMeans(solved.hot)];
  const contrast = h.datumTemperature - c.datumTemperature;
  if (!(contrast >= LEAST_CONTRAST_K)) {
    throw failure(`the hot anchors are only ${contrast.toFixed(2)} K warmer than the cold ones`);
  }
  const slope = (h.dT - c.dT) / contrast;
  if (!(slope > 0))
    throw failure(`the temperature difference does not grow with temperature (slope ${slope.toFixed(4)})`);
  const zeroTemperature = c.datumTemperature - c.dT / slope;
  // First-order propagation of the standard errors of the four means.
  const slopeSd = Math.hypot(h.dTSe, c.dTSe, slope * h.temperatureSe, slope * c.temperatureSe) / contrast;
  const zeroTemperatureSd = Math.hypot(c.temperatureSe, c.dTSe / slope, (c.dT * slopeSd) / slope ** 2);
  const anchors = [...solved.cold, ...solved.hot].map(({ anchor }) => anchor);
  return { slope, zeroTemperature, slopeSd, zeroTemperatureSd, anchors };
}

interface Solved {
  readonly surface: PixelSurface;
  readonly anchor: SolvedAnchor;
}

function solveAnchor(
  method: Method,
  role: AnchorRole,
  inputs: AnchorInput,
  options: PassParameters & AnchorFractions,
): Solved {
  const surface = method.surface(inputs, options);
  const latentHeat = method.anchorLatentHeat(role, inputs, surface, options);
  const wanted = surface.netRadiation - surface.soilHeat - latentHeat;
  const { dT, resistance } = temperatureDifferenceFor(wanted, inputs.lst, surface);
  return {
    surface,
    anchor: {
      lai: surface.lai,
      netRadiation: surface.netRadiation,
      soilHeat: surface.soilHeat,
      sensibleHeat: wanted,
      latentHeat,
      temperatureDifference: dT,
      aerodynamicResistance: resistance,
    },
  };
}

/** Differences beyond this are no surface under the sun, K. */
const LARGEST_DIFFERENCE_K = 40;

/** The dT that carries a given sensible heat. Heat grows with dT, so bisection always ends. */
function temperatureDifferenceFor(
  heat: number,
  surfaceK: number,
  { pressureKPa, wind200, roughness }: PixelSurface,
): { dT: number; resistance: number } {
  const heatOf = (dT: number): { h: number; resistance: number } => {
    const { resistance } = heatTransfer(dT, surfaceK, wind200, roughness);
    return { h: sensibleHeat(airDensity(pressureKPa, surfaceK - dT), dT, resistance), resistance };
  };
  if (!Number.isFinite(heat)) throw failure('an anchor has no finite energy balance');
  let [low, high] = heat >= 0 ? [0, LARGEST_DIFFERENCE_K] : [-LARGEST_DIFFERENCE_K, 0];
  if (heatOf(low).h > heat || heatOf(high).h < heat) {
    throw failure(`no temperature difference carries a sensible heat of ${heat.toFixed(1)} W m-2`);
  }
  for (let step = 0; step < 60; step++) {
    const middle = (low + high) / 2;
    if (heatOf(middle).h < heat) low = middle;
    else high = middle;
  }
  const dT = (low + high) / 2;
  return { dT, resistance: heatOf(dT).resistance };
}

function groupMeans(group: readonly Solved[]) {
  const temperatures = group.map(({ surface }) => surface.datumTemperature);
  const differences = group.map(({ anchor }) => anchor.temperatureDifference);
  const [t, d] = [meanAndError(temperatures), meanAndError(differences)];
  return { datumTemperature: t.mean, temperatureSe: t.error, dT: d.mean, dTSe: d.error };
}

function meanAndError(values: readonly number[]): { mean: number; error: number } {
  const n = values.length;
  const mean = values.reduce((sum, value) => sum + value, 0) / n;
  const variance = n > 1 ? values.reduce((sum, value) => sum + (value - mean) ** 2, 0) / (n - 1) : 0;
  return { mean, error: Math.sqrt(variance / n) };
}

function failure(detail: string): BasinloomError {
  return new BasinloomError('PASS_CALIBRATION', { detail });
}
