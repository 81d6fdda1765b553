import { airDensity, heatTransfer, sensibleHeat } from '../aerodynamics.ts';
import type { CalibrationLine, Method, PassParameters, PixelInputs, PixelOutputs } from './method.ts';

/** The whole balance of one pixel: the readable form of what the kernel does. NaN in gives NaN out. */
export function computePixel(
  method: Method,
  inputs: PixelInputs,
  line: CalibrationLine,
  parameters: PassParameters,
): PixelOutputs {
  const surface = method.surface(inputs, parameters);
  const dT = line.slope * (surface.datumTemperature - line.zeroTemperature);
  const { resistance } = heatTransfer(dT, inputs.lst, surface.wind200, surface.roughness);
  const h = sensibleHeat(airDensity(surface.pressureKPa, inputs.lst - dT), dT, resistance);
  const available = surface.netRadiation - surface.soilHeat;
  const latentHeat = available - h;
  return {
    netRadiation: surface.netRadiation,
    soilHeat: surface.soilHeat,
    sensibleHeat: h,
    latentHeat,
    evaporativeFraction: latentHeat / available,
    dayFraction: method.dayFraction(inputs, surface, latentHeat, parameters),
  };
}
