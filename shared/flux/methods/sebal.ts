import { slopeDayFactor } from '../radiation.ts';
import { soilHeatSebal } from '../soil-heat.ts';
import { type Method, vaporisationHeat } from './method.ts';
import { singleSourceSurface } from './single-source.ts';

/** Longwave loss of the day: 110 tau, W m-2 (Slob; De Bruin 1987). */
const LONGWAVE_LOSS = 110;

/**
 * SEBAL (Bastiaanssen, Menenti, Feddes & Holtslag 1998, J. Hydrol. 212-213:198-212 and 213-229), with the two-height
 * form of the resistance. On slopes the day's radiation follows the slope.
 */
export const sebal: Method = {
  name: 'sebal',
  needs: [
    'red',
    'nir',
    'albedo',
    'lst',
    'wind200',
    'vapourPressure',
    'airTemperatureDatum',
    'extraterrestrialDay',
    'transmissivityDay',
    'referenceDay',
  ],

  surface: (inputs, parameters) =>
    singleSourceSurface(inputs, parameters, {
      saviL: 0.5,
      soilHeat: ({ lst, albedo }, rn, _lai, ndvi) => soilHeatSebal(rn, albedo, lst, ndvi),
      mountains: false,
    }),

  /** The wet anchor sheds no heat to the air, the dry one evaporates nothing. */
  anchorLatentHeat: (role, _inputs, surface) => (role === 'cold' ? surface.netRadiation - surface.soilHeat : 0),

  /** Evaporative fraction of the overpass times the day's net radiation. */
  dayFraction(inputs, surface, latentHeat, { declination, terrain }) {
    const fraction = latentHeat / (surface.netRadiation - surface.soilHeat);
    const { albedo, lst, extraterrestrialDay, transmissivityDay, slopeEast, slopeNorth, sinLatitude, cosLatitude } =
      inputs;
    const slope = terrain ? slopeDayFactor(slopeEast, slopeNorth, sinLatitude, cosLatitude, declination) : 1;
    const netDay = (1 - albedo) * extraterrestrialDay * slope * transmissivityDay - LONGWAVE_LOSS * transmissivityDay;
    const etDay = (86400 * fraction * netDay) / vaporisationHeat(lst);
    return etDay / inputs.referenceDay;
  },
};
