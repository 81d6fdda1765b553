import { slopeDayFactor, sunOnSlope } from '../radiation.ts';
import { soilHeatMetric } from '../soil-heat.ts';
import { type Method, vaporisationHeat } from './method.ts';
import { singleSourceSurface } from './single-source.ts';

/** METRIC (Allen, Tasumi & Trezza 2007, J. Irrig. Drain. Eng. 133:380-394). */
export const metric: Method = {
  name: 'metric',
  needs: [
    'red',
    'nir',
    'albedo',
    'lst',
    'wind200',
    'vapourPressure',
    'airTemperatureDatum',
    'referenceInst',
    'referenceDay',
  ],

  surface: (inputs, parameters) =>
    singleSourceSurface(inputs, parameters, {
      saviL: 0.1,
      soilHeat: ({ lst }, rn, lai, ndvi) => soilHeatMetric(rn, lai, lst, ndvi),
      mountains: true,
    }),

  /** Both anchors evaporate a known fraction of tall reference ET. */
  anchorLatentHeat(role, { lst, referenceInst }, _surface, { coldFraction, hotFraction }) {
    const fraction = role === 'cold' ? coldFraction : hotFraction;
    return (fraction * referenceInst * vaporisationHeat(lst)) / 3600;
  },

  /**
   * ETrF of the overpass, on slopes times Crad = (Rso inst horizontal / Rso inst pixel) (Rso day pixel / Rso day
   * horizontal).
   */
  dayFraction(inputs, _surface, latentHeat, { declination, terrain }) {
    const etInst = (3600 * latentHeat) / vaporisationHeat(inputs.lst);
    const fraction = etInst / inputs.referenceInst;
    const { slopeEast, slopeNorth, sinLatitude, cosLatitude, sunEast, sunNorth, sunUp } = inputs;
    if (!terrain || (slopeEast === 0 && slopeNorth === 0)) return fraction;
    const inst = sunOnSlope(sunEast, sunNorth, sunUp, slopeEast, slopeNorth) / sunUp;
    const day = slopeDayFactor(slopeEast, slopeNorth, sinLatitude, cosLatitude, declination);
    return (fraction * day) / inst;
  },
};
