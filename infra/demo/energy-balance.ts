import { KELVIN, STEFAN_BOLTZMANN, vaporisation } from './air.ts';
import type { ResistanceFunction } from './resistance.ts';

const AIR_HEAT = 1004;
const GRAVITY = 9.81;

/** A piece of ground under the sun: everything that its temperature depends on. */
export interface Ground {
  /** Shortwave radiation that it keeps, W m-2. */
  absorbed: number;
  /** W m-2. */
  skyLongwave: number;
  emissivity: number;
  /** Heat into the ground: a share of net radiation and an amount for each degree Celsius (W m-2). */
  soilShare: number;
  soilPerDegree: number;
  pressureKPa: number;
  wind200: number;
  logRoughness: number;
  /** Water that evaporates, mm/h. */
  evaporation: number;
  /** Added to the surface temperature to carry it to sea level, K. */
  toSeaLevel: number;
}

/**
 * The rule of this world for the air just above the ground: the difference between 0.1 and 2 m is a fixed share of
 * the difference between the ground and a reference temperature of the day, both carried to sea level.
 */
export interface AirLayer {
  readonly ratio: number;
  /** K at sea level. */
  readonly reference: number;
}

/** W m-2; net radiation and soil heat down, the others up positive. */
export interface Fluxes {
  readonly netRadiation: number;
  readonly soilHeat: number;
  readonly sensibleHeat: number;
  readonly latentHeat: number;
}

export function fluxesAt(surface: number, ground: Ground, layer: AirLayer, resistance: ResistanceFunction): Fluxes {
  const netRadiation = ground.absorbed + ground.emissivity * (ground.skyLongwave - STEFAN_BOLTZMANN * surface ** 4);
  return {
    netRadiation,
    soilHeat: soilHeat(netRadiation, surface, ground),
    sensibleHeat: sensibleHeat(surface, ground, layer, resistance),
    latentHeat: (ground.evaporation * vaporisation(surface)) / 3600,
  };
}

/**
 * How heat goes into the ground: the form of Tasumi 2003 (Allen, Tasumi & Trezza 2007, eqs 26-27); water takes up half
 * of net radiation.
 */
export function setSoil(ground: Ground, leafArea: number, openWater: boolean): void {
  const sparse = !openWater && leafArea < 0.5;
  ground.soilPerDegree = sparse ? 1.8 : 0;
  ground.soilShare = openWater ? 0.5 : sparse ? 0.084 : 0.05 + 0.18 * Math.exp(-0.521 * leafArea);
}

function soilHeat(net: number, surface: number, { soilShare, soilPerDegree }: Ground): number {
  return soilShare * net + soilPerDegree * (surface - KELVIN);
}

function sensibleHeat(surface: number, ground: Ground, layer: AirLayer, resistance: ResistanceFunction): number {
  const difference = layer.ratio * (surface + ground.toSeaLevel - layer.reference);
  const density = (1000 * ground.pressureKPa) / (1.01 * 287 * (surface - difference));
  const drive = (GRAVITY * difference) / (surface * ground.wind200 * ground.wind200);
  return (density * AIR_HEAT * difference * ground.wind200) / resistance(drive, ground.logRoughness);
}

function surplus(surface: number, ground: Ground, layer: AirLayer, resistance: ResistanceFunction): number {
  const square = surface * surface;
  const net = ground.absorbed + ground.emissivity * (ground.skyLongwave - STEFAN_BOLTZMANN * square * square);
  return (
    net -
    soilHeat(net, surface, ground) -
    sensibleHeat(surface, ground, layer, resistance) -
    (ground.evaporation * vaporisation(surface)) / 3600
  );
}

/** What the surplus falls by for each kelvin, by all ways together, as a first guess: W m-2 K-1. */
const FALL = 25;
const COLDEST = 200;
const HOTTEST = 420;

/**
 * The temperature at which the ground gives away what it receives, K: Rn - G - H - LE = 0. The surplus falls with
 * temperature, so the root is one; secant steps find it, halving makes sure.
 *
 * @param guess where to begin; the result does not depend on it beyond the tolerance
 * @param tolerance what the balance closes to, W m-2
 * @throws RangeError when no temperature of this world closes it
 */
export function balanceTemperature(
  ground: Ground,
  layer: AirLayer,
  resistance: ResistanceFunction,
  guess: number,
  tolerance = 1e-7,
): number {
  let [low, high] = [COLDEST, HOTTEST];
  let previous = guess;
  let before = surplus(previous, ground, layer, resistance);
  if (Math.abs(before) < tolerance) return previous;
  let surface = previous + before / FALL;
  for (let step = 0; step < 100; step++) {
    if (!(surface > low && surface < high)) surface = (low + high) / 2;
    const now = surplus(surface, ground, layer, resistance);
    if (Math.abs(now) < tolerance) return surface;
    if (now > 0) low = surface;
    else high = surface;
    const slope = (now - before) / (surface - previous);
    previous = surface;
    before = now;
    surface = slope < 0 ? surface - now / slope : (low + high) / 2;
  }
  throw new RangeError(`no balance between ${COLDEST} and ${HOTTEST} K`);
}
