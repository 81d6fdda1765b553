import {
  airPressure,
  incomingLongwave,
  incomingShortwave,
  netRadiation,
  precipitableWater,
  sunOnSlope,
  transmissivity,
} from '../radiation.ts';
import { broadbandEmissivity, leafAreaIndex, ndvi, roughnessLength, savi } from '../surface.ts';
import type { PassParameters, PixelInputs, PixelSurface } from './method.ts';

/** Where the two methods of the chain differ. */
export interface SurfaceForm {
  /** L of the soil-adjusted vegetation index. */
  readonly saviL: number;
  readonly soilHeat: (inputs: PixelInputs, rn: number, lai: number, ndviValue: number) => number;
  /** METRIC corrects roughness and wind for mountains. */
  readonly mountains: boolean;
}

/** Radiation, soil heat and roughness of a pixel: the part that SEBAL and METRIC share. */
export function singleSourceSurface(inputs: PixelInputs, parameters: PassParameters, form: SurfaceForm): PixelSurface {
  const { red, nir, albedo, lst, elevation, sunUp } = inputs;
  const slopeEast = parameters.terrain ? inputs.slopeEast : 0;
  const slopeNorth = parameters.terrain ? inputs.slopeNorth : 0;
  const ndviValue = ndvi(red, nir);
  const lai = leafAreaIndex(savi(red, nir, form.saviL));
  const emissivity = broadbandEmissivity(lai, ndviValue);
  const pressureKPa = airPressure(elevation);
  const water = precipitableWater(inputs.vapourPressure, pressureKPa);
  const tau = transmissivity(pressureKPa, water, sunUp, parameters.turbidity);
  const onSlope = sunOnSlope(inputs.sunEast, inputs.sunNorth, sunUp, slopeEast, slopeNorth);
  const shortwave = incomingShortwave(onSlope, tau, parameters.inverseSquaredDistance);
  const airK = inputs.airTemperatureDatum - parameters.lapse * elevation;
  const longwave = incomingLongwave(tau, parameters.longwaveTemperature === 'air' ? airK : lst);
  const rn = netRadiation(albedo, shortwave, longwave, emissivity, lst);
  const mountain = form.mountains && parameters.terrain;
  return {
    ndvi: ndviValue,
    lai,
    emissivity,
    pressureKPa,
    shortwave,
    tau,
    netRadiation: rn,
    soilHeat: form.soilHeat(inputs, rn, lai, ndviValue),
    roughness: roughnessLength(lai) * (mountain ? mountainRoughness(slopeEast, slopeNorth) : 1),
    wind200: inputs.wind200 * (mountain ? mountainWind(elevation, inputs.stationElevation) : 1),
    datumTemperature: lst + parameters.lapse * (elevation - parameters.datumElevation),
  };
}

/** 1 + (slope in degrees - 5) / 20 on slopes over 5 degrees (METRIC, Allen et al. 2007). */
function mountainRoughness(slopeEast: number, slopeNorth: number): number {
  const degrees = (Math.atan(Math.hypot(slopeEast, slopeNorth)) * 180) / Math.PI;
  return 1 + Math.max(0, degrees - 5) / 20;
}

/** Least share of the station's wind that is left far below it; the linear form would end in still air. */
const LEAST_WIND = 0.5;

/** 1 + 0.1 (z - z_station) / 1000 (METRIC, Allen et al. 2007). */
function mountainWind(elevation: number, stationElevation: number): number {
  return Math.max(LEAST_WIND, 1 + (0.1 * (elevation - stationElevation)) / 1000);
}
