import { describe, expect, test } from 'vitest';
import { inverseSquaredDistance, solarDeclination } from '../../shared/flux/sun/fao-geometry.ts';
import { localVector } from '../../shared/flux/sun/sun-position.ts';
import { cosIncidence } from '../support/incidence.ts';

const RADIANS = Math.PI / 180;
const SOUTH = 0;
const EAST = -Math.PI / 2;
const WEST = Math.PI / 2;
const NORTH = Math.PI;

// Duffie & Beckman 1991, Solar Engineering of Thermal Processes.
describe('Duffie & Beckman', () => {
  test('example 1.6.1: incidence at Madison, 13 February, 10:30', () => {
    const cosine = cosIncidence(43 * RADIANS, -14 * RADIANS, 45 * RADIANS, 15 * RADIANS, -22.5 * RADIANS);
    expect(cosine).toBeCloseTo(0.817, 3);
    // The printed angle of 35.0 is rounded more than its own cosine.
    expect(Math.abs(Math.acos(cosine) / RADIANS - 35)).toBeLessThan(0.25);
  });

  test('example 1.6.2a: zenith and azimuth, 13 February, 9:30', () => {
    const sun = localVector(43 * RADIANS, -14 * RADIANS, -37.5 * RADIANS);
    expect(Math.acos(sun.up) / RADIANS).toBeCloseTo(66.5, 0);
    expect(Math.abs(Math.acos(sun.up) / RADIANS - 66.5)).toBeLessThan(0.1);
    // From south, east negative.
    expect(Math.abs(Math.atan2(-sun.east, -sun.north) / RADIANS - -40)).toBeLessThan(0.1);
  });
});

// Regression: eq. 1.6.2 evaluated independently; slope 20 degrees, 42.5 N, day 190, 10:30.
test.each([
  ['flat', 0, 0, 0.8866814],
  ['south', 20, SOUTH, 0.9349367],
  ['southeast', 20, -Math.PI / 4, 0.9907584],
  ['east', 20, EAST, 0.9542892],
  ['west', 20, WEST, 0.7121268],
  ['north', 20, NORTH, 0.7314792],
])('facing %s', (_, slope, aspect, expected) => {
  expect(cosIncidence(42.5 * RADIANS, solarDeclination(190), slope * RADIANS, aspect, -22.5 * RADIANS)).toBeCloseTo(
    expected,
    6,
  );
});

/** Extraterrestrial radiation of a day on a slope for each unit of slope area, MJ m-2, as a sum over hour angles. */
function dailyOnSlope(latitudeDeg: number, day: number, slopeDeg: number, aspect: number): number {
  const steps = 20000;
  const declination = solarDeclination(day);
  let sum = 0;
  for (let k = 0; k < steps; k++) {
    const hourAngle = -Math.PI + ((k + 0.5) * 2 * Math.PI) / steps;
    if (localVector(latitudeDeg * RADIANS, declination, hourAngle).up <= 0) continue;
    sum += Math.max(0, cosIncidence(latitudeDeg * RADIANS, declination, slopeDeg * RADIANS, aspect, hourAngle));
  }
  return (0.082 * 1440 * inverseSquaredDistance(day) * sum) / steps;
}

// Regression: numerical integral of the same geometry, independent of this code.
test.each([
  [172, 39.515, 40.693, 40.693, 39.877, 41.873],
  [81, 35.56, 28.735, 28.735, 18.993, 29.027],
  [355, 24.842, 13.845, 13.845, 2.116, 13.519],
])('daily radiation on slopes of 20 degrees at 40 N, day %d', (day, south, east, west, north, level) => {
  const got = [SOUTH, EAST, WEST, NORTH].map((aspect) => dailyOnSlope(40, day, 20, aspect));
  [south, east, west, north].forEach((expected, k) => {
    expect(Math.abs(got[k] - expected)).toBeLessThan(0.01);
  });
  expect(Math.abs(dailyOnSlope(40, day, 0, 0) - level)).toBeLessThan(0.01);
});

// Common knowledge of the trade, no source: at the equinox a slope facing the equator is a level plane elsewhere.
test('a 30 degree south slope at 40 N is level land at 10 N', () => {
  expect(Math.abs(dailyOnSlope(40, 81, 30, SOUTH) - dailyOnSlope(10, 81, 0, SOUTH))).toBeLessThan(1e-3);
});
