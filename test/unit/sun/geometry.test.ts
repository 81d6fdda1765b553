import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import {
  daylightHours,
  extraterrestrialDaily,
  extraterrestrialInterval,
} from '../../../shared/flux/sun/fao-geometry.ts';
import { localVector, sunPosition, sunVector } from '../../../shared/flux/sun/sun-position.ts';
import { cosIncidence, gradientOf, incidenceOnGradient } from '../../support/incidence.ts';

const latitude = fc.double({ min: -1.55, max: 1.55, noNaN: true });
const longitude = fc.double({ min: -Math.PI, max: Math.PI, noNaN: true });
const angle = fc.double({ min: -Math.PI, max: Math.PI, noNaN: true });
const declination = fc.double({ min: -0.409, max: 0.409, noNaN: true });
const dayOfYear = fc.integer({ min: 1, max: 366 });
const instant = fc.integer({ min: 0, max: 2_500_000_000 });

test('sun vector and sun position are the same direction', () => {
  fc.assert(
    fc.property(latitude, longitude, instant, (phi, lambda, t) => {
      const vector = sunVector(phi, lambda, t);
      const { elevation, azimuth } = sunPosition(phi, lambda, t);
      expect(Math.hypot(vector.east, vector.north, vector.up)).toBeCloseTo(1, 12);
      expect(vector.up).toBeCloseTo(Math.sin(elevation), 9);
      expect(vector.east).toBeCloseTo(Math.cos(elevation) * Math.sin(azimuth), 7);
      expect(vector.north).toBeCloseTo(Math.cos(elevation) * Math.cos(azimuth), 7);
    }),
  );
});

test('equation of time has its known extremes', () => {
  // Common knowledge of the trade: about -14.2 min near 11 February and +16.4 min near 3 November.
  const minutes = (day: number) => sunPosition(0, 0, day * 86400).equationOfTimeMinutes;
  const year = Array.from({ length: 366 }, (_, k) => minutes(20089 + k));
  expect(Math.min(...year)).toBeCloseTo(-14.2, 0);
  expect(Math.max(...year)).toBeCloseTo(16.4, 0);
});

test('gradient form equals the trigonometric form over the cosine of the slope', () => {
  const slope = fc.double({ min: 0, max: 1.4, noNaN: true });
  fc.assert(
    fc.property(latitude, declination, angle, slope, angle, (phi, delta, hour, s, aspect) => {
      const sun = localVector(phi, delta, hour);
      const gradient = gradientOf(s, aspect);
      const expected = sun.up <= 0 ? 0 : Math.max(0, cosIncidence(phi, delta, s, aspect, hour) / Math.cos(s));
      expect(incidenceOnGradient(sun, gradient.east, gradient.north)).toBeCloseTo(expected, 9);
    }),
  );
});

describe('radiation of intervals', () => {
  test('the hours of a day add up to the day, polar day and night included', () => {
    fc.assert(
      fc.property(latitude, dayOfYear, fc.double({ min: -3, max: 3, noNaN: true }), (phi, day, shift) => {
        let sum = 0;
        for (let hour = 0; hour < 24; hour++) {
          const start = -Math.PI + shift + (hour * Math.PI) / 12;
          sum += extraterrestrialInterval(phi, day, start, start + Math.PI / 12);
        }
        expect(sum).toBeCloseTo(extraterrestrialDaily(phi, day), 9);
      }),
    );
  });

  test('midnight sun and polar night', () => {
    const north = (70 * Math.PI) / 180;
    expect(daylightHours(north, 172)).toBe(24);
    expect(daylightHours(north, 355)).toBe(0);
    expect(extraterrestrialDaily(north, 355)).toBe(0);
    expect(extraterrestrialDaily(north, 172)).toBeGreaterThan(40);
  });
});
