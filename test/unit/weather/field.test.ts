import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import type { StationDay, StationOverpass } from '../../../shared/contract/weather.ts';
import { dayField, overpassField } from '../../../shared/weather/field.ts';
import { GREELEY } from './make-station.ts';

const LAPSE = 0.0065;
const overpassAt = (x: number, y: number, elevationM: number, airTemperatureK: number, rest = 1) => {
  const station = { ...GREELEY, elevationM };
  const weather: StationOverpass = {
    station,
    airTemperatureK,
    vapourPressureKPa: rest,
    wind200: 4 * rest,
    referenceTallMmPerHour: 0.7 * rest,
  };
  return { x, y, weather };
};
const dayAt = (x: number, y: number, referenceTallMm: number) => {
  const day: StationDay = {
    station: GREELEY,
    date: '2025-07-01',
    referenceTallMm,
    referenceShortMm: referenceTallMm / 1.3,
    transmissivity: 0.7,
    from: 'hourly',
  };
  return { x, y, day };
};
const coordinate = fc.double({ min: -2e5, max: 2e5, noNaN: true });

describe('overpass field', () => {
  test('one station is the same everywhere, its temperature at 0 m', () => {
    const field = overpassField([overpassAt(5000, -3000, 1000, 300)], LAPSE);
    const out = new Float64Array(field.variables.length);
    field.evaluate(90_000, 12, out);
    expect(field.variables).toEqual([
      'airTemperatureDatum',
      'vapourPressure',
      'wind200',
      'stationElevation',
      'referenceInst',
    ]);
    [306.5, 1, 4, 1000, 0.7].forEach((expected, k) => {
      expect(out[k]).toBeCloseTo(expected, 9);
    });
  });

  test('stations that differ by their height only make a flat field', () => {
    const field = overpassField([overpassAt(0, 0, 0, 300), overpassAt(4e4, 1e4, 2000, 287)], LAPSE);
    const out = new Float64Array(5);
    fc.assert(
      fc.property(coordinate, coordinate, (x, y) => {
        field.evaluate(x, y, out);
        expect(out[0]).toBeCloseTo(300, 8);
      }),
    );
  });
});

describe('day field', () => {
  const stations = [dayAt(0, 0, 5), dayAt(6e4, 0, 8), dayAt(2e4, 5e4, 7)];
  const field = dayField(stations);
  const value = (x: number, y: number) => {
    const out = new Float64Array(2);
    field.evaluate(x, y, out);
    return out[0];
  };

  test('stays within the stations', () => {
    fc.assert(
      fc.property(coordinate, coordinate, (x, y) => {
        expect(value(x, y)).toBeGreaterThanOrEqual(5);
        expect(value(x, y)).toBeLessThanOrEqual(8);
      }),
    );
  });

  test('at a station it is nearly the station', () => {
    expect(value(6e4, 0)).toBeCloseTo(8, 2);
    expect(value(0, 0)).toBeCloseTo(5, 2);
  });

  test('is smooth: a 30 m step never makes a jump', () => {
    fc.assert(
      fc.property(
        fc.double({ min: -3000, max: 3000, noNaN: true }),
        fc.double({ min: -3000, max: 3000, noNaN: true }),
        (x, y) => {
          expect(Math.abs(value(x + 30, y) - value(x, y))).toBeLessThan(0.002);
          // Second difference: no cusp at the station in the origin.
          expect(Math.abs(value(x + 30, y) - 2 * value(x, y) + value(x - 30, y))).toBeLessThan(1e-4);
        },
      ),
    );
  });

  test('the order of the stations is a matter of rounding only', () => {
    const out = new Float64Array(2);
    dayField([...stations].reverse()).evaluate(12345, -6789, out);
    expect(out[0]).toBeCloseTo(value(12345, -6789), 12);
  });
});
