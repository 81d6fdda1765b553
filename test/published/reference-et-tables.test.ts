import { existsSync, readFileSync } from 'node:fs';
import { parse } from 'csv-parse/sync';
import { describe, expect, test } from 'vitest';
import { airPressure } from '../../shared/flux/radiation.ts';
import {
  clearSkyRadiation,
  radiationFromSunshine,
  radiationFromTemperatureRange,
} from '../../shared/flux/reference-et/clear-sky.ts';
import { faoNetLongwave, hargreavesReferenceEt, monthlySoilHeat } from '../../shared/flux/reference-et/fao56.ts';
import {
  meanSaturationVapourPressure,
  psychrometricConstant,
  saturationSlope,
  saturationVapourPressure,
  vapourPressureFromHumidityRange,
  vapourPressureFromMeanHumidity,
  windAtTwoMetres,
} from '../../shared/flux/reference-et/psychrometrics.ts';
import {
  daylightHours,
  extraterrestrialDaily,
  inverseSquaredDistance,
  solarDeclination,
  sunsetHourAngle,
} from '../../shared/flux/sun/fao-geometry.ts';

const RADIANS = Math.PI / 180;
const standards = (name: string) => new URL(`../../../shared/data/standards/${name}`, import.meta.url);
const rowsOf = (name: string): Record<string, string>[] =>
  existsSync(standards(name)) ? parse(readFileSync(standards(name)), { columns: true }) : [];

type Inputs = Record<string, number>;
type Check = (inputs: Inputs) => number;

/** By the quantity's name in the table; what is not here is computed by the written-out examples instead. */
const FAO: Record<string, Check> = {
  'atmospheric pressure': ({ z_m }) => airPressure(z_m),
  'psychrometric constant': ({ P_kPa }) => psychrometricConstant(P_kPa),
  'mean saturation vapour pressure': ({ tmax_C, tmin_C }) => meanSaturationVapourPressure(tmax_C, tmin_C),
  'e0(T)': ({ t_C }) => saturationVapourPressure(t_C),
  'ea from RHmax,RHmin': (i) => vapourPressureFromHumidityRange(i.tmax_C, i.tmin_C, i.RHmax, i.RHmin),
  'ea from RHmean': (i) => vapourPressureFromMeanHumidity(i.tmax_C, i.tmin_C, i.RHmean),
  'inverse relative distance dr': ({ doy }) => inverseSquaredDistance(doy),
  'solar declination': ({ doy }) => solarDeclination(doy),
  'sunset hour angle': ({ lat_deg, decl_rad }) => sunsetHourAngle(lat_deg * RADIANS, decl_rad),
  'extraterrestrial radiation Ra': ({ lat_deg, doy }) => extraterrestrialDaily(lat_deg * RADIANS, doy),
  Ra: ({ lat_deg, doy }) => extraterrestrialDaily(lat_deg * RADIANS, doy),
  'daylight hours N': ({ lat_deg, doy }) => daylightHours(lat_deg * RADIANS, doy),
  'Rs from sunshine': ({ Ra, n_h, N_h }) => radiationFromSunshine(Ra, n_h, N_h),
  'net longwave Rnl': (i) => faoNetLongwave(i.tmax_C, i.tmin_C, i.ea_kPa, i.Rs / i.Rso),
  'monthly soil heat flux (prev & next month)': ({ t_prev_C, t_next_C }) => monthlySoilHeat(t_prev_C, t_next_C),
  'wind 10 m -> 2 m': ({ uz, z_m }) => windAtTwoMetres(uz, z_m),
  u2: ({ uz, z_m }) => windAtTwoMetres(uz, z_m),
  'Rs from temperature range (Hargreaves, inland 0.16)': (i) =>
    radiationFromTemperatureRange(i.Ra, i.tmax_C, i.tmin_C, i.kRs),
  'slope of svp curve': ({ t_C }) => saturationSlope(t_C),
  Rso: ({ Ra, z_m }) => clearSkyRadiation(Ra, z_m),
  'ea from Tmin': ({ tmin_C }) => saturationVapourPressure(tmin_C),
  'ETo Hargreaves': (i) => hargreavesReferenceEt(i.tmax_C, i.tmin_C, extraterrestrialDaily(i.lat_deg * RADIANS, i.doy)),
};

// Values of FAO Irrigation and Drainage Paper 56 as open test suites quote them; each row names its suite.
const fao = rowsOf('fao56_worked_examples.csv').filter(({ quantity }) => quantity in FAO);
describe.skipIf(fao.length === 0)('FAO-56 values quoted by open test suites', () => {
  test('most rows are covered', () => {
    expect(fao.length).toBeGreaterThanOrEqual(24);
  });
  test.each(fao)('$example $quantity', ({ quantity, inputs_json, expected, tolerance }) => {
    const got = FAO[quantity](JSON.parse(inputs_json));
    expect(Math.abs(got - Number(expected))).toBeLessThanOrEqual(Number(tolerance) + 1e-12);
  });
});

// ASCE-EWRI 2005, appendix C, table C-3.
const slopes = rowsOf('asce2005_appendixC_partial.csv').filter(({ table }) => table === 'C-3');
describe.skipIf(slopes.length === 0)('ASCE-EWRI 2005 table C-3', () => {
  test.each(slopes)('$date', ({ tmean_C, delta_kPa_per_C }) => {
    // Mean temperatures are printed to 0.05 or 0.1 K, which is 0.0006 kPa/K.
    expect(Math.abs(saturationSlope(Number(tmean_C)) - Number(delta_kPa_per_C))).toBeLessThan(7e-4);
  });
});

// ASHRAE Handbook Fundamentals 2017, chapter 1, table 3, over water: the short formula of FAO-56 within its range.
const saturation = rowsOf('ashrae2017_psychrometrics.csv').filter((row) => {
  const temperature = JSON.parse(row.inputs_json).t_C;
  return row.quantity === 'saturation vapour pressure' && temperature >= 0 && temperature <= 50;
});
describe.skipIf(saturation.length === 0)('ASHRAE 2017 saturation pressure', () => {
  test.each(saturation)('$inputs_json', ({ inputs_json, expected }) => {
    const relative = (saturationVapourPressure(JSON.parse(inputs_json).t_C) * 1000) / Number(expected) - 1;
    expect(Math.abs(relative)).toBeLessThan(0.003);
  });
});
