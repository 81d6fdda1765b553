import { describe, expect, test } from 'vitest';
import { airPressure } from '../../shared/flux/radiation.ts';
import {
  dailyNetRadiation,
  dailyReferenceEt,
  hourlyClearSky,
  hourlyCloudFactor,
  hourlyNetRadiation,
  hourlyReferenceEt,
} from '../../shared/flux/reference-et/asce.ts';
import { cloudFactor } from '../../shared/flux/reference-et/clear-sky.ts';
import {
  psychrometricConstant,
  saturationSlope,
  vapourPressureFromHumidity,
  vapourPressureFromHumidityRange,
  windAtTwoMetres,
} from '../../shared/flux/reference-et/psychrometrics.ts';
import {
  daylightHours,
  extraterrestrialDaily,
  solarElevation,
  solarTimeAngle,
} from '../../shared/flux/sun/fao-geometry.ts';

const RADIANS = Math.PI / 180;
const GREELEY = { latitudeRad: 40.41 * RADIANS, elevationM: 1462.4 };
const near = (got: number, expected: number, tolerance: number) =>
  expect(Math.abs(got - expected), `${got} against ${expected}`).toBeLessThanOrEqual(tolerance);

// ASCE-EWRI 2005, appendix C: Greeley, Colorado, July 2000; anemometer at 3 m.
describe('Greeley, daily', () => {
  const day = (dayOfYear: number, max: number, min: number, vapour: number, solar: number, wind: number) => ({
    ...GREELEY,
    dayOfYear,
    temperatureMaxC: max,
    temperatureMinC: min,
    vapourPressureKPa: vapour,
    solarMJ: solar,
    wind2m: windAtTwoMetres(wind, 3),
  });
  // The printed inputs are rounded; 1 July is the more sensitive day.
  test('1 July', () => {
    const weather = day(183, 32.4, 10.9, 1.27, 22.4, 1.94);
    near(dailyReferenceEt(weather, 'short'), 5.71, 0.03);
    near(dailyReferenceEt(weather, 'tall'), 7.34, 0.03);
  });
  test('2 July', () => {
    const weather = day(184, 33.6, 12.2, 1.19, 26.8, 2.14);
    near(dailyReferenceEt(weather, 'short'), 6.71, 0.02);
    near(dailyReferenceEt(weather, 'tall'), 8.68, 0.02);
    // Regression: intermediate numbers evaluated independently.
    near(extraterrestrialDaily(GREELEY.latitudeRad, 184), 41.582, 0.001);
    near(dailyNetRadiation(weather), 15.188, 0.001);
    near(weather.wind2m, 1.9708, 0.0001);
  });
  test('pressure and psychrometric constant of table C-2, slopes of table C-3', () => {
    near(airPressure(GREELEY.elevationM), 85.17, 0.005);
    near(psychrometricConstant(airPressure(GREELEY.elevationM)), 0.0566, 0.00005);
    // The printed mean temperatures are rounded to 0.05 K.
    near(saturationSlope(21.65), 0.1585, 0.0006);
    near(saturationSlope(22.9), 0.1692, 0.0006);
    near(saturationSlope(26.4), 0.2027, 0.0006);
  });
});

// Regression: the weather of FAO-56 example 18 (Uccle) through the ASCE equation for the tall surface.
test('Uccle, tall', () => {
  const latitudeRad = 50.8 * RADIANS;
  const solarMJ = (0.25 + (0.5 * 9.25) / daylightHours(latitudeRad, 187)) * extraterrestrialDaily(latitudeRad, 187);
  const weather = {
    latitudeRad,
    elevationM: 100,
    dayOfYear: 187,
    temperatureMaxC: 21.5,
    temperatureMinC: 12.3,
    vapourPressureKPa: vapourPressureFromHumidityRange(21.5, 12.3, 84, 63),
    wind2m: windAtTwoMetres(10 / 3.6, 10),
    solarMJ,
  };
  // The number to compare with was made with FAO-56's own longwave constant (Rn 13.2832).
  near(dailyReferenceEt(weather, 'tall'), 4.6065, 2e-3);
});

// Regression: eqs of ASCE-EWRI 2005 evaluated independently for one hour of day and one of night.
describe('Greeley, hourly', () => {
  const common = { ...GREELEY, dayOfYear: 183, vapourPressureKPa: 1.2 };
  const noon = {
    ...common,
    temperatureC: 30,
    solarMJ: 3.2,
    wind2m: 2,
    hourAngle: solarTimeAngle(12.5, 105, 104.78, 183),
    carriedCloudFactor: 0.5,
  };
  test('12:30', () => {
    near(hourlyClearSky(noon), 3.51223, 1e-5);
    near(solarElevation(noon.latitudeRad, 183, noon.hourAngle), 1.25115, 1e-5);
    near(hourlyCloudFactor(noon) ?? Number.NaN, 0.87999, 1e-5);
    near(hourlyNetRadiation(noon), 2.180718, 2e-6);
    near(hourlyReferenceEt(noon, 'short'), 0.724259, 1e-5);
    near(hourlyReferenceEt(noon, 'tall'), 0.861816, 1e-5);
  });
  test('02:30, with the cloud factor of the evening', () => {
    const night = {
      ...common,
      temperatureC: 16,
      solarMJ: 0,
      wind2m: 1,
      hourAngle: solarTimeAngle(2.5, 105, 104.78, 183),
      carriedCloudFactor: 0.78,
    };
    expect(hourlyCloudFactor(night)).toBeUndefined();
    near(hourlyNetRadiation(night), -0.207827, 1e-6);
    near(hourlyReferenceEt(night, 'short'), -0.001939, 1e-6);
    near(hourlyReferenceEt(night, 'tall'), 0.000443, 1e-6);
  });
  test('the grass of the ASCE hour evaporates more than that of FAO-56 by day', () => {
    const hour = {
      latitudeRad: 16.2167 * RADIANS,
      elevationM: 8,
      dayOfYear: 274,
      temperatureC: 38,
      vapourPressureKPa: vapourPressureFromHumidity(38, 52),
      wind2m: 3.3,
      solarMJ: 2.45,
      hourAngle: solarTimeAngle(14.5, 15, 16.25, 274),
      carriedCloudFactor: cloudFactor(0.8),
    };
    near(hourlyReferenceEt(hour, 'short'), 0.656, 5e-4);
  });
});
